"""The dead time against the data sheet of the 494 class."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint import Verdict
from pwmlint.lint.circuit.dead_time import dead_time
from pwmlint.lint.controllers import load
from pwmlint.lint.estimate import Estimate
from pwmlint.lint.quantity import Spread

Ask = Callable[..., list[Verdict]]


def at(volts: float) -> Spread:
    """Return the dead time as a share of the period, with the pin at exactly `volts`."""
    exact = Spread.exact(volts, "V")
    return dead_time(load("494"), Estimate(exact, exact), None).share.spread


def test_at_ground_three_to_five_percent_are_left() -> None:
    """SLVS074 p.11: 3 % with the pin at 0 V; p.1: 5 %."""
    share = at(0.0)
    assert (share.minimum, share.maximum) == (pytest.approx(0.03), pytest.approx(0.05))


def test_at_the_top_no_pulse_is_left() -> None:
    """SLVS074 p.11: 3.3 V makes 100 %."""
    assert at(3.3).maximum == pytest.approx(1.0)
    assert at(3.3).minimum == pytest.approx(1.0, abs=1e-3)


def test_zero_duty_is_typical_at_three_volts() -> None:
    """SLVS074 p.5: zero duty from 3 V typical, 3.3 V at most: some units are off at 3 V."""
    share = at(3.0)
    assert share.maximum == 1.0
    assert share.minimum < 1.0


@pytest.mark.parametrize("volts", [0.0, 0.5, 1.0, 2.0, 3.0, 3.3])
def test_the_line_of_the_data_sheet_lies_in_the_band(volts: float) -> None:
    """SLVS074 p.11: linear from 3 % at 0 V to 100 % at 3.3 V."""
    share = at(volts)
    line = 0.03 + 0.97 * volts / 3.3
    assert share.minimum - 1e-3 <= line <= share.maximum + 1e-3


def test_the_rule_prints_the_percentages_of_a_grounded_pin(ask: Ask) -> None:
    """SLVS074 p.4 (12 kohm, 10 nF: 10 kHz), p.11 (3 %) and p.1 (5 %): 3 us .. 5 us."""
    netlist = """weather mast
VBAT VBAT 0 15
U1 FB SET COMP 0 CT RT 0 D1 0 0 NC VBAT 0 VREF VREF 0 494
R1 RT 0 12k 0%
C1 CT 0 10n 0%
R2 VREF SET 5k1
R3 SET 0 5k1
R4 OUT FB 5k1
R5 FB 0 5k1
R6 VBAT D1 1k
.end
"""
    (verdict,) = ask("dead-time.minimum", netlist)
    assert verdict.measured is not None
    assert verdict.measured.minimum == pytest.approx(0.03 / (1.2 / (12e3 * 10e-9)))
    assert verdict.measured.maximum == pytest.approx(0.05 / (1.0 / (12e3 * 10e-9)))
    assert "(3 % .. 5 %)" in verdict.message
