"""The policy: which outcome a quantity and a limit make."""

from __future__ import annotations

import pytest
from pwmlint.lint.estimate import Estimate, Unsolved
from pwmlint.lint.judge import judge, missing, reports, unsolved
from pwmlint.lint.quantity import Spread
from pwmlint.lint.verdict import Level, Limit, Outcome

UPPER = Limit(None, 10.0, "V")


def volts(nominal: float, extreme: float, statistical: float | None = None) -> Estimate:
    """Return an estimate of a half-width, and of a narrower statistical one."""
    narrow = extreme if statistical is None else statistical
    return Estimate(
        Spread(nominal - extreme, nominal, nominal + extreme, "V"),
        Spread(nominal - narrow, nominal, nominal + narrow, "V"),
        contributions=(("R1", 1.0),),
        parts=("R1",),
        nets=("BEEHIVE",),
        assumptions=("R1: tolerance 5 % assumed",),
        formula="V = I R",
    )


@pytest.mark.parametrize(
    ("estimate", "rating", "outcome"),
    [
        (volts(8, 1), False, Outcome.PASS),
        (volts(9, 1), False, Outcome.PASS),  # ends on the limit are inside
        (volts(9.5, 1), False, Outcome.FAIL),  # a corner outside, and the statistics as well
        (volts(9.5, 1, 0.4), False, Outcome.REVIEW),  # a corner outside, the statistics inside
        (volts(9.5, 1, 0.4), True, Outcome.FAIL),  # no statistics across a rating
        (volts(10.5, 1, 0.1), False, Outcome.FAIL),  # nominal outside
        (volts(8, float("inf")), False, Outcome.FAIL),
    ],
)
def test_outcome(estimate: Estimate, rating: bool, outcome: Outcome):
    assert judge(estimate, UPPER, "sum", source="s", rating=rating).outcome is outcome


class TestVerdict:
    def test_carries_everything_that_went_into_it(self):
        verdict = judge(
            volts(9.5, 1),
            UPPER,
            "10.5 V",
            source="SLVS074",
            remedy="less",
            level=Level.WARNING,
            pins=("dead time",),
        )
        assert verdict.measured == Spread(8.5, 9.5, 10.5, "V")
        assert verdict.margin == pytest.approx(-0.05)
        assert (verdict.parts, verdict.nets, verdict.pins) == (("R1",), ("BEEHIVE",), ("dead time",))
        assert (verdict.formula, verdict.source, verdict.remedy) == ("V = I R", "SLVS074", "less")
        assert verdict.contributions == (("R1", 1.0),)
        assert verdict.level is Level.WARNING

    def test_a_pass_has_neither_level_nor_remedy(self):
        verdict = judge(volts(8, 1), UPPER, "9 V", source="s", remedy="less", level=Level.WARNING)
        assert (verdict.level, verdict.remedy) == (None, "")

    def test_a_review_has_a_remedy_and_no_level(self):
        verdict = judge(volts(9.5, 1, 0.4), UPPER, "m", source="s", remedy="less", level=Level.WARNING)
        assert (verdict.level, verdict.remedy) == (None, "less")

    def test_assumptions_of_the_rule_come_after_those_of_the_estimate(self):
        verdict = judge(volts(8, 1), UPPER, "m", source="s", assumptions=("rail by its name",))
        assert verdict.assumptions == ("R1: tolerance 5 % assumed", "rail by its name")

    def test_nets_of_the_rule_stand_for_those_of_the_estimate(self):
        assert judge(volts(8, 1), UPPER, "m", source="s", nets=("DTC",)).nets == ("DTC",)


def test_unsolved_is_open_with_its_reason_and_needs():
    found = Unsolved("net A has no path", ("R1",), ("A",), ("brief: ...",))
    verdict = unsolved(found, "voltage of A", pins=("dead time",))
    assert verdict.outcome is Outcome.OPEN
    assert verdict.message == "voltage of A: net A has no path"
    assert (verdict.parts, verdict.nets, verdict.needs) == (("R1",), ("A",), ("brief: ...",))


def test_missing_names_the_input():
    verdict = missing('brief: [controllers.U1] topology = "..."', "topology")
    assert (verdict.outcome, verdict.needs) == (Outcome.OPEN, ('brief: [controllers.U1] topology = "..."',))


def test_a_report_has_no_limit():
    verdict = reports(volts(8, 1), "8 V", source="s")
    assert verdict.outcome is Outcome.INFORMATIONAL
    assert verdict.measured == volts(8, 1).spread
    assert verdict.limit is None
