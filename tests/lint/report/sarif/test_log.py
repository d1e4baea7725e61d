from __future__ import annotations

import json
from collections import Counter
from collections.abc import Callable, Iterable
from dataclasses import replace
from math import inf
from typing import Any

import pytest
from pwmlint.grammar.netlist import Place
from pwmlint.lint.circuit.controllers import Controller
from pwmlint.lint.design import Design
from pwmlint.lint.quantity import Spread
from pwmlint.lint.report import Gate
from pwmlint.lint.report.sarif.results import message
from pwmlint.lint.report.sarif.rules import descriptor
from pwmlint.lint.rule import load_rules, rule
from pwmlint.lint.verdict import Level, Limit, Outcome, Review, Verdict

Written = Callable[..., str]
Errors = Callable[[Any], list[str]]


def run_of(text: str) -> dict[str, Any]:
    """Return the one run of a log."""
    (run,) = json.loads(text)["runs"]
    return run


def of_rule(run: dict[str, Any], rule: str) -> dict[str, Any]:
    return next(result for result in run["results"] if result["ruleId"] == rule)


def test_logs_follow_the_published_schema(
    written: Written, sarif_errors: Errors, cider_press: Review, accepted: Review, faulty: Review
) -> None:
    for reviews in ((cider_press, accepted), (faulty,), ()):
        assert sarif_errors(json.loads(written("sarif", *reviews))) == []


def test_the_schema_is_one_that_refuses(written: Written, sarif_errors: Errors, faulty: Review) -> None:
    log = json.loads(written("sarif", faulty))
    log["runs"][0]["results"][0]["kind"] = "maybe"
    assert sarif_errors(log)


def test_what_the_schema_does_not_say(written: Written, accepted: Review, faulty: Review) -> None:
    """Only what failed has a level (3.27.10), and either every result has suppressions or none (3.27.23)."""
    run = run_of(written("sarif", accepted, faulty))
    assert {result["kind"] for result in run["results"]} == {outcome.value for outcome in Outcome}
    for result in run["results"]:
        assert (result["level"] == "none") == (result["kind"] != "fail")
        assert isinstance(result["suppressions"], list)
        assert result["message"]["text"]
    assert run["columnKind"] == "unicodeCodePoints"


def test_every_verdict_has_a_result_in_the_order_of_the_review(written: Written, faulty: Review) -> None:
    run = run_of(written("sarif", faulty))
    assert [result["ruleId"] for result in run["results"]] == [one.rule for one in faulty.verdicts]
    assert [result["kind"] for result in run["results"]] == [one.outcome for one in faulty.verdicts]


def test_a_result_in_full(written: Written, faulty: Review) -> None:
    result = of_rule(run_of(written("sarif", faulty)), "reference.load")
    assert result["level"] == "error"
    assert result["message"]["text"] == (
        "The reference pin delivers 11.4 mA (10.8 mA .. 12.1 mA); it can deliver 10.0 mA. "
        "Remedy: Raise R4 and R5 to 1.50 kΩ each (E24): 9.35 mA at most."
    )
    (location,) = result["locations"]
    assert location["physicalLocation"] == {
        "artifactLocation": {"uri": "orchard/frost-fan-b.cir", "uriBaseId": "%SRCROOT%"},
        "region": {"startLine": 21, "startColumn": 1},
    }
    assert [(one["kind"], one["name"]) for one in location["logicalLocations"]] == [
        ("part", "U1"),
        ("part", "R4"),
        ("part", "R5"),
        ("part", "RV1"),
        ("part", "R9"),
        ("net", "VREF"),
    ]
    related = [one["physicalLocation"]["region"]["startLine"] for one in result["relatedLocations"]]
    assert related == [22, 3, 31, 37]
    properties = result["properties"]
    assert properties["measured"] == {"minimum": 0.0108, "nominal": 0.0114, "maximum": 0.0121, "unit": "A"}
    assert properties["limit"] == {"minimum": None, "maximum": 0.01, "unit": "A"}
    assert properties["margin"] == pytest.approx(-0.21)
    assert properties["contributions"][0] == {"parameter": "R4", "share": 0.48}
    assert properties["assumptions"][1] == "RV1: swept from end to end."
    assert properties["formula"].startswith("I = ")


def test_what_is_missing_is_in_the_message(written: Written, faulty: Review) -> None:
    result = of_rule(run_of(written("sarif", faulty)), "dead-time.minimum")
    assert result["kind"] == "open"
    needed = 'brief: [controllers.U1] dead_time = "..."'
    assert result["message"]["text"].endswith(f" Missing: {needed}.")
    assert result["properties"]["needs"] == [needed]


def test_an_accepted_verdict_is_suppressed(written: Written, accepted: Review) -> None:
    run = run_of(written("sarif", accepted))
    suppressed = [result for result in run["results"] if result["suppressions"]]
    assert [result["ruleId"] for result in suppressed] == ["feedback.output-voltage"]
    assert suppressed[0]["kind"] == "fail"
    assert suppressed[0]["suppressions"] == [
        {
            "kind": "external",
            "status": "accepted",
            "justification": "RV1 is chosen on the bench, unit by unit",
            "location": {
                "physicalLocation": {
                    "artifactLocation": {
                        "uri": "examples/cider-press-rev-b.deviations.toml",
                        "uriBaseId": "%SRCROOT%",
                    },
                    "region": {"startLine": 4, "startColumn": 1},
                }
            },
            "properties": {
                "owner": "the pressing hall's electrician",
                "expires": "2031-09-30",
                "accepted": {"minimum": 30.5, "nominal": 30.5, "maximum": 30.5, "unit": "V"},
            },
        }
    ]
    assert [(one["location"]["uri"].rpartition("-rev-b.")[2], *one["roles"]) for one in run["artifacts"]] == [
        ("edf", "analysisTarget"),
        ("brief.toml", "userSpecifiedConfiguration"),
        ("parts.csv", "userSpecifiedConfiguration"),
        ("deviations.toml", "userSpecifiedConfiguration"),
    ]


def test_findings_are_no_failure_of_the_run(written: Written, faulty: Review, sound: Review) -> None:
    for reviews, gate, code, answer in (
        ((faulty, sound), Gate(), 1, "gate error: not passed"),
        ((sound,), Gate(Level.NOTE, strict=True), 0, "gate note, strict: passed"),
        ((faulty,), Gate(None), 0, "gate never: passed"),
    ):
        (invocation,) = run_of(written("sarif", *reviews, gate=gate))["invocations"]
        assert invocation == {
            "executionSuccessful": True,
            "exitCode": code,
            "exitCodeDescription": answer,
        }


def test_every_installed_rule_is_described(written: Written, cider_press: Review) -> None:
    run = run_of(written("sarif", cider_press))
    described = run["tool"]["driver"]["rules"]
    assert [one["id"] for one in described] == [one.id for one in load_rules()]
    assert len({one["name"] for one in described}) == len(described)
    for result in run["results"]:
        assert described[result["ruleIndex"]]["id"] == result["ruleId"]
    for one in described:
        assert one["help"]["markdown"].count("```") == 2 * 3  # formula, example that fails, one that passes


def test_a_rule_that_is_not_installed_is_named_only(written: Written, faulty: Review) -> None:
    strange = replace(faulty.verdicts[0], rule="house.rule")
    run = run_of(written("sarif", replace(faulty, verdicts=(strange,))))
    assert run["results"][0]["ruleId"] == "house.rule"
    assert "ruleIndex" not in run["results"][0]


@rule("pump.prime", level="warning", topic="irrigation")
def primed(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Is the irrigation pump primed?

    What: looks at the float.
    Formula: h = p / (rho g)
    """
    del controller, design
    return ()


@rule("pump.bare", level="note", topic="irrigation")
def bare(controller: Controller, design: Design) -> Iterable[Verdict]:
    del controller, design
    return ()


def test_the_description_of_a_rule() -> None:
    assert descriptor(primed) == {
        "id": "pump.prime",
        "name": "PumpPrime",
        "shortDescription": {"text": "Is the irrigation pump primed?"},
        "fullDescription": {"text": "looks at the float."},
        "defaultConfiguration": {"level": "warning"},
        "properties": {"tags": ["irrigation"]},
        "help": {
            "text": "What: looks at the float.\n\nFormula: h = p / (rho g)",
            "markdown": "**Is the irrigation pump primed?**\n\n### What\n\nlooks at the float.\n\n"
            "### Formula\n\n```text\nh = p / (rho g)\n```",
        },
    }
    assert descriptor(bare)["shortDescription"] == {"text": "pump.bare"}
    assert "help" not in descriptor(bare)


def test_fingerprints_tell_all_results_apart(written: Written, cider_press: Review) -> None:
    fingerprints = [verdict.fingerprint for verdict in cider_press.verdicts]
    assert max(Counter(fingerprints).values()) > 1, "the example no longer has two alike: choose another"
    results = run_of(written("sarif", cider_press))["results"]
    told = [result["partialFingerprints"] for result in results]
    assert [one["verdict/v1"] for one in told] == fingerprints
    assert len({one["verdictInstance/v1"] for one in told}) == len(told)


def test_an_instance_keeps_its_fingerprint_when_another_goes(written: Written, faulty: Review) -> None:
    """Values, lines and neighbours change; only what nothing tells apart goes by its order."""
    first = replace(faulty.verdicts[0], pins=("amplifier 1 in+",))
    second = replace(first, pins=("amplifier 2 in+",))
    twin = replace(second, message="another figure", places=(Place("orchard/frost-fan-b.cir", 9, 9),))
    together = instances(written("sarif", replace(faulty, verdicts=(first, second, twin))))
    assert len(set(together)) == 3
    assert instances(written("sarif", replace(faulty, verdicts=(twin,)))) == [together[1]]


def instances(text: str) -> list[str]:
    return [result["partialFingerprints"]["verdictInstance/v1"] for result in run_of(text)["results"]]


def test_same_reviews_same_bytes_and_nothing_of_the_machine(written: Written, cider_press: Review) -> None:
    text = written("sarif", cider_press)
    assert text == written("sarif", cider_press)
    assert text.isascii()
    for word in ("timeUtc", '"guid"', "file://", "workingDirectory", '"machine"'):
        assert word.casefold() not in text.casefold()


def test_what_has_no_bound_is_null(written: Written, sarif_errors: Errors, sound: Review) -> None:
    endless = Verdict(
        outcome=Outcome.FAIL,
        level=Level.ERROR,
        message="may never trip",
        measured=Spread(5.0, inf, inf, "A"),
        limit=Limit(6.0, 9.0, "A"),
        margin=-inf,
    )
    text = written("sarif", replace(sound, verdicts=(endless,)))
    assert sarif_errors(json.loads(text)) == []
    properties = run_of(text)["results"][0]["properties"]
    assert properties["measured"]["maximum"] is None
    assert "margin" not in properties


@pytest.mark.parametrize(
    ("name", "told"),
    [
        ("D[3]", "D[3] floats."),
        ("{0}", "{{0}} floats."),
        ("[press](http://orchard.example)", r"\[press\](http://orchard.example) floats."),
        (r"\[x](1)", r"\\\[x\](1) floats."),
        ("a\x1bb", r"a\x1bb floats."),
    ],
)
def test_a_name_is_no_link_and_no_placeholder(name: str, told: str) -> None:
    assert message(Verdict(outcome=Outcome.PASS, message=f"{name} floats")) == told
