"""The oscillator's timing: resistance, capacitance, frequency."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint.circuit.timing import Timing
from pwmlint.lint.design import Design
from pwmlint.lint.estimate import Unsolved

FanOf = Callable[..., Design]


def timing(design: Design) -> Timing:
    found = design.timing(design.controllers[0])
    assert isinstance(found, Timing), found
    return found


def unsolved(design: Design) -> Unsolved:
    found = design.timing(design.controllers[0])
    assert isinstance(found, Unsolved), found
    return found


class TestFrequency:
    def test_printed_point_lies_in_the_band(self, fan_of: FanOf):
        # SLVS074 p.4: 10 kHz at 12 kohm and 10 nF.
        found = timing(fan_of(R1="R1 RT 0 12k tol=0", C1="C1 CT 0 10n tol=0")).frequency.spread
        assert found.minimum <= 10e3 <= found.maximum * (1 + 1e-12)

    def test_printed_formula_lies_in_the_band(self, fan_of: FanOf):
        # SLVS074 p.11: 1 / (RT CT); 50 kohm and 1 nF make 20 kHz.
        found = timing(fan_of()).frequency.spread
        assert found.minimum == pytest.approx(20e3)

    def test_tolerances_of_both_parts(self, fan_of: FanOf):
        found = timing(fan_of(R1="R1 RT 0 50k tol=1%", C1="C1 CT 0 1n tol=5%")).frequency.spread
        assert found.minimum == pytest.approx(20e3 / (1.01 * 1.05))
        assert found.maximum == pytest.approx(24e3 / (0.99 * 0.95))

    def test_resistors_in_series_and_capacitors_in_parallel(self, fan_of: FanOf):
        lines = {"R1": "R1 RT X 47k tol=0", "R20": "R20 X 0 3k tol=0", "C9": "C9 0 CT 1n tol=0"}
        found = timing(fan_of(**lines))
        assert found.resistance.spread.nominal == pytest.approx(50e3)
        assert found.capacitance.spread.nominal == pytest.approx(2e-9)

    def test_trimmer(self, fan_of: FanOf):
        lines = {"R1": "R1 RT X 30k tol=0", "RV1": "RV1 X X 0 10k tol=0"}
        found = timing(fan_of(**lines))
        resistance = found.resistance.spread
        assert (resistance.minimum, resistance.maximum) == pytest.approx((30e3, 40e3))
        assert found.trimmers
        assert found.settable == pytest.approx((1.2 / (40e3 * 1e-9), 1.0 / (30e3 * 1e-9)))

    def test_a_trimmer_that_leaves_no_resistance(self, fan_of: FanOf):
        found = timing(fan_of(R1="", RV1="RV1 RT RT 0 50k tol=0")).frequency.spread
        assert found.maximum == float("inf")


class TestObstacles:
    @pytest.mark.parametrize(
        ("changed", "reason"),
        [
            ({"C1": ""}, "no timing capacitor from CT to ground"),
            ({"R1": ""}, "no timing resistor from RT to ground"),
            ({"R1": "R1 RT X 50k"}, "no resistor from RT to ground"),
            ({"R1": "R1 RT 0"}, "R1 has no value"),
            ({"C1": "C1 CT 0 plum"}, "C1 has the value 'plum'"),
            ({"R1": "R1 RT VREF 50k"}, "VREF feeds RT"),
            ({"R20": "R20 RT VREF 100k"}, "VREF feeds RT"),
        ],
    )
    def test_said(self, changed: dict[str, str], reason: str, fan_of: FanOf):
        assert reason in unsolved(fan_of(**changed)).reason

    def test_oscillator_switched_off(self, fan_of: FanOf):
        # SLVS074 p.1: RT to the reference stops the oscillator.
        u1 = "U1 SENSE SET COMP DTC CT VREF 0 DRIVE 0 0 DRIVE VCC MODE VREF LIMIT SHUNT 494"
        assert "switched off" in unsolved(fan_of(U1=u1)).reason
