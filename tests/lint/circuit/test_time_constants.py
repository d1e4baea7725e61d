"""Time constants and source resistances, against the arithmetic of resistors in parallel."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint.circuit.controllers import Controller
from pwmlint.lint.design import Design
from pwmlint.lint.estimate import Estimate, Unsolved

DesignOf = Callable[..., Design]

U1 = "U1 P M COMP DTC CT RT 0 DRV 0 0 DRV VCC 0 VREF M2 P2 494"


def constant(design: Design, capacitor: str) -> Estimate:
    found = design.time_constant(design.part(capacitor))
    assert isinstance(found, Estimate), found
    return found


def controller(design: Design) -> Controller:
    return design.controllers[0]


class TestTimeConstant:
    def test_stiff_nets_put_resistors_in_parallel(self, design_of: DesignOf):
        # SLVA001, from memory: 10 kohm and 1 kohm; 909 ohm x 2.5 uF
        design = design_of(f"{U1}\nR1 VREF DTC 10k 0%\nR2 DTC 0 1k 0%\nC1 VREF DTC 2.5u 0%")
        assert constant(design, "C1").spread.nominal == pytest.approx(10e3 / 11 * 2.5e-6)

    def test_tolerances_of_resistor_and_capacitor_multiply(self, design_of: DesignOf):
        design = design_of("R1 A 0 1k 1%\nC1 A 0 1u 10%")
        spread = constant(design, "C1").spread
        assert (spread.minimum, spread.maximum) == pytest.approx((0.99e-3 * 0.9, 1.01e-3 * 1.1))

    def test_a_capacitor_between_two_free_nets(self, design_of: DesignOf):
        design = design_of("R1 A 0 1k 0%\nR2 B 0 2k 0%\nC1 A B 1u 0%")
        assert constant(design, "C1").spread.nominal == pytest.approx(3e-3)

    def test_the_pins_current_and_the_sources_count_for_nothing(self, design_of: DesignOf):
        design = design_of(f"{U1}\nV1 VCC 0 24\nR1 VCC DTC 1k 0%\nC1 DTC 0 1u 0%")
        assert constant(design, "C1").spread.nominal == pytest.approx(1e-3)

    def test_a_capacitor_across_a_stiff_net_is_at_once(self, design_of: DesignOf):
        design = design_of("V1 A 0 5\nC1 A 0 1u 0%")
        assert constant(design, "C1").spread.nominal == pytest.approx(0.0, abs=1e-15)

    @pytest.mark.parametrize(
        ("lines", "says"),
        [
            ("C1 A 0 1u", "sees no resistance"),
            ("R1 A 0 1k\nC1 A 0", "C1 has no value"),
            ("R1 A 0\nC1 A 0 1u", "R1 has no value"),
            ("R1 A B 1k\nX1 B 0 GAUGE\nC1 A 0 1u", "X1"),
        ],
    )
    def test_what_cannot_be_had_says_why(self, design_of: DesignOf, lines: str, says: str):
        design = design_of(lines)
        found = design.time_constant(design.part("C1"))
        assert isinstance(found, Unsolved)
        assert says in found.reason


class TestSourceResistance:
    def test_a_divider(self, design_of: DesignOf):
        design = design_of(f"{U1}\nR1 VREF P 5.1k 0%\nR2 P 0 5.1k 0%")
        found = design.source_resistance(controller(design), "P")
        assert isinstance(found, Estimate)
        assert found.spread.nominal == pytest.approx(2550)

    def test_a_stiff_net_has_none(self, design_of: DesignOf):
        design = design_of(f"{U1}\nR1 VREF P 5.1k 0%")
        found = design.source_resistance(controller(design), "VREF")
        assert isinstance(found, Estimate)
        assert found.spread.maximum == 0

    def test_a_floating_net_has_none_to_tell(self, design_of: DesignOf):
        design = design_of(f"{U1}\nC1 P 0 1n")
        found = design.source_resistance(controller(design), "P")
        assert isinstance(found, Unsolved)
        assert "no direct-current path" in found.reason
