"""Closed loops of a controller: output in regulation, and current at which the limit takes over."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from pwmlint.lint.circuit.converter import NoLoop
from pwmlint.lint.circuit.loops import Fault, Regulation, Trip
from pwmlint.lint.design import Design
from pwmlint.lint.estimate import Unsolved

FanOf = Callable[..., Design]


def regulation(design: Design) -> Regulation:
    found = design.regulation(design.controllers[0])
    assert isinstance(found, Regulation), found
    return found


def trip(design: Design, *, shorted: bool = False) -> Trip:
    found = design.trip(design.controllers[0], shorted=shorted)
    assert isinstance(found, Trip), found
    return found


def outcome(design: Design) -> object:
    return design.regulation(design.controllers[0])


class TestRegulation:
    def test_halves_of_output_and_reference_are_equal(self, fan_of: FanOf):
        # SLVA001, from memory: 5.1 k / 5.1 k from the reference and from the output, 5 V.
        found = regulation(fan_of())
        assert found.output.spread.nominal == pytest.approx(5.0, rel=1e-3)
        assert found.inputs.spread.nominal == pytest.approx(2.5, rel=1e-3)

    def test_its_spread_by_hand(self, fan_of: FanOf):
        # 5.25 V / 2 + 10 mV offset, twice; 1 uA of bias in 2.55 kohm at either input adds 2 x 5.1 mV.
        found = regulation(fan_of()).output
        reference = fan_of().known["VREF"].spread
        assert found.spread.maximum == pytest.approx(reference.maximum + 2 * 0.010 + 4 * 2.55e-3, abs=1e-4)
        assert found.spread.minimum == pytest.approx(reference.minimum - 2 * 0.010 - 4 * 2.55e-3, abs=1e-4)
        assert found.contributions[0][0] == "U1 reference"

    def test_resistor_behind_the_divider(self, fan_of: FanOf):
        # The bias current of 0.2 uA flows out of the pin, through 1 Mohm: 0.2 V more at the input.
        found = regulation(
            fan_of(R8="R8 FAN TAP 5.1k tol=0", R9="R9 TAP 0 5.1k tol=0", R10="R10 TAP SENSE 1meg")
        )
        assert found.output.spread.nominal == pytest.approx(5.0 - 2 * 0.2, abs=5e-3)

    def test_resistor_from_the_amplifiers_output(self, fan_of: FanOf):
        # 51 kohm from COMP (0.5 .. 3.5 V) to SET: the output moves with the duty, a regulation error.
        plain, loaded = regulation(fan_of()), regulation(fan_of(R10="R10 COMP SET 51k tol=0"))
        width = loaded.output.spread.maximum - loaded.output.spread.minimum
        assert width > plain.output.spread.maximum - plain.output.spread.minimum
        assert "U1 amplifier output" in [label for label, _ in loaded.output.contributions]

    def test_trimmer_sets_every_unit(self, fan_of: FanOf):
        found = regulation(fan_of(R9="R9 B 0 4.7k tol=1%", RV="RV1 SENSE SENSE B 2k tol=10%"))
        assert found.trimmers
        assert found.settable is not None
        low, high = found.settable
        assert found.output.spread.minimum < low < high < found.output.spread.maximum

    def test_no_output(self, fan_of: FanOf):
        assert isinstance(outcome(fan_of(R8="")), NoLoop)

    def test_several_outputs_ask_for_the_brief(self, fan_of: FanOf):
        found = outcome(fan_of(R10="R10 SENSE AUX 47k", L2="L2 AUX SW 1m"))
        assert isinstance(found, Unsolved)
        assert found.needs == ('brief: [controllers.U1] output = "..."',)

    def test_input_without_a_path(self, fan_of: FanOf):
        found = outcome(fan_of(R3="", R4="", C9="C9 SET 0 100n"))
        assert isinstance(found, Unsolved)
        assert found.nets == ("SET",)

    def test_input_tied_to_ground(self, fan_of: FanOf):
        found = outcome(fan_of(R9="R9 SENSE 0 0"))
        assert isinstance(found, NoLoop | Unsolved)

    def test_faults(self, fan_of: FanOf):
        design = fan_of()
        (controller,) = design.controllers

        def after(part: str, *, shorted: bool) -> float:
            return design.output_after(controller, Fault(part, shorted=shorted))

        assert after("R9", shorted=False) == pytest.approx(2.5, abs=0.01)
        assert after("R8", shorted=True) == pytest.approx(2.5, abs=0.01)
        assert after("R8", shorted=False) == np.inf
        assert after("R9", shorted=True) == np.inf


class TestTrip:
    def test_threshold_over_the_shunt(self, fan_of: FanOf):
        # SLVA001, from memory: 1 V at in-, 0.1 ohm: 10 A, 10 W.
        found = trip(fan_of())
        assert found.current.spread.nominal == pytest.approx(10.0, rel=2e-3)
        assert found.threshold.spread.nominal == pytest.approx(1.0, rel=2e-3)
        assert found.dissipation.spread.nominal == pytest.approx(10.0, rel=4e-3)

    def test_its_spread_by_hand(self, fan_of: FanOf):
        # 5.25 V / 5 + 10 mV + 1 uA in 800 ohm, over 0.1 ohm; the input on the shunt itself adds 0.1 uV.
        found = trip(fan_of()).current.spread
        reference = fan_of().known["VREF"].spread
        assert found.maximum == pytest.approx((reference.maximum / 5 + 0.010 + 0.0008) / 0.1, rel=1e-4)
        assert found.minimum == pytest.approx((reference.minimum / 5 - 0.010 - 0.0008) / 0.1, rel=1e-4)

    def test_fold_back(self, fan_of: FanOf):
        # The output holds the limit back: at a shorted output it takes over earlier.
        fold = {"R14": "R14 FAN LIMIT 10k tol=0"}
        assert (
            trip(fan_of(**fold), shorted=True).current.spread.nominal
            < trip(fan_of(**fold)).current.spread.nominal
        )

    def test_fold_back_by_hand(self, fan_of: FanOf):
        # LIMIT behind 4 k to 5 V, 1 k to ground, 10 k to the shorted output: 1.25 mA / 1.35 mS
        found = trip(fan_of(R14="R14 FAN LIMIT 10k tol=0"), shorted=True)
        assert found.threshold.spread.nominal == pytest.approx(1.25 / 1.35, rel=2e-3)

    def test_sensed_below_ground(self, fan_of: FanOf):
        # The return of the load is above its source: the shunt's far end is 0.1 V below ground at the trip.
        u1 = "U1 SENSE SET COMP DTC CT RT 0 DRIVE 0 0 DRIVE VCC MODE VREF LIMIT 0 494"
        found = trip(fan_of(U1=u1, R5="R5 VREF LIMIT 50k tol=0", R6="R6 LIMIT SHUNT 1k tol=0"))
        assert found.reversed
        assert found.current.spread.nominal == pytest.approx(1.0, rel=0.02)

    def test_no_shunt(self, fan_of: FanOf):
        design = fan_of(R13="R13 SHUNT 0 10k")
        assert isinstance(design.trip(design.controllers[0]), NoLoop)


class TestVariants:
    """What an engineer draws besides the plain divider."""

    @pytest.mark.parametrize(("top", "number", "volts"), [("15k", 1, 5.0), ("8.1k", 2, 4.0)])
    def test_of_two_voltage_amplifiers_the_lower_one_regulates(
        self, fan_of: FanOf, top: str, number: int, volts: float
    ):
        # amplifier 2 as an over-voltage limit at 1 V x (1 + top / 2.7k): 6.6 V beside 5 V, or 4 V
        changes = {"R13": "R13 SHUNT 0 2.7k tol=0", "D1": "D1 0 SW DS"}
        design = fan_of(R14=f"R14 FAN SHUNT {top} tol=0", **changes)
        (controller,) = design.controllers
        regulating = design.regulating(controller)
        assert regulating is not None
        assert regulating.number == number
        found = outcome(design)
        assert isinstance(found, Regulation)
        assert found.output.spread.nominal == pytest.approx(volts, abs=0.01)

    def test_a_connector_on_the_sense_line_draws_nothing_and_that_is_said(self, fan_of: FanOf):
        design = fan_of(R20="R20 FAN REMOTE 10", R8="R8 REMOTE SENSE 5.1k", J9="J9 REMOTE 0 FAR")
        found = outcome(design)
        assert isinstance(found, Regulation)
        assert "J9 taken as drawing nothing from REMOTE" in found.output.assumptions
