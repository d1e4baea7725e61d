"""Estimates: explained, scaled; what could not be solved."""

from __future__ import annotations

import pytest
from pwmlint.lint.estimate import Estimate, Unsolved
from pwmlint.lint.quantity import Spread

FREQUENCY = Estimate(
    Spread(40e3, 50e3, 60e3, "Hz"), Spread(45e3, 50e3, 55e3, "Hz"), (("R5", 1.0),), ("R5", "C3"), ("RATE",)
)


def test_explained_by_a_formula():
    explained = FREQUENCY.because("f = k / (R C)")
    assert explained.formula == "f = k / (R C)"
    assert explained.spread == FREQUENCY.spread
    assert FREQUENCY.formula == ""


def test_scaled_keeps_what_went_into_it():
    half = FREQUENCY.scaled(0.5)
    assert half.spread == Spread(20e3, 25e3, 30e3, "Hz")
    assert half.statistical == Spread(22.5e3, 25e3, 27.5e3, "Hz")
    assert (half.parts, half.contributions) == (FREQUENCY.parts, FREQUENCY.contributions)


def test_scaled_into_another_unit():
    assert FREQUENCY.scaled(1e-3, "").spread.unit == ""


@pytest.mark.parametrize("factor", [0.0, -2.0])
def test_a_factor_that_turns_the_ends_round_is_refused(factor: float):
    with pytest.raises(ValueError, match="turn the ends"):
        FREQUENCY.scaled(factor)


def test_unsolved_names_what_stood_in_the_way():
    unsolved = Unsolved("net A: Q1 switches it", parts=("Q1",))
    assert (unsolved.parts, unsolved.nets, unsolved.needs) == (("Q1",), (), ())
