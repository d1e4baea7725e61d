"""The path from an amplifier's output to its inverting input: its parts, its gain at rest, its corners."""

from __future__ import annotations

from collections.abc import Callable
from math import pi

import pytest
from pwmlint.lint.circuit.compensation import Compensation
from pwmlint.lint.design import Design

DesignOf = Callable[..., Design]


def path(design_of: DesignOf, lines: str) -> Compensation | None:
    """Return the path from OUT to IN; both nets are always there."""
    design = design_of(f"V1 VREF 0 5\nR90 VREF IN 5.1k\nR91 IN 0 5.1k\nC90 OUT 0 1p\n{lines}")
    return design.compensation("OUT", "IN")


def found(design_of: DesignOf, lines: str) -> Compensation:
    compensation = path(design_of, lines)
    assert compensation is not None
    return compensation


def test_a_series_pair_integrates_and_has_a_corner(design_of: DesignOf):
    compensation = found(design_of, "R1 OUT MID 22k\nC1 MID IN 22n")
    assert set(compensation.parts) == {"R1", "C1"}
    assert not compensation.direct
    ((resistor, capacitor, corner),) = compensation.corners
    assert (resistor, capacitor) == ("R1", "C1")
    assert corner == pytest.approx(1 / (2 * pi * 22e3 * 22e-9))  # 329 Hz


def test_a_second_capacitor_across_it_adds_no_corner_of_its_own(design_of: DesignOf):
    compensation = found(design_of, "R1 OUT MID 22k\nC1 MID IN 22n\nC2 OUT IN 220p")
    assert set(compensation.parts) == {"R1", "C1", "C2"}
    assert [corner[:2] for corner in compensation.corners] == [("R1", "C1")]


@pytest.mark.parametrize("lines", ["R1 OUT IN 51k", "R1 OUT MID 22k\nR2 MID IN 22k", "RV1 OUT IN IN 50k"])
def test_resistors_alone_give_a_finite_gain_at_rest(design_of: DesignOf, lines: str):
    compensation = found(design_of, lines)
    assert compensation.direct
    assert compensation.corners == ()


def test_a_resistor_beside_a_capacitor_has_no_series_corner(design_of: DesignOf):
    compensation = found(design_of, "R1 OUT IN 51k\nC1 OUT IN 1n")
    assert compensation.direct
    assert compensation.corners == ()


def test_a_tap_on_the_middle_leaves_no_corner(design_of: DesignOf):
    assert found(design_of, "R1 OUT MID 22k\nC1 MID IN 22n\nR2 MID 0 1k").corners == ()


@pytest.mark.parametrize(
    "lines", ["R1 OUT MID 0\nC1 MID IN 22n", "R1 OUT MID 22k\nC1 MID IN 0", "R1 OUT MID\nC1 MID IN 22n"]
)
def test_parts_of_no_value_have_no_corner(design_of: DesignOf, lines: str):
    assert found(design_of, lines).corners == ()


@pytest.mark.parametrize(
    "lines",
    [
        pytest.param("R1 OUT MID 22k\nC1 MID 0 22n", id="to ground"),
        pytest.param("R1 OUT VREF 22k", id="to the reference, from which IN is divided"),
        pytest.param("R1 OUT MID 22k\nD1 MID IN DS\n.model DS d", id="through a diode"),
        pytest.param("", id="nothing"),
    ],
)
def test_what_does_not_reach_the_input_is_no_path(design_of: DesignOf, lines: str):
    assert path(design_of, lines) is None


def test_a_dead_end_is_no_part_of_the_path(design_of: DesignOf):
    assert "R3" not in found(design_of, "R1 OUT IN 51k\nR3 VREF OUT 10k").parts
