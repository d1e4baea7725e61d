from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import replace
from xml.etree import ElementTree

import pytest
from pwmlint.lint.report import Gate
from pwmlint.lint.verdict import Level, Outcome, Review
from xmlschema import XMLSchema

Written = Callable[..., str]


def case(text: str, rule: str) -> ElementTree.Element:
    return next(one for one in ElementTree.fromstring(text).iter("testcase") if one.get("classname") == rule)


def test_both_editions_of_the_schema_take_it(
    written: Written, junit_schemas: Sequence[XMLSchema], accepted: Review, faulty: Review, sound: Review
) -> None:
    assert len(junit_schemas) == 2
    for reviews in ((accepted, faulty, sound), ()):
        for schema in junit_schemas:
            schema.validate(written("junit", *reviews))


def test_the_schemas_refuse(junit_schemas: Sequence[XMLSchema]) -> None:
    for schema in junit_schemas:
        assert not schema.is_valid("<testsuites><testsuite/></testsuites>")


def test_one_suite_a_netlist_and_one_case_a_verdict(written: Written, faulty: Review, sound: Review) -> None:
    root = ElementTree.fromstring(written("junit", faulty, sound))
    suites = root.findall("testsuite")
    assert [suite.get("name") for suite in suites] == [faulty.netlist, sound.netlist]
    for suite, review in zip(suites, (faulty, sound), strict=True):
        cases = suite.findall("testcase")
        assert [one.get("classname") for one in cases] == [verdict.rule for verdict in review.verdicts]
        assert int(suite.get("tests", "")) == len(cases)
        assert int(suite.get("failures", "")) == len(suite.findall("testcase/failure"))
        assert int(suite.get("skipped", "")) == len(suite.findall("testcase/skipped"))
    assert root.get("tests") == str(len(faulty.verdicts) + len(sound.verdicts))
    properties = {one.get("name"): one.get("value") for one in suites[0].iter("property")}
    assert properties == {
        "title": "orchard frost-fan drive, revision B",
        "format": "SPICE list",
        "brief": "orchard/frost-fan-b.brief.toml",
        "gate": "error",
        "answer": "not passed",
    }


def test_a_failure(written: Written, faulty: Review) -> None:
    (failure,) = case(written("junit", faulty), "reference.load")
    assert failure.tag == "failure"
    assert failure.get("type") == "error"
    assert failure.get("message") == (
        "The reference pin delivers 11.4 mA (10.8 mA .. 12.1 mA); it can deliver 10.0 mA."
    )
    lines = (failure.text or "").splitlines()
    assert lines[0] == failure.get("message")
    assert "margin: -21 %" in lines
    assert "remedy: Raise R4 and R5 to 1.50 kΩ each (E24): 9.35 mA at most." in lines


@pytest.mark.parametrize(
    ("rule", "message"),
    [
        ("dead-time.range", "warning: The dead-time pin travels"),
        ("connections.pin-open", "review: Pin 16 (2IN+)"),
        ("dead-time.minimum", "open: Is the least dead time"),
        ("output-mode.outputs-used", "not applicable: The outputs are joined."),
    ],
)
def test_what_does_not_stop_the_gate_is_skipped(
    written: Written, faulty: Review, rule: str, message: str
) -> None:
    (skipped,) = case(written("junit", faulty), rule)
    assert skipped.tag == "skipped"
    assert (skipped.get("message") or "").startswith(message)


def test_what_passes_tells_its_figures(written: Written, faulty: Review) -> None:
    for rule in ("reference.bypass", "oscillator.frequency"):
        (told,) = case(written("junit", faulty), rule)
        assert told.tag == "system-out"
        assert "source: " in (told.text or "")


@pytest.mark.parametrize(
    "gate",
    [Gate(), Gate(Level.WARNING), Gate(Level.NOTE, strict=True), Gate(None, strict=True)],
    ids=str,
)
def test_the_table_fails_where_the_gate_does(
    written: Written, gate: Gate, faulty: Review, accepted: Review, sound: Review
) -> None:
    for review in (faulty, accepted, sound):
        root = ElementTree.fromstring(written("junit", review, gate=gate))
        assert (root.get("failures") == "0") == gate.passes(review)


def test_strict_fails_what_is_open(written: Written, faulty: Review) -> None:
    (failure,) = case(written("junit", faulty, gate=Gate(strict=True)), "dead-time.minimum")
    assert (failure.tag, failure.get("type")) == ("failure", "open")


def test_what_is_accepted_is_skipped_with_its_reason(written: Written, accepted: Review) -> None:
    (skipped,) = case(written("junit", accepted), "feedback.output-voltage")
    assert skipped.tag == "skipped"
    assert skipped.get("message") == (
        "error, accepted by the pressing hall's electrician, until 2031-09-30: "
        "RV1 is chosen on the bench, unit by unit"
    )


def test_no_two_cases_share_a_name(written: Written, cider_press: Review) -> None:
    cases = ElementTree.fromstring(written("junit", cider_press)).findall(".//testcase")
    names = [(one.get("classname"), one.get("name")) for one in cases]
    assert len(set(names)) == len(names)


def test_ascii_and_no_forbidden_character(written: Written, sound: Review) -> None:
    verdict = replace(sound.verdicts[0], outcome=Outcome.REVIEW, message="\x00\x0b\ufffe ]]> µ")
    text = written("junit", replace(sound, verdicts=(verdict,)))
    assert text.isascii()
    (skipped,) = case(text, verdict.rule)
    assert skipped.get("message") == r"review: \x00\x0b\ufffe ]]> µ"
    assert (skipped.text or "").startswith(r"\x00\x0b\ufffe ]]> µ")
