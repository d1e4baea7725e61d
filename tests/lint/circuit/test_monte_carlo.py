"""Monte Carlo: what is drawn, what stays at its ends, what the draws prove, and that a seed repeats them."""

from __future__ import annotations

import numpy as np
import pytest
from pwmlint.lint.circuit.linear import Array
from pwmlint.lint.circuit.monte_carlo import coverage, monte_carlo, statement
from pwmlint.lint.circuit.network import Sample
from pwmlint.lint.circuit.worst_case import Parameter, Variation
from pwmlint.lint.quantity import Spread

UPPER = Parameter("R1", 990.0, 1000.0, 1010.0)
LOWER = Parameter("R2", 495.0, 500.0, 505.0)
SUPPLY = Parameter("V", 10.0, 12.0, 15.0, Variation.RANGE)
TRIMMER = Parameter("RV1", 0.0, 0.5, 1.0, Variation.TRAVEL)


def drawn(*parameters: Parameter, samples: int = 2000, seed: int = 1) -> Spread:
    """Return the spread of V x RV1 x R1 / (R1 + R2), of whichever of them are given."""

    def evaluate(sample: Sample, size: int) -> dict[str, Array]:
        value = np.ones(size)
        if "R1" in sample:
            value = value * sample["R1"] / (sample["R1"] + sample["R2"])
        for name in ("V", "RV1"):
            if name in sample:
                value = value * sample[name]
        return {"output": value}

    return monte_carlo(parameters, evaluate, {"output": "V"}, samples=samples, seed=seed)["output"]


def test_draws_lie_inside_the_corners_and_nearly_reach_them():
    found = drawn(UPPER, LOWER)
    low, high = 990 / (990 + 505), 1010 / (1010 + 495)
    assert low < found.minimum < found.maximum < high
    assert found.minimum == pytest.approx(low, rel=1e-3)
    assert found.maximum == pytest.approx(high, rel=1e-3)


def test_the_nominal_is_that_of_nominal_parts():
    assert drawn(UPPER, LOWER).nominal == pytest.approx(1000 / 1500)
    assert drawn(SUPPLY).nominal == 12.0


def test_supplies_and_trimmers_go_to_their_very_ends():
    # Outer loops are no random quantities: a tired battery and a full one will both be met.
    assert (drawn(SUPPLY).minimum, drawn(SUPPLY).maximum) == (10.0, 15.0)
    assert (drawn(TRIMMER).minimum, drawn(TRIMMER).maximum) == (0.0, 1.0)


def test_few_samples_still_visit_every_outer_corner():
    found = drawn(SUPPLY, TRIMMER, samples=1)
    assert (found.minimum, found.maximum) == (0.0, 15.0)


def test_a_seed_repeats_the_draws_and_another_does_not():
    assert drawn(UPPER, LOWER) == drawn(UPPER, LOWER)
    assert drawn(UPPER, LOWER, seed=2) != drawn(UPPER, LOWER)


def test_nothing_varies():
    exact = Parameter("V", 5.0, 5.0, 5.0)
    assert drawn(exact) == Spread.exact(5.0, "V")


@pytest.mark.parametrize(
    ("samples", "share"),
    [
        # S. S. Wilks, Ann. Math. Statist. 12 (1941): 93 draws hold 95 % of all units with 95 % confidence,
        # two-sided; 473 hold 99 % (from memory, as tables of tolerance limits give them)
        pytest.param(93, 0.95, id="95/95"),
        pytest.param(473, 0.99, id="95/99"),
    ],
)
def test_published_sample_sizes(samples: int, share: float):
    assert coverage(samples) >= share
    assert coverage(samples - 1) < share


def test_the_coverage_solves_its_equation():
    share = coverage(10_000)
    confidence = 1 - share**10_000 - 10_000 * (1 - share) * share**9_999
    assert confidence == pytest.approx(0.95, abs=1e-9)


def test_one_draw_proves_nothing():
    with pytest.raises(ValueError, match="two draws"):
        coverage(1)


def test_the_statement_names_draws_seed_and_source():
    said = statement(10_000, 7)
    assert "10000 draws" in said
    assert "seed 7" in said
    assert "Wilks 1941" in said
    assert f"{100 * coverage(10_000):.2f} %" in said
