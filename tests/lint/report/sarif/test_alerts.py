from __future__ import annotations

import json
from collections.abc import Callable, Iterator
from dataclasses import replace
from typing import Any, cast

from pwmlint.grammar.netlist import Place
from pwmlint.lint.verdict import Level, Outcome, Review, Verdict

Written = Callable[..., str]


def run_of(text: str) -> dict[str, Any]:
    """Return the one run of a log."""
    (run,) = json.loads(text)["runs"]
    return run


def texts(value: Any, key: str = "") -> Iterator[tuple[str, str]]:
    """Yield every string of a log with the key that it stands under."""
    if isinstance(value, dict):
        for name, item in cast("dict[str, Any]", value).items():
            yield from texts(item, name)
    elif isinstance(value, list):
        for item in cast("list[Any]", value):
            yield from texts(item, key)
    elif isinstance(value, str):
        yield key, value


def test_only_what_failed_and_is_not_accepted(
    written: Written, sarif_errors: Callable[[Any], list[str]], accepted: Review, faulty: Review
) -> None:
    text = written("sarif-alerts", accepted, faulty)
    assert sarif_errors(json.loads(text)) == []
    results = run_of(text)["results"]
    failed = [
        one
        for review in (accepted, faulty)
        for one in review.verdicts
        if one.outcome is Outcome.FAIL and one.deviation is None
    ]
    assert len(results) == len(failed) > 0
    assert {result["kind"] for result in results} == {"fail"}
    assert [result["suppressions"] for result in results] == [[]] * len(results)
    levels = [result["level"] for result in results]
    assert levels == sorted(levels, key=["error", "warning", "note"].index)
    assert {"error", "warning"} <= set(levels)


def test_what_is_accepted_raises_no_alert(written: Written, accepted: Review, cider_press: Review) -> None:
    told, quiet = (
        [result["ruleId"] for result in run_of(written("sarif-alerts", review))["results"]]
        for review in (cider_press, accepted)
    )
    assert set(told) - set(quiet) == {"feedback.output-voltage"}


def test_every_alert_has_a_line(written: Written, sound: Review) -> None:
    failed = Verdict(outcome=Outcome.FAIL, level=Level.ERROR, message="The scale has no ground.")
    whole = replace(failed, places=(Place("orchard/hive-scale.edf", 0, 0),))
    placed = replace(failed, places=(Place("orchard/hive-scale.edf", 8, 3),))
    results = run_of(written("sarif-alerts", replace(sound, verdicts=(failed, whole, placed))))["results"]
    places = [result["locations"][0]["physicalLocation"] for result in results]
    assert [place["region"] for place in places] == [
        {"startLine": 1},
        {"startLine": 1},
        {"startLine": 8, "startColumn": 3},
    ]
    assert {place["artifactLocation"]["uri"] for place in places} == {"orchard/hive-scale.edf"}


def test_texts_are_as_long_as_hosts_take_them(written: Written, cider_press: Review, faulty: Review) -> None:
    long = Verdict(
        outcome=Outcome.FAIL,
        level=Level.NOTE,
        message="x" * 5000,
        rule="a.b",
        nets=("n" * 900,),
        controller="U1",
    )
    run = run_of(written("sarif-alerts", cider_press, replace(faulty, verdicts=(long,))))
    for key, text in texts(run):
        assert len(text) <= {"text": 1024, "name": 255, "fullyQualifiedName": 255}.get(key, 10_000)
    assert run["results"][-1]["message"]["text"] == "x" * 1021 + "..."
    # The complete log cuts nothing.
    assert (
        len(run_of(written("sarif", replace(faulty, verdicts=(long,))))["results"][0]["message"]["text"])
        > 5000
    )


def test_only_rules_with_an_alert_are_described(written: Written, cider_press: Review) -> None:
    run = run_of(written("sarif-alerts", cider_press))
    rules = run["tool"]["driver"]["rules"]
    assert {one["id"] for one in rules} == {result["ruleId"] for result in run["results"]}
    for result in run["results"]:
        assert rules[result["ruleIndex"]]["id"] == result["ruleId"]
    severities = {
        one["defaultConfiguration"]["level"]: one["properties"]["problem.severity"] for one in rules
    }
    assert severities == {"error": "error", "warning": "warning"}


def test_an_alert_is_the_same_as_in_the_complete_log(written: Written, cider_press: Review) -> None:
    alerts, whole = (
        {
            result["partialFingerprints"]["verdictInstance/v1"]: result["message"]
            for result in run_of(written(name, cider_press))["results"]
        }
        for name in ("sarif-alerts", "sarif")
    )
    assert alerts.items() <= whole.items()
    for result in run_of(written("sarif-alerts", cider_press))["results"]:
        prints = result["partialFingerprints"]
        assert prints["primaryLocationLineHash"] == prints["verdictInstance/v1"]


def test_a_sound_board_raises_no_alert(written: Written, sound: Review) -> None:
    run = run_of(written("sarif-alerts", sound))
    assert run["results"] == []
    assert run["tool"]["driver"]["rules"] == []
