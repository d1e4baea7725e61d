"""Netlists that could not be reviewed: every report tells of them, and none lets their names steer it."""

from __future__ import annotations

import json
from collections.abc import Callable, Sequence
from importlib.resources import files
from typing import Any
from xml.etree import ElementTree

import pytest
from jsonschema import Draft202012Validator
from pwmlint.grammar.netlist import Place
from pwmlint.lint.report import FORMATS, Gate, Unread
from pwmlint.lint.verdict import Level, Review
from xmlschema import XMLSchema

Written = Callable[..., str]

LAMP = Unread(
    "orchard/lamp.cir", "X1 has too few nodes", Place("orchard/lamp.cir", 7, 3), "add what is missing"
)
HIVES = Unread("hives", "no netlist in this folder", Place("hives", 0, 0))
HOSTILE = Unread(
    "a\n::error::PEARS\x1b[31m [L](javascript:x) {0}.cir",
    "b\r\n##[error]PLUMS <script>`|",
    Place("c\n::error::FIGS", 1, 1),
    "d\n::warning::NUTS",
)
GATE = Gate(unread=(LAMP, HIVES))


def test_no_run_with_one_passes(sound: Review) -> None:
    assert Gate(Level.ERROR).passes_all([sound])
    assert not GATE.passes_all([sound])
    assert not Gate(None, unread=(LAMP,)).passes_all([])


@pytest.mark.parametrize("name", sorted(FORMATS))
def test_each_report_names_them(name: str, written: Written, sound: Review) -> None:
    for reviews in ((sound,), ()):
        text = written(name, *reviews, gate=GATE)
        for said in ("orchard/lamp.cir", "X1 has too few nodes", "no netlist in this folder"):
            assert said in text


def test_json(written: Written, sound: Review) -> None:
    report = json.loads(written("json", sound, gate=Gate(unread=(LAMP, HOSTILE))))
    assert report["unread"][0] == {
        "netlist": "orchard/lamp.cir",
        "message": "X1 has too few nodes",
        "place": {"file": "orchard/lamp.cir", "line": 7, "column": 3},
        "remedy": "add what is missing",
    }
    assert report["unread"][1]["netlist"] == HOSTILE.netlist
    schema = json.loads((files("pwmlint.lint.report") / "review.schema.json").read_text(encoding="utf-8"))
    # The library's own stubs leave the keyword arguments of `validate` untyped.
    Draft202012Validator(schema).validate(report)  # pyright: ignore[reportUnknownMemberType]
    assert json.loads(written("json", sound))["unread"] == []


@pytest.mark.parametrize("name", ["sarif", "sarif-alerts"])
def test_sarif_tells_of_trouble(
    name: str, written: Written, sarif_errors: Callable[[Any], list[str]], sound: Review
) -> None:
    log = json.loads(written(name, sound, gate=Gate(unread=(LAMP, HIVES, HOSTILE))))
    assert sarif_errors(log) == []
    (invocation,) = log["runs"][0]["invocations"]
    assert invocation["executionSuccessful"] is False
    assert invocation["exitCode"] == 2
    assert invocation["exitCodeDescription"] == "3 netlists could not be reviewed"
    lamp, hives, hostile = invocation["toolExecutionNotifications"]
    assert lamp == {
        "level": "error",
        "message": {
            "text": "orchard/lamp.cir could not be reviewed: X1 has too few nodes; add what is missing"
        },
        "locations": [
            {
                "physicalLocation": {
                    "artifactLocation": {"uri": "orchard/lamp.cir", "uriBaseId": "%SRCROOT%"},
                    "region": {"startLine": 7, "startColumn": 3},
                }
            }
        ],
    }
    assert hives["message"]["text"] == "hives could not be reviewed: no netlist in this folder"
    assert "{{0}}" in hostile["message"]["text"]  # a placeholder no more
    assert "\n" not in hostile["message"]["text"]


def test_junit_has_a_case_for_each(
    written: Written, junit_schemas: Sequence[XMLSchema], sound: Review
) -> None:
    text = written("junit", sound, gate=Gate(unread=(LAMP, HIVES, HOSTILE)))
    for schema in junit_schemas:
        schema.validate(text)
    root = ElementTree.fromstring(text)
    assert (root.get("errors"), root.get("failures")) == ("3", "0")
    assert root.get("tests") == str(len(sound.verdicts) + 3)
    suite = root.findall("testsuite")[1]
    assert (suite.get("name"), suite.get("tests"), suite.get("errors")) == ("orchard/lamp.cir", "1", "1")
    (error,) = suite.iter("error")
    assert error.get("message") == "X1 has too few nodes"
    assert (error.text or "").splitlines() == [
        "X1 has too few nodes",
        "at: orchard/lamp.cir:7:3",
        "remedy: add what is missing",
    ]


def test_an_annotation_for_each_before_all_others(written: Written, faulty: Review) -> None:
    lines = written("annotations", faulty, gate=GATE).splitlines()
    assert lines[0] == (
        "::error file=orchard/lamp.cir,line=7,col=3,title=not reviewed::"
        "orchard/lamp.cir could not be reviewed: X1 has too few nodes%0Aremedy: add what is missing"
    )
    assert lines[-1].endswith("2 netlists could not be reviewed; gate error: not passed")


@pytest.mark.parametrize("name", ["annotations", "text", "markdown"])
def test_their_names_steer_nothing(name: str, written: Written) -> None:
    text = written(name, gate=Gate(unread=(HOSTILE,)))
    assert "\x1b" not in text
    commands = [line for line in text.splitlines() if line.lstrip().startswith(("::", "##"))]
    assert len(commands) == (name == "annotations")


def test_text_says_so_under_the_reviews(written: Written, sound: Review) -> None:
    below = written("text", sound, gate=GATE).partition("could not be reviewed")[2]
    assert [line.strip() for line in below.splitlines() if line.strip()][1:-2] == [
        "error    orchard/lamp.cir",
        "X1 has too few nodes",
        "at orchard/lamp.cir:7:3",
        "add what is missing",
        "error    hives",
        "no netlist in this folder",
    ]
    assert "1 netlist, 1 passed; 2 netlists could not be reviewed" in below


def test_markdown_says_so_first(written: Written, sound: Review) -> None:
    lines = written("markdown", sound, gate=GATE).splitlines()
    assert lines[0] == "**pwmlint: 1 netlist, 1 passed the gate (error); 2 netlists could not be reviewed**"
    assert lines[3] == "- `hives` could not be reviewed: no netlist in this folder"
