"""From a network to an estimate: what went into it, and why there may be none."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from pwmlint.lint.circuit.answers import estimate
from pwmlint.lint.circuit.growth import Growth
from pwmlint.lint.circuit.network import Condition, FreePotential, Value
from pwmlint.lint.design import Design
from pwmlint.lint.estimate import Estimate, Unsolved

DesignOf = Callable[..., Design]


def zero(_: object) -> np.ndarray[tuple[int], np.dtype[np.float64]]:
    return np.zeros(1)


def regulated(design: Design, plus: str, minus: str, offset: Value = zero) -> Estimate | Unsolved:
    """Return the potential of OUT at which two nets are equal."""
    growth = Growth(design.circuit, design.known, (), frozenset({"OUT"})).grow(plus, minus)
    found = estimate(
        growth,
        {"OUT": (lambda s: s.voltage("OUT"), "V")},
        [FreePotential("OUT")],
        [Condition(plus, minus, offset)],
    )
    return found if isinstance(found, Unsolved) else found["OUT"]


class TestEstimate:
    def test_tells_what_went_into_it(self, design_of: DesignOf):
        found = design_of("V1 VIN 0 12\nR1 VIN A 10k\nR2 A 0 10k tol=1%").voltage("A")
        assert isinstance(found, Estimate)
        assert set(found.parts) == {"R1", "R2"}
        assert set(found.nets) == {"A", "VIN", "0"}
        assert found.assumptions == ("R1: tolerance 5 % assumed",)
        assert found.contributions[0][0] == "R1"
        assert sum(share for _, share in found.contributions) == pytest.approx(1)

    def test_a_diode_that_blocks_is_said(self, design_of: DesignOf):
        found = design_of("V1 VIN 0 12\nR1 VIN A 1k\nD1 0 A DX\nR2 A 0 1k\n.model DX d").voltage("A")
        assert isinstance(found, Estimate)
        assert any("D1 blocks" in assumption for assumption in found.assumptions)

    def test_a_transistor_that_is_taken_as_off_is_said(self, design_of: DesignOf):
        found = design_of("V1 VIN 0 12\nR1 VIN A 1k\nR2 A 0 1k\nM1 A G 0 0 MX\n.model MX nmos").voltage("A")
        assert isinstance(found, Estimate)
        assert any("M1" in assumption for assumption in found.assumptions)


class TestObstacles:
    def test_too_many_diodes(self, design_of: DesignOf):
        diodes = "\n".join(f"D{i} A B{i} DX\nR{i} B{i} 0 1k" for i in range(6))
        found = design_of(f"V1 VIN 0 12\nR9 VIN A 1k\n{diodes}\n.model DX d").voltage("A")
        assert isinstance(found, Unsolved)
        assert "too many diodes" in found.reason

    def test_every_missing_value_is_named(self, design_of: DesignOf):
        found = design_of("V1 VIN 0 12\nR1 VIN A\nR2 A 0 pear").voltage("A")
        assert isinstance(found, Unsolved)
        assert set(found.parts) == {"R1", "R2"}


class TestClosedLoops:
    DIVIDER = "V1 VREF 0 2.5\nR1 OUT FB 38.3k tol=1%\nR2 FB 0 10k tol=1%\n"

    def test_divider(self, design_of: DesignOf):
        # 2.5 V (1 + 38.3 / 10), the resistors 1 %: recomputed
        found = regulated(design_of(self.DIVIDER), "FB", "VREF")
        assert isinstance(found, Estimate)
        assert found.spread.nominal == pytest.approx(12.075)
        assert found.spread.maximum == pytest.approx(2.5 * (1 + 3.83 * 1.01 / 0.99))
        assert found.spread.minimum == pytest.approx(2.5 * (1 + 3.83 * 0.99 / 1.01))

    def test_an_input_without_a_path(self, design_of: DesignOf):
        found = regulated(design_of(self.DIVIDER + "C1 SET 0 1n\nC2 SET VREF 1n"), "FB", "SET")
        assert isinstance(found, Unsolved)
        assert found.nets == ("SET",)

    def test_an_output_that_moves_nothing_is_infinite(self, design_of: DesignOf):
        lines = "V1 VREF 0 2.5\nR1 OUT X 1k\nR2 X 0 1k\nR3 VREF FB 1k\nR4 FB 0 1k"
        found = regulated(design_of(lines), "FB", "VREF")
        assert isinstance(found, Estimate)
        assert found.spread.nominal == np.inf

    def test_feedback_that_changes_its_sign_within_the_tolerances(self, design_of: DesignOf):
        # Both inputs see half the output, but for tolerances: between two corners the output is infinite.
        lines = """
        V1 VREF 0 2.5
        R1 OUT P 10k
        R2 P 0 9.9k
        R3 OUT M 10k
        R4 M VREF 10k
        """
        found = regulated(design_of(lines.replace("        ", "")), "P", "M")
        assert isinstance(found, Unsolved)
        assert "sign" in found.reason

    def test_a_source_that_feeds_back_on_itself_without_bound_within_the_tolerances(
        self, design_of: DesignOf
    ):
        # (VREF - A) / R1 + (2 A - A) / R2 = 0: where R1 equals R2, A is infinite.
        lines = "V1 VREF 0 5\nR1 VREF A 1k tol=1%\nR2 E A 1.001k tol=1%\nE1 E 0 A 0 2"
        found = design_of(lines).voltage("A")
        assert isinstance(found, Unsolved)
        assert "sign" in found.reason

    def test_a_trimmer_that_shorts_the_feedback_at_its_stop(self, design_of: DesignOf):
        found = regulated(design_of(self.DIVIDER + "RV1 FB FB 0 10k tol=0"), "FB", "VREF")
        assert isinstance(found, Estimate)
        assert found.spread.maximum == np.inf
        # At the other stop 10 kohm in parallel to 10 kohm; the resistors at their ends.
        assert found.spread.minimum == pytest.approx(2.5 * (1 + 37.917 * (1 / 10.1 + 1 / 10)))


def test_a_network_too_large_to_solve_is_left_open(design_of: Callable[..., Design]):
    rungs = "\n".join(f"R{i} N{i} N{i + 1} 1k\nR{1000 + i} N{i + 1} 0 1k" for i in range(200))
    found = design_of(f"V1 N0 0 5\n{rungs}").voltage("N200")
    assert isinstance(found, Unsolved)
    assert found.reason == "the network round N200 has 400 parts, too many to solve"
