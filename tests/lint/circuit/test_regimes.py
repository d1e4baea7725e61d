"""What a converter's nets are held at while it starts, regulates, limits, is shorted or has no supply."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint.circuit.amplifiers import SenseResistor
from pwmlint.lint.circuit.potentials import Potential
from pwmlint.lint.circuit.regimes import Operation, Regime, potentials_in
from pwmlint.lint.design import Design
from pwmlint.lint.estimate import Estimate
from pwmlint.lint.quantity import Spread

FanOf = Callable[..., Design]

RAILS = """
[rails.VCC]
voltage = "20 V .. 30 V"
[rails.FAN]
voltage = "5 V"
tolerance = "10 %"
load = "0 A .. 6 A"
"""


def volts(minimum: float, nominal: float, maximum: float) -> Spread:
    return Spread(minimum, nominal, maximum, "V")


def operation(design: Design, *, reverse: bool = False) -> Operation:
    """Return the fan in operation: 5 V out, 1 V across R13 at the limit, 0.4 V with the output shorted."""
    return Operation(
        output="FAN",
        regulated=volts(4.8, 5.0, 5.2),
        sense=SenseResistor(design.part("R13"), "SHUNT", "0"),
        threshold=volts(0.9, 1.0, 1.1),
        threshold_shorted=volts(0.3, 0.4, 0.5),
        full_load=volts(0.0, 0.3, 0.6),
        reversed=reverse,
    )


def held(design: Design, regime: Regime, net: str, *, reverse: bool = False) -> Spread:
    known = potentials_in(regime, design.known, design.controllers[0], operation(design, reverse=reverse))
    return known[net].spread


def at(design: Design, regime: Regime, net: str) -> Spread:
    found = design.voltage_in(regime, design.controllers[0], net)
    assert isinstance(found, Estimate), found
    return found.spread


class TestHeldNets:
    @pytest.mark.parametrize(
        ("regime", "output"),
        [
            (Regime.START_UP, volts(0, 0, 0)),
            (Regime.SHORT_CIRCUIT, volts(0, 0, 0)),
            (Regime.SUPPLY_ABSENT, volts(0, 0, 0)),
            (Regime.NO_LOAD, volts(4.8, 5.0, 5.2)),
            (Regime.LOWEST_INPUT, volts(4.8, 5.0, 5.2)),
            (Regime.CURRENT_LIMIT, volts(0, 5.0, 5.0)),
        ],
    )
    def test_the_output(self, fan_of: FanOf, regime: Regime, output: Spread):
        assert held(fan_of(), regime, "FAN") == output

    @pytest.mark.parametrize(
        ("regime", "sense"),
        [
            (Regime.START_UP, volts(0, 0, 0)),
            (Regime.NO_LOAD, volts(0, 0, 0)),
            (Regime.LOWEST_INPUT, volts(0, 0.3, 0.6)),
            (Regime.HIGHEST_INPUT, volts(0, 0.3, 0.6)),
            (Regime.CURRENT_LIMIT, volts(0.9, 1.0, 1.1)),
            (Regime.SHORT_CIRCUIT, volts(0.3, 0.4, 0.5)),
        ],
    )
    def test_the_sense_node(self, fan_of: FanOf, regime: Regime, sense: Spread):
        assert held(fan_of(), regime, "SHUNT") == sense

    def test_a_current_from_the_far_end_pulls_the_sense_node_down(self, fan_of: FanOf):
        assert held(fan_of(), Regime.CURRENT_LIMIT, "SHUNT", reverse=True) == volts(-1.1, -1.0, -0.9)
        assert held(fan_of(), Regime.LOWEST_INPUT, "SHUNT", reverse=True) == volts(-0.6, -0.3, 0.0)

    def test_the_supply_stands_at_the_ends_of_its_band(self, fan_of: FanOf):
        design = fan_of(RAILS)
        assert held(design, Regime.LOWEST_INPUT, "VCC") == volts(20, 20, 20)
        assert held(design, Regime.HIGHEST_INPUT, "VCC") == volts(30, 30, 30)
        assert held(design, Regime.NO_LOAD, "VCC") == volts(20, 25, 30)

    def test_without_supply_the_reference_is_down_as_well(self, fan_of: FanOf):
        design = fan_of(RAILS)
        assert held(design, Regime.SUPPLY_ABSENT, "VCC").maximum == 0
        assert held(design, Regime.SUPPLY_ABSENT, "VREF").maximum == 0

    def test_standing_changes_nothing(self, fan_of: FanOf):
        design = fan_of()
        assert (
            potentials_in(Regime.STANDING, design.known, design.controllers[0], operation(design))
            == design.known
        )

    def test_what_is_not_known_is_not_held(self, fan_of: FanOf):
        design = fan_of()
        known = potentials_in(Regime.NO_LOAD, design.known, design.controllers[0], Operation())
        assert known == design.known

    def test_a_threshold_that_was_not_solved_leaves_the_sense_node_free(self, fan_of: FanOf):
        design = fan_of()
        unsolved = Operation(sense=SenseResistor(design.part("R13"), "SHUNT", "0"))
        known = potentials_in(Regime.CURRENT_LIMIT, design.known, design.controllers[0], unsolved)
        assert "SHUNT" not in known

    def test_a_sense_resistor_on_the_output_rides_on_it(self, fan_of: FanOf):
        design = fan_of()
        high = Operation(
            output="FAN",
            regulated=volts(4.8, 5.0, 5.2),
            sense=SenseResistor(design.part("R13"), "SHUNT", "FAN"),
            threshold=volts(0.1, 0.1, 0.1),
        )
        known = potentials_in(Regime.NO_LOAD, design.known, design.controllers[0], high)
        assert known["SHUNT"].spread == volts(4.8, 5.0, 5.2)
        known = potentials_in(Regime.CURRENT_LIMIT, design.known, design.controllers[0], high)
        assert known["SHUNT"].spread.maximum == pytest.approx(5.1)

    def test_a_negative_output_is_limited_between_itself_and_ground(self, fan_of: FanOf):
        design = fan_of()
        inverting = Operation(output="FAN", regulated=volts(-12.6, -12.0, -11.4))
        known = potentials_in(Regime.CURRENT_LIMIT, design.known, design.controllers[0], inverting)
        assert known["FAN"].spread == volts(-12, -12, 0)

    def test_a_held_net_says_in_which_regime(self, fan_of: FanOf):
        design = fan_of()
        known = potentials_in(Regime.NO_LOAD, design.known, design.controllers[0], operation(design))
        assert isinstance(known["FAN"], Potential)
        assert (known["FAN"].origin, known["FAN"].label) == ("regime", "FAN in no load")


class TestVoltages:
    def test_the_sensing_input_follows_the_output(self, fan_of: FanOf):
        # 5.1 kohm twice: half of the output, which is 0 V at the start; 0.2 uA x 2.55 kohm on top
        design = fan_of(RAILS)
        assert at(design, Regime.START_UP, "SENSE").nominal == pytest.approx(0.2e-6 * 2550)
        assert at(design, Regime.LOWEST_INPUT, "SENSE").nominal == pytest.approx(2.5, abs=1e-3)

    def test_empty_capacitors_pull_the_dead_time_pin_up(self, fan_of: FanOf):
        # SLVA001, from memory: the soft-start capacitor lifts the pin to the reference at the start
        design = fan_of(RAILS)
        assert at(design, Regime.START_UP, "DTC").nominal == pytest.approx(5.0, rel=1e-6)
        assert at(design, Regime.NO_LOAD, "DTC").nominal == pytest.approx(5 / 11, abs=3e-3)

    def test_full_load_and_limit_at_the_sense_resistor(self, fan_of: FanOf):
        design = fan_of(RAILS)
        assert at(design, Regime.LOWEST_INPUT, "SHUNT").maximum == pytest.approx(0.6)  # 6 A x 0.1 ohm
        assert at(design, Regime.CURRENT_LIMIT, "SHUNT").nominal == pytest.approx(1.0, abs=1e-3)
