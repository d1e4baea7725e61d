from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint.circuit.bleeder import bleeder
from pwmlint.lint.design import Design

DesignOf = Callable[..., Design]


def test_a_chain(design_of: DesignOf):
    found = bleeder(design_of("R1 A M 470k tol=5\nR2 M B 470k tol=5").circuit, ["A"], ["B"])
    assert found is not None
    assert found.resistance.minimum == pytest.approx(893e3)
    assert found.resistance.nominal == pytest.approx(940e3)
    assert found.resistance.maximum == pytest.approx(987e3)
    assert found.shares == {"R1": pytest.approx(0.5), "R2": pytest.approx(0.5)}


def test_two_in_parallel_with_a_stub_that_leads_nowhere(design_of: DesignOf):
    lines = "R1 A B 1meg tol=0\nR2 B A 1meg tol=0\nR3 A X 1k\nC1 X B 1u"
    found = bleeder(design_of(lines).circuit, ["A"], ["B"])
    assert found is not None
    assert found.resistance.nominal == pytest.approx(500e3)
    assert set(found.shares) == {"R1", "R2"}


def test_a_bridge_of_five(design_of: DesignOf):
    # a balanced bridge: nothing flows in R5
    lines = "R1 A X 1k tol=0\nR2 X B 1k tol=0\nR3 A Y 2k tol=0\nR4 Y B 2k tol=0\nR5 X Y 1k tol=0"
    found = bleeder(design_of(lines).circuit, ["A"], ["B"])
    assert found is not None
    assert found.resistance.nominal == pytest.approx(4000 / 3)
    assert "R5" not in found.shares


def test_nets_that_are_joined_count_as_one(design_of: DesignOf):
    found = bleeder(design_of("R1 A2 B 1k tol=0\nR2 A A2 1").circuit, ["A", "A2"], ["B"])
    assert found is not None
    assert set(found.shares) == {"R1"}


@pytest.mark.parametrize(
    "lines",
    [
        "C1 A B 1u",
        "R1 A X 1k\nR2 B Y 1k",
        "R1 A B",
        "R1 A X\nR2 X B 1k",
        "R1 A X 1k\nD1 X B DX",
        "R1 A X 1k\nC1 X B 1u",
    ],
)
def test_no_resistors_all_the_way(design_of: DesignOf, lines: str):
    assert bleeder(design_of(f"{lines}\nR8 A P 1k\nR9 B Q 1k").circuit, ["A"], ["B"]) is None


def test_a_wide_board_is_walked_no_further_than_the_bound(design_of: DesignOf):
    lines = [f"R{i} N{i} N{i + 1} 1k" for i in range(1000)]
    assert bleeder(design_of("\n".join(lines)).circuit, ["N0"], ["N1000"]) is None
