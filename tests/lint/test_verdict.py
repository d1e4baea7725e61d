from dataclasses import replace
from itertools import product

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pwmlint.grammar.netlist import Place
from pwmlint.lint.quantity import Spread
from pwmlint.lint.verdict import Level, Limit, Outcome, Review, Verdict


def spread(minimum: float, maximum: float) -> Spread:
    return Spread(minimum, (minimum + maximum) / 2, maximum, "A")


@pytest.mark.parametrize(
    ("limit", "measured", "margin"),
    [
        (Limit(None, 0.010, "A"), spread(0.0108, 0.0121), -0.21),
        (Limit(None, 0.010, "A"), spread(0.004, 0.008), 0.2),
        (Limit(5.0, None, "A"), spread(6.0, 9.0), 0.2),
        (Limit(5.0, 10.0, "A"), spread(6.0, 9.0), 0.1),
        (Limit(5.0, 10.0, "A"), spread(5.0, 10.0), 0.0),
        # A limit of zero: the span between the sides is the scale, or 1 where there is one side only.
        (Limit(0.0, 4.0, "A"), spread(1.0, 2.0), 0.25),
        (Limit(0.0, None, "A"), spread(-0.5, 2.0), -0.5),
        (Limit(-2.0, 0.0, "A"), spread(-3.0, -1.0), -0.5),
        (Limit(None, -10.0, "A"), spread(-13.0, -12.0), 0.2),
    ],
)
def test_margin(limit: Limit, measured: Spread, margin: float) -> None:
    assert limit.margin(measured) == pytest.approx(margin)
    assert limit.contains(measured) == (margin >= 0)


@settings(deadline=None, max_examples=200)
@given(
    st.none() | st.floats(-100, 100),
    st.none() | st.floats(-100, 100),
    st.floats(-100, 100),
    st.floats(-100, 100),
)
def test_a_margin_is_negative_exactly_outside(
    low: float | None, high: float | None, one: float, other: float
) -> None:
    if (low is None and high is None) or (low is not None and high is not None and low > high):
        with pytest.raises(ValueError, match="limit"):
            Limit(low, high, "A")
        return
    limit, measured = Limit(low, high, "A"), spread(min(one, other), max(one, other))
    assert limit.contains(measured) == (limit.margin(measured) >= 0)


def test_a_limit_has_a_side() -> None:
    with pytest.raises(ValueError, match="needs a side"):
        Limit(None, None, "V")
    with pytest.raises(ValueError, match="crossed"):
        Limit(2.0, 1.0, "V")
    assert Limit(2.0, 2.0, "V").holds(2.0)


VERDICT = Verdict(
    outcome=Outcome.FAIL,
    message="the reference gives 11.4 mA",
    rule="reference.load",
    subject="U1",
    parts=("R4", "R5"),
    nets=("VREF",),
    level=Level.ERROR,
)


def test_a_fingerprint_stays_while_values_and_lines_change() -> None:
    changed = replace(
        VERDICT,
        message="the reference gives 12.1 mA",
        outcome=Outcome.PASS,
        level=None,
        measured=spread(1.0, 2.0),
        places=(Place("fan.edf", 7, 1),),
        parts=("R5", "R4"),
    )
    assert changed.fingerprint == VERDICT.fingerprint
    assert len(VERDICT.fingerprint) == 16


def test_a_fingerprint_tells_rule_subject_parts_and_nets_apart() -> None:
    others = [
        replace(VERDICT, rule="reference.bypass"),
        replace(VERDICT, subject="U2"),
        replace(VERDICT, parts=("R4",)),
        replace(VERDICT, parts=("R4", "R5", "VREF"), nets=()),
        replace(VERDICT, parts=("R4",), nets=("R5", "VREF")),
        replace(VERDICT, nets=()),
    ]
    prints = {VERDICT.fingerprint, *(one.fingerprint for one in others)}
    assert len(prints) == len(others) + 1


def review(*verdicts: Verdict) -> Review:
    return Review("fan.edf", "EDIF 2 0 0", "fan", None, None, (), verdicts)


def verdict(outcome: Outcome, level: Level | None = None) -> Verdict:
    return Verdict(outcome=outcome, message="", level=level)


@pytest.mark.parametrize(
    ("level", "gate"), list(product([Level.ERROR, Level.WARNING, Level.NOTE], [*Level, None]))
)
def test_the_gate_stops_a_failure_of_its_level_or_a_graver_one(level: Level, gate: Level | None) -> None:
    gravity = {Level.ERROR: 3, Level.WARNING: 2, Level.NOTE: 1}
    stopped = gate is not None and gravity[level] >= gravity[gate]
    assert review(verdict(Outcome.FAIL, level)).passes(gate) is not stopped


@pytest.mark.parametrize("outcome", [outcome for outcome in Outcome if outcome is not Outcome.FAIL])
def test_nothing_but_a_failure_stops_the_plain_gate(outcome: Outcome) -> None:
    one = review(verdict(outcome))
    assert one.passes(Level.NOTE)
    assert one.passes(Level.ERROR, strict=True) is (outcome not in (Outcome.OPEN, Outcome.REVIEW))
    assert one.passes(None, strict=True)


def test_every_verdict_is_looked_at() -> None:
    passing = [verdict(Outcome.PASS)] * 3
    assert not review(*passing, verdict(Outcome.FAIL, Level.ERROR)).passes(Level.ERROR)
    assert review().passes(Level.NOTE, strict=True)


def test_counts_name_every_outcome() -> None:
    counts = review(verdict(Outcome.PASS), verdict(Outcome.PASS), verdict(Outcome.OPEN)).counts
    assert counts == {
        "pass": 2,
        "fail": 0,
        "review": 0,
        "open": 1,
        "notApplicable": 0,
        "informational": 0,
    }
