"""Potentials that are known without solving, and who has the last word on them."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint.brief import BriefError
from pwmlint.lint.circuit.potentials import named_voltage
from pwmlint.lint.circuit.worst_case import Variation
from pwmlint.lint.design import Design

DesignOf = Callable[..., Design]

CONTROLLER = "U1 P M COMP DTC CT RT {ground} C1 0 0 C2 VCC MODE {reference} P2 M2 494"


class TestNamedVoltage:
    @pytest.mark.parametrize(
        ("net", "volts"),
        [
            ("+12V", 12.0),
            ("12V", 12.0),
            ("5V0", 5.0),
            ("3V3", 3.3),
            ("-15V", -15.0),
            ("V3V3", 3.3),
            ("pump/+24V", 24.0),
            ("1v25", 1.25),
        ],
    )
    def test_read(self, net: str, volts: float):
        assert named_voltage(net) == volts

    @pytest.mark.parametrize("net", ["VCC", "12", "12V_IN", "A12V", "1234V", "V", "+-5V", "5V123", "V5"])
    def test_others_are_not(self, net: str):
        assert named_voltage(net) is None


class TestOrigins:
    def test_ground(self, design_of: DesignOf):
        known = design_of("R1 A 0 1k\nR2 A PGND 1k").known
        assert known["0"].origin == "ground"
        assert known["0"].assumption == ""
        assert known["PGND"].assumption == "net PGND taken for ground by its name"

    def test_ground_by_the_controllers_pin(self, design_of: DesignOf):
        known = design_of(CONTROLLER.format(ground="COMMON", reference="V5")).known
        assert known["COMMON"].origin == "ground"
        assert "U1's ground pin" in known["COMMON"].assumption

    def test_reference_is_a_tolerance(self, design_of: DesignOf):
        reference = design_of(CONTROLLER.format(ground="0", reference="VREF")).known["VREF"]
        assert (reference.origin, reference.variation) == ("reference", Variation.TOLERANCE)
        assert (reference.spread.minimum, reference.spread.maximum) == pytest.approx((4.75, 5.25), abs=0.2)

    def test_rail_of_the_brief_is_a_range(self, design_of: DesignOf):
        design = design_of(
            "R1 VBAT 0 1k", brief='[rails.VBAT]\nvoltage = "20 V .. 30 V"\ntolerance = "1 %"\n'
        )
        rail = design.known["VBAT"]
        assert (rail.origin, rail.variation) == ("brief", Variation.RANGE)
        assert (rail.spread.minimum, rail.spread.maximum) == pytest.approx((19.8, 30.3))

    def test_a_rail_that_is_no_net_is_a_mistake_in_the_brief(self, design_of: DesignOf):
        with pytest.raises(BriefError, match="no net NOWHERE"):
            design_of("R1 A 0 1k", brief='[rails.NOWHERE]\nvoltage = "5 V"\n')

    def test_sources_to_ground_either_way_round(self, design_of: DesignOf):
        known = design_of("V1 UP 0 12\nV2 0 DOWN 15\nV3 A B 3\nR1 A B 1k\nR2 UP DOWN 1k").known
        assert known["UP"].spread.nominal == 12
        assert known["DOWN"].spread.nominal == -15
        assert "A" not in known

    def test_a_source_without_value_tells_nothing(self, design_of: DesignOf):
        assert "A" not in design_of("V1 A 0 pulse(0 5 1u)\nR1 A 0 1k").known

    def test_named_rail_is_assumed(self, design_of: DesignOf):
        rail = design_of("R1 +12V 0 1k").known["+12V"]
        assert rail.origin == "name"
        assert rail.spread.maximum == pytest.approx(12.6)
        assert rail.assumption.startswith("net +12V taken for 12.0 V")


class TestLastWord:
    def test_brief_over_source_over_name(self, design_of: DesignOf):
        lines = "V1 +12V 0 11\nR1 +12V 0 1k"
        assert design_of(lines).known["+12V"].origin == "source"
        told = design_of(lines, brief='[rails."+12V"]\nvoltage = "10 V"\n').known["+12V"]
        assert (told.origin, told.spread.nominal) == ("brief", 10)

    def test_reference_over_name(self, design_of: DesignOf):
        known = design_of(CONTROLLER.format(ground="0", reference="5V")).known
        assert known["5V"].origin == "reference"

    def test_parameter_is_called_after_the_net(self, design_of: DesignOf):
        parameter = design_of("V1 UP 0 12\nR1 UP 0 1k").known["UP"].parameter
        assert (parameter.name, parameter.label, parameter.low) == ("V(UP)", "V1", 12)
