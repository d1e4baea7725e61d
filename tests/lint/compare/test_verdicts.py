"""What becomes of verdicts: which is which, whether it is worse, and what the gate makes of it."""

from __future__ import annotations

from dataclasses import replace
from math import inf

import pytest
from pwmlint.grammar.netlist import Place
from pwmlint.lint.compare.comparison import Change, CircuitChanges, Comparison, Unchanged
from pwmlint.lint.compare.verdicts import Names, verdict_changes
from pwmlint.lint.quantity import Spread
from pwmlint.lint.verdict import Deviation, Level, Limit, Outcome, Review, Verdict

SAME_NAMES = Names({}, {})
ACCEPTED = Deviation(rule="*", subject="*", reason="measured", owner="the orchard", place=Place("d", 1, 1))
LIMIT = Limit(None, 10.0, "V")


def said(outcome: Outcome, **told: object) -> Verdict:
    level = Level.ERROR if outcome is Outcome.FAIL else None
    verdict = Verdict(outcome=outcome, message="It is so.", rule="supply.range", subject="U1", level=level)
    return replace(verdict, **told)  # pyright: ignore[reportArgumentType]


def at(volts: float, outcome: Outcome = Outcome.FAIL, **told: object) -> Verdict:
    spread = Spread.exact(volts, "V")
    return said(outcome, measured=spread, limit=LIMIT, margin=LIMIT.margin(spread), **told)


PASS, FAIL, REVIEW, OPEN = said(Outcome.PASS), said(Outcome.FAIL), said(Outcome.REVIEW), said(Outcome.OPEN)
WARNING, NOTE = replace(FAIL, level=Level.WARNING), replace(FAIL, level=Level.NOTE)
ASIDE, INFO = said(Outcome.NOT_APPLICABLE), said(Outcome.INFORMATIONAL)


def fate(old: Verdict, new: Verdict) -> Change | None:
    changes, unchanged = verdict_changes([old], [new], SAME_NAMES)
    assert len(changes) + unchanged == 1
    return changes[0].change if changes else None


@pytest.mark.parametrize("verdict", [PASS, FAIL, REVIEW, OPEN, ASIDE, INFO, at(11), at(inf)])
def test_the_same_is_unchanged(verdict: Verdict) -> None:
    assert fate(verdict, replace(verdict, message="In other words.")) is None


@pytest.mark.parametrize(
    ("better", "worse"),
    [
        (PASS, NOTE),
        (NOTE, WARNING),
        (WARNING, FAIL),
        (PASS, REVIEW),
        (REVIEW, NOTE),
        (PASS, OPEN),
        (OPEN, REVIEW),
        (OPEN, FAIL),
        (ASIDE, FAIL),
        (INFO, OPEN),
        (replace(FAIL, deviation=ACCEPTED), FAIL),
        (replace(FAIL, deviation=ACCEPTED), NOTE),
    ],
)
def test_a_worse_outcome(better: Verdict, worse: Verdict) -> None:
    assert fate(better, worse) is Change.WORSE
    if Outcome.OPEN not in (better.outcome, worse.outcome):
        assert fate(worse, better) is Change.BETTER


@pytest.mark.parametrize("answered", [FAIL, REVIEW, PASS])
def test_what_can_no_longer_be_checked_is_worse(answered: Verdict) -> None:
    assert fate(answered, OPEN) is Change.WORSE
    assert fate(OPEN, PASS) is Change.BETTER


@pytest.mark.parametrize(
    ("old", "new", "change"),
    [
        (11.0, 13.0, Change.WORSE),  # -10 % -> -30 %
        (13.0, 11.0, Change.BETTER),
        (13.0, 13.2, None),  # two hundredths of the limit, but only 7 % of what it was
        (10.5, 10.55, None),  # a tenth of what it was, but half a hundredth of the limit
        (10.05, 10.3, Change.WORSE),
        (inf, inf, None),
        (11.0, inf, Change.WORSE),
    ],
)
def test_the_margin_of_what_fails(old: float, new: float, change: Change | None) -> None:
    if change is None and old != new:
        change = Change.CHANGED if abs(old - new) > 0.01 * new else None
    assert fate(at(old), at(new)) is change


def test_less_room_is_worse_though_it_passes() -> None:
    assert fate(at(5.0, Outcome.PASS), at(9.5, Outcome.PASS)) is Change.WORSE
    assert fate(at(9.5, Outcome.PASS), at(5.0, Outcome.PASS)) is Change.BETTER


def test_room_beyond_a_whole_limit_counts_no_more() -> None:
    ample, huge = (replace(at(1.0, Outcome.PASS), margin=margin) for margin in (3.0, 30.0))
    assert fate(ample, huge) is None


@pytest.mark.parametrize(
    ("old", "new", "change"),
    [(1.0, 1.5, Change.CHANGED), (1.0, 1.005, None), (0.0, 0.0, None), (1.0, inf, Change.CHANGED)],
)
def test_another_figure(old: float, new: float, change: Change | None) -> None:
    one, other = (replace(INFO, measured=Spread.exact(value, "Hz")) for value in (old, new))
    assert fate(one, other) is change


def test_another_word_of_the_same_rank() -> None:
    assert fate(PASS, ASIDE) is Change.CHANGED


def test_new_and_gone() -> None:
    changes, unchanged = verdict_changes([PASS], [PASS, replace(FAIL, rule="reference.load")], SAME_NAMES)
    assert ([one.change for one in changes], unchanged) == ([Change.NEW], 1)
    assert changes[0].verdict.rule == "reference.load"
    changes, _ = verdict_changes([FAIL], [], SAME_NAMES)
    assert [(one.change, one.new) for one in changes] == [(Change.GONE, None)]


def test_a_verdict_is_known_by_its_parts_before_its_rule() -> None:
    on_r1, on_r2 = (replace(FAIL, parts=(part,)) for part in ("R1", "R2"))
    passes = replace(on_r2, outcome=Outcome.PASS, level=None)
    changes, unchanged = verdict_changes([on_r1, passes], [passes, on_r1], SAME_NAMES)
    assert (changes, unchanged) == ((), 2)


def test_else_by_rule_and_subject_in_their_order() -> None:
    old = [replace(PASS, parts=("R1",)), replace(PASS, parts=("R2",))]
    new = [replace(FAIL, parts=("R3",)), replace(PASS, parts=("R4",)), replace(PASS, parts=("R5",))]
    changes, unchanged = verdict_changes(old, new, SAME_NAMES)
    assert [(one.change, one.verdict.parts) for one in changes] == [
        (Change.NEW, ("R5",)),
        (Change.WORSE, ("R3",)),
    ]
    assert (changes[1].old, unchanged) == (old[0], 1)


def test_renamed_nets_and_renumbered_parts_are_followed() -> None:
    old = replace(FAIL, subject="FB", parts=("R1", "R2"), nets=("FB", "0"))
    other = replace(PASS, subject="SENSE", parts=("R9",), nets=("SENSE",))
    new = replace(FAIL, subject="SENSE", parts=("R2", "R3"), nets=("GND", "SENSE"))
    names = Names({"R1": "R2", "R2": "R3"}, {"FB": "SENSE", "0": "GND"})
    changes, unchanged = verdict_changes([old], [other, new], names)
    assert ([one.change for one in changes], unchanged) == ([Change.NEW], 1)


def test_the_worst_comes_first() -> None:
    rules = {f"a.{number}": verdict for number, verdict in enumerate((NOTE, OPEN, FAIL, REVIEW, WARNING))}
    changes, _ = verdict_changes([], [replace(one, rule=rule) for rule, one in rules.items()], SAME_NAMES)
    assert [one.verdict.rule for one in changes] == ["a.2", "a.4", "a.0", "a.3", "a.1"]


class TestGate:
    @staticmethod
    def compared(old: list[Verdict], new: list[Verdict]) -> Comparison:
        reviews = [Review("fan.cir", "SPICE list", "", None, None, (), tuple(one)) for one in (old, new)]
        changes, unchanged = verdict_changes(old, new, SAME_NAMES)
        return Comparison(reviews[0], reviews[1], CircuitChanges(), changes, Unchanged(0, 0, unchanged))

    @pytest.mark.parametrize("gate", [Level.ERROR, Level.WARNING, Level.NOTE])
    def test_what_failed_before_and_fails_the_same_stops_nothing(self, gate: Level) -> None:
        assert self.compared([FAIL, at(11)], [FAIL, at(11)]).passes(gate, strict=True)

    @pytest.mark.parametrize(
        ("old", "new"), [([], [FAIL]), ([PASS], [FAIL]), ([OPEN], [FAIL]), ([at(11)], [at(13)])]
    )
    def test_what_is_new_or_worse_stops(self, old: list[Verdict], new: list[Verdict]) -> None:
        assert not self.compared(old, new).passes(Level.ERROR)
        assert self.compared(old, new).passes(None, strict=True)

    def test_the_level_counts(self) -> None:
        worse = self.compared([PASS], [WARNING])
        assert worse.passes(Level.ERROR)
        assert not worse.passes(Level.WARNING)

    @pytest.mark.parametrize("new", [OPEN, REVIEW])
    def test_strict_stops_at_what_is_unanswered(self, new: Verdict) -> None:
        assert self.compared([PASS], [new]).passes(Level.ERROR)
        assert not self.compared([PASS], [new]).passes(Level.ERROR, strict=True)
        assert self.compared([new], [new]).passes(Level.ERROR, strict=True)

    @pytest.mark.parametrize("old", [[], [PASS], [at(11)]])
    def test_what_is_accepted_stops_nothing(self, old: list[Verdict]) -> None:
        assert self.compared(old, [at(13, deviation=ACCEPTED)]).passes(Level.NOTE, strict=True)

    def test_an_acceptance_that_ended_stops(self) -> None:
        assert not self.compared([replace(FAIL, deviation=ACCEPTED)], [FAIL]).passes(Level.ERROR)

    @pytest.mark.parametrize(("old", "new"), [([FAIL], []), ([FAIL], [PASS]), ([at(13)], [at(11)])])
    def test_what_is_gone_or_better_stops_nothing(self, old: list[Verdict], new: list[Verdict]) -> None:
        assert self.compared(old, new).passes(Level.NOTE, strict=True)
