"""No report is silent of a rule that was not asked, nor of the gate that a netlist is held to."""

from __future__ import annotations

import json
from collections.abc import Callable, Sequence
from dataclasses import replace
from typing import Any
from xml.etree import ElementTree

import pytest
from pwmlint.grammar.netlist import Place
from pwmlint.lint.report import FORMATS, Gate
from pwmlint.lint.verdict import Level, Review, SwitchedOff
from xmlschema import XMLSchema

Written = Callable[..., str]

OFF = (
    SwitchedOff("supply.range", Place("orchard/pwmlint.toml", 7, 16)),
    SwitchedOff("oscillator.frequency", Place("orchard/pwmlint.toml", 9, 1)),
)


@pytest.fixture
def softened(sound: Review) -> Review:
    """The hive scale under a configuration that switches two rules off."""
    return replace(sound, configuration="orchard/pwmlint.toml", switched_off=OFF)


@pytest.mark.parametrize("name", [name for name in FORMATS if name != "annotations"])
def test_rule_and_file_are_named(name: str, written: Written, sound: Review, softened: Review) -> None:
    report = written(name, softened)
    for text in ("supply.range", "oscillator.frequency", "orchard/pwmlint.toml"):
        assert text in report
    assert "pwmlint.toml" not in written(name, sound)


def test_lines_of_the_text_report(written: Written, softened: Review) -> None:
    report = written("text", softened)
    assert "  1 switched off by orchard/pwmlint.toml:7: supply.range\n" in report
    assert "  1 switched off by orchard/pwmlint.toml:9: oscillator.frequency\n" in report


def test_lines_of_the_markdown_report(written: Written, softened: Review) -> None:
    report = written("markdown", softened)
    assert "<summary>Switched off (2)</summary>\n\n- `supply.range` by `orchard/pwmlint.toml:7`\n" in report


def test_the_count_in_the_log_of_a_server(written: Written, sound: Review, softened: Review) -> None:
    assert "; 2 rules switched off; " in written("annotations", softened)
    assert "; 2 rules switched off; " in written("annotations", softened, softened)
    assert "; 1 rule switched off; " in written("annotations", replace(softened, switched_off=OFF[:1]))
    assert "switched off" not in written("annotations", sound)


@pytest.mark.parametrize("name", ["sarif", "sarif-alerts"])
def test_notifications_of_the_log(
    name: str, written: Written, softened: Review, sarif_errors: Callable[[Any], list[str]]
) -> None:
    log = json.loads(written(name, softened))
    assert sarif_errors(log) == []
    (run,) = log["runs"]
    first, _ = run["invocations"][0]["toolConfigurationNotifications"]
    assert first["associatedRule"] == {"id": "supply.range"}
    assert first["message"]["text"] == "supply.range is switched off for orchard/hive-scale.edf"
    assert first["locations"][0]["physicalLocation"]["region"] == {"startLine": 7, "startColumn": 16}
    roles = {one["location"]["uri"]: one["roles"] for one in run["artifacts"]}
    assert roles["orchard/pwmlint.toml"] == ["userSpecifiedConfiguration"]


def test_properties_of_a_suite(
    written: Written, softened: Review, junit_schemas: Sequence[XMLSchema]
) -> None:
    report = written("junit", softened)
    for schema in junit_schemas:
        schema.validate(report)
    told = {one.get("name"): one.get("value") for one in ElementTree.fromstring(report).iter("property")}
    assert told["configuration"] == "orchard/pwmlint.toml"
    assert told["switched off"] == (
        "supply.range by orchard/pwmlint.toml:7, oscillator.frequency by orchard/pwmlint.toml:9"
    )


def test_each_netlist_has_its_own_gate(written: Written, sound: Review, faulty: Review) -> None:
    gate = Gate(own={sound.netlist: Gate(Level.NOTE), faulty.netlist: Gate(Level.ERROR, strict=True)})
    text = written("text", sound, faulty, gate=gate)
    assert "gate note: passed\n" in text
    assert "gate error, strict: not passed\n" in text
    assert text.endswith("gate of each netlist: not passed\n")
    markdown = written("markdown", sound, faulty, gate=gate)
    assert "**Gate note: passed**" in markdown
    assert "**Gate error, strict: not passed**" in markdown
    suites = ElementTree.fromstring(written("junit", sound, faulty, gate=gate)).iter("property")
    assert [one.get("value") for one in suites if one.get("name") == "gate"] == ["note", "error, strict"]
