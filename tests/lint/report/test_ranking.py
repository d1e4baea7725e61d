from __future__ import annotations

from dataclasses import replace
from datetime import date

from pwmlint.grammar.netlist import Place
from pwmlint.lint.report.ranking import acceptance, accepted, findings, unanswered
from pwmlint.lint.verdict import Deviation, Outcome, Review

PERMIT = Deviation(
    rule="*",
    subject="U1",
    reason="only for the harvest",
    owner="the foreman",
    place=Place("orchard/frost-fan-b.deviations.toml", 2, 1),
)


def test_the_worst_comes_first(faulty: Review) -> None:
    assert [(one.level or one.outcome) for one in findings(faulty)] == ["error", "error", "warning", "review"]
    assert {one.outcome for one in unanswered(faulty)} == {Outcome.OPEN}
    assert accepted(faulty) == []


def test_what_is_accepted_asks_nothing(faulty: Review) -> None:
    verdicts = tuple(
        replace(one, deviation=PERMIT) for one in faulty.verdicts if one.outcome is not Outcome.PASS
    )
    review = replace(faulty, verdicts=verdicts)
    assert findings(review) == unanswered(review) == []
    outcomes = [verdict.outcome for verdict, _ in accepted(review)]
    assert outcomes[:4] == [Outcome.FAIL] * 3 + [Outcome.REVIEW]
    assert len(outcomes) == len(verdicts)


def test_an_acceptance_in_words() -> None:
    assert acceptance(PERMIT) == "accepted by the foreman: only for the harvest"
    dated = replace(PERMIT, expires=date(2031, 9, 30))
    assert acceptance(dated) == "accepted by the foreman, until 2031-09-30: only for the harvest"
