"""The worked example of application note SLVA001, a 5 V, 10 A supply around a 494, against our review of it.

The note's figures are recalled ("from memory") and not yet read in it; where SLVS074 prints the same, it is
named. A figure marked "derived" is arithmetic that anyone can repeat.
"""

from __future__ import annotations

from pathlib import Path

import pytest
from pwmlint.grammar import read
from pwmlint.lint import Outcome, Review, review
from pwmlint.lint.circuit.loops import Regulation, Trip
from pwmlint.lint.circuit.timing import Timing
from pwmlint.lint.design import Design
from pwmlint.lint.estimate import Estimate

NETLIST = Path(__file__).parent / "slva001.cir"


@pytest.fixture(scope="module")
def design() -> Design:
    return Design(read(NETLIST))


@pytest.fixture(scope="module")
def reviewed() -> Review:
    return review(NETLIST)


def _nominal(design: Design, net: str) -> float:
    voltage = design.voltage(net)
    assert isinstance(voltage, Estimate)
    return voltage.spread.nominal


def _regulation(design: Design) -> Regulation:
    found = design.regulation(design.controllers[0])
    assert isinstance(found, Regulation)
    return found


def _trip(design: Design) -> Trip:
    found = design.trip(design.controllers[0])
    assert isinstance(found, Trip)
    return found


class TestVoltages:
    def test_the_reference_divider_makes_2_5_v(self, design: Design):
        # SLVA001 from memory: R3 = R4 = 5.1 kohm, 2.5 V. R5 and R7, the gain of 101, load it with up to
        # (2.5 V - 0.5 V) / 54 kohm x 2.55 kohm = 0.09 V (derived), because FEEDBACK stands at 0.5 V to 3.5 V.
        assert _nominal(design, "HALF") == pytest.approx(2.5, abs=0.09)

    def test_both_inputs_stand_at_2_5_v_in_regulation(self, design: Design):
        # SLVA001 from memory: 2.5 V; the same loading, here at the inverting input: 2 V x 3.06 / 54 = 0.11 V.
        assert _regulation(design).inputs.spread.nominal == pytest.approx(2.5, abs=0.11)

    def test_the_output_is_5_v(self, design: Design):
        # SLVA001 from memory: R8 = R9 = 5.1 kohm, 5 V; twice the input's deviation, 0.23 V.
        output = _regulation(design).output.spread
        assert output.nominal == pytest.approx(5.0, abs=0.23)
        assert output.minimum < 5.0 < output.maximum

    def test_with_the_amplifier_output_in_the_middle_it_is_4_94_v(self, design: Design):
        # Derived: FEEDBACK at 2.0 V, the middle of 0.5 V to 3.5 V; in- at 2.5 V - 0.5 V x 3.06 / 54.06,
        # both bias currents of -0.2 uA (SLVS074 p.4) out of the pins: 0.2 uA x 2.55 kohm less at FB and
        # 0.2 uA x 2.89 kohm more at in-.
        inverting = 2.5 - 0.5 * 3.06 / 54.06 + 0.2e-6 * (3060 * 51000 / 54060)
        output = 2 * (inverting - 0.2e-6 * 2550)
        assert _regulation(design).output.spread.nominal == pytest.approx(output, rel=1e-6)

    def test_the_dead_time_pin_settles_at_0_45_v(self, design: Design):
        # SLVA001 from memory: R6 = 1 kohm and the ratio 1:10. Derived: 5 V / 11 = 0.4545 V, and the pin's
        # bias current of typically 2 uA (SLVS074 p.5) adds 2 uA x 909 ohm = 1.8 mV.
        assert _nominal(design, "DTC") == pytest.approx(5 / 11 + 2e-6 * 10e3 / 11, rel=1e-6)
        assert _nominal(design, "DTC") == pytest.approx(0.45, abs=0.01)


class TestCurrentLimit:
    def test_the_threshold_is_1_v(self, design: Design):
        # SLVA001 from memory: 4 kohm over 1 kohm (SLVS074 shows R1 = 1 kohm), 1 V.
        assert _nominal(design, "LIM") == pytest.approx(1.0, abs=0.001)
        assert _trip(design).threshold.spread.nominal == pytest.approx(1.0, abs=0.001)

    def test_it_takes_over_at_10_a(self, design: Design):
        # SLVA001 from memory: R13 = 1 V / 10 A = 0.1 ohm.
        current = _trip(design).current.spread
        assert current.nominal == pytest.approx(10.0, rel=0.001)
        assert current.minimum < 10.0 < current.maximum

    def test_the_sense_resistor_takes_10_w(self, design: Design):
        # Derived: 1 V x 10 A.
        assert _trip(design).dissipation.spread.nominal == pytest.approx(10.0, rel=0.002)


class TestTiming:
    def test_the_formula_gives_20_khz(self, design: Design):
        # SLVA001 from memory and SLVS074 p.11: f = 1 / (RT x CT) = 20 kHz, the low end of the constant's band
        # of 1.0 to 1.2.
        timing = design.timing(design.controllers[0])
        assert isinstance(timing, Timing)
        resistance, capacitance = timing.resistance.spread.nominal, timing.capacitance.spread.nominal
        assert 1 / (resistance * capacitance) == pytest.approx(20e3, rel=1e-6)
        band = timing.frequency.spread
        assert band.minimum < 20e3 < band.maximum


class TestReview:
    def test_nothing_fails_on_a_published_design(self, reviewed: Review):
        assert [verdict.rule for verdict in reviewed.verdicts if verdict.outcome is Outcome.FAIL] == []

    def test_what_the_figure_leaves_out_is_for_a_person_to_judge(self, reviewed: Review):
        # SLVA001 from memory: the figure shows no ceramic capacitor at VCC and none at REF; 50 kohm at RT and
        # 4 kohm at the threshold are the values as computed, not as sold.
        judged = {verdict.rule for verdict in reviewed.verdicts if verdict.outcome is Outcome.REVIEW}
        assert judged == {
            "reference.bypass",
            "supply.bypass",
            "connections.value-preferred",
            "feedback.single-fault",  # nothing in the figure limits the output when the divider fails
        }

    def test_the_sense_resistor_needs_a_wattage_and_one_is_named(self, reviewed: Review):
        (found,) = [v for v in reviewed.verdicts if v.rule == "current-limit.sense-dissipation"]
        assert found.outcome is Outcome.OPEN
        assert "R13" in found.needs[0]
        assert found.remedy == "fit at least 15.0 W"  # derived: 1.14 V x 12.1 A = 13.9 W at the worst
