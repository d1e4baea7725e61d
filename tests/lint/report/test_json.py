from __future__ import annotations

import json
from dataclasses import replace
from importlib.metadata import version
from io import StringIO
from math import inf
from typing import Any

import pytest
from jsonschema import ValidationError
from pwmlint.grammar.netlist import Place
from pwmlint.lint.quantity import Spread
from pwmlint.lint.report import Gate, Unread, writer
from pwmlint.lint.verdict import Level, Limit, Outcome, Review, Verdict

from .json_schema import check, schema_of


@pytest.fixture(scope="module")
def schema() -> dict[str, Any]:
    return schema_of("review.schema.json")


def text_of(*reviews: Review) -> str:
    stream = StringIO()
    writer("json")(reviews, stream, Gate())
    return stream.getvalue()


def written(*reviews: Review) -> dict[str, Any]:
    loaded: dict[str, Any] = json.loads(text_of(*reviews))
    return loaded


def test_reports_follow_the_schema(
    faulty: Review, sound: Review, hostile: Review, accepted: Review, schema: dict[str, Any]
) -> None:
    for reviews in ((faulty, sound, hostile, accepted), ()):
        check(schema, written(*reviews))


def test_a_deviation_is_told_with_who_answers_for_it(accepted: Review) -> None:
    (review,) = written(accepted)["reviews"]
    told = [verdict["deviation"] for verdict in review["verdicts"] if verdict["deviation"]]
    assert review["accepted"] == len(told) == 1
    assert review["deviations"] == told[0]["place"]["file"]
    assert told[0]["expires"] == "2031-09-30"
    assert told[0]["owner"] == "the pressing hall's electrician"
    assert told[0]["accepted"] == {"minimum": 30.5, "nominal": 30.5, "maximum": 30.5, "unit": "V"}


def test_the_schema_describes_every_key_and_no_other(accepted: Review, schema: dict[str, Any]) -> None:
    stream = StringIO()
    unread = Unread("lamp.cir", "there is no such file", Place("lamp.cir", 0, 0))
    writer("json")((accepted,), stream, Gate(unread=(unread,)))
    report: dict[str, Any] = json.loads(stream.getvalue())
    review, verdict = report["reviews"][0], report["reviews"][0]["verdicts"][0]
    (deviation, *_) = [one["deviation"] for one in review["verdicts"] if one["deviation"]]
    for found, described in (
        (report, schema),
        (report["unread"][0], schema["$defs"]["unread"]),
        (review, schema["$defs"]["review"]),
        (verdict, schema["$defs"]["verdict"]),
        (deviation, schema["$defs"]["deviation"]),
        (review["controllers"][0], schema["$defs"]["controller"]),
    ):
        assert list(found) == described["required"]
        assert set(found) == set(described["properties"])


@pytest.mark.parametrize(
    "change", [{"surprise": 1}, {"outcome": "maybe"}, {"outcome": "pass", "level": "error"}]
)
def test_the_schema_refuses_what_the_contract_does_not_hold(
    faulty: Review, schema: dict[str, Any], change: dict[str, Any]
) -> None:
    report = written(faulty)
    report["reviews"][0]["verdicts"][0] |= change
    with pytest.raises(ValidationError):
        check(schema, report)


def test_the_contract(faulty: Review) -> None:
    report = written(faulty)
    assert report["schema"] == 1
    assert report["tool"] == {"name": "pwmlint", "version": version("pwmlint")}
    review = report["reviews"][0]
    assert review["netlist"] == "orchard/frost-fan-b.cir"
    assert review["controllers"][0]["part"] == "U1"
    assert review["controllers"][0]["family"] == "494"
    assert review["counts"] == {
        "pass": 7,
        "fail": 3,
        "review": 1,
        "open": 4,
        "notApplicable": 1,
        "informational": 1,
    }
    load = next(verdict for verdict in review["verdicts"] if verdict["rule"] == "reference.load")
    assert load["outcome"] == "fail"
    assert load["level"] == "error"
    assert load["measured"] == {"minimum": 0.0108, "nominal": 0.0114, "maximum": 0.0121, "unit": "A"}
    assert load["limit"] == {"minimum": None, "maximum": 0.01, "unit": "A"}
    assert load["margin"] == pytest.approx(-0.21)
    assert load["places"][0] == {"file": "orchard/frost-fan-b.cir", "line": 21, "column": 1}
    assert load["contributions"][0] == {"parameter": "R4", "share": 0.48}
    assert load["deviation"] is None


def test_same_review_same_bytes(faulty: Review) -> None:
    report = text_of(faulty)
    assert report == text_of(faulty)
    assert report.isascii()
    assert report.endswith("}\n")


def test_what_has_no_bound_is_null(sound: Review, schema: dict[str, Any]) -> None:
    measured, limit = Spread(5.0, inf, inf, "A"), Limit(6.0, 9.0, "A")
    verdict = Verdict(
        outcome=Outcome.FAIL,
        level=Level.ERROR,
        message="The limit may never trip.",
        measured=measured,
        limit=limit,
        margin=limit.margin(measured),
    )
    report = written(replace(sound, verdicts=(verdict,)))
    check(schema, report)
    found = report["reviews"][0]["verdicts"][0]
    assert found["measured"] == {"minimum": 5.0, "nominal": None, "maximum": None, "unit": "A"}
    assert found["margin"] is None
