"""Monte Carlo analysis: draw the tolerances, keep the outer loops at their ends, state what was covered.

Published method: distribution-free tolerance limits after S. S. Wilks, "Determination of sample sizes for
setting tolerance limits", Annals of Mathematical Statistics 12 (1941), pp. 91-96: between the least and the
greatest of N draws lies, with confidence c, at least the share b of all units, where
1 - b^N - N (1 - b) b^(N-1) = c.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from math import log1p

import numpy as np

from ..quantity import Spread
from .linear import Array
from .worst_case import Evaluate, Parameter, Samples, in_slices

DEFAULT_SAMPLES = 10_000
DEFAULT_SEED = 1
CONFIDENCE = 0.95


@np.errstate(over="ignore", invalid="ignore")  # as in `analyse`
def monte_carlo(
    parameters: Sequence[Parameter],
    evaluate: Evaluate,
    units: Mapping[str, str],
    *,
    samples: int = DEFAULT_SAMPLES,
    seed: int = DEFAULT_SEED,
) -> dict[str, Spread]:
    """Return the least, nominal and greatest value of every quantity among the draws.

    Tolerances are drawn independently and evenly between their ends (the careful choice: real parts bunch
    about the middle). Supplies, loads and trimmers are outer loops: every corner of them gets its share of
    the draws, at least one.
    """
    plan = Samples(parameters)
    centres = plan.outer_corners()
    each = -(-samples // len(centres))
    rows = np.repeat(centres, each, axis=0)
    random = np.random.default_rng(seed)
    for index in plan.tolerances:
        parameter = parameters[index]
        rows[:, index] = random.uniform(parameter.low, parameter.high, len(rows))
    rows = np.vstack([plan.nominal(), rows])
    values = in_slices(evaluate)(plan.as_sample(rows), len(rows))
    return {name: _spread(column, units[name]) for name, column in values.items()}


def _spread(column: Array, unit: str) -> Spread:
    nominal = float(column[0])
    return Spread(float(np.min(column)), nominal, float(np.max(column)), unit)


def statement(samples: int = DEFAULT_SAMPLES, seed: int = DEFAULT_SEED) -> str:
    """Return what the draws prove, as a sentence for a report."""
    share = f"{100 * coverage(samples):.2f} %"
    return (
        f"Monte Carlo: {samples} draws at each question, even distributions, seed {seed}; with "
        f"{100 * CONFIDENCE:.0f} % confidence {share} of all units lie within (Wilks 1941)"
    )


def coverage(samples: int, confidence: float = CONFIDENCE) -> float:
    """Return the share of all units that lies, with `confidence`, between the least and greatest draw.

    samples: number of draws, at least 2
    """
    if samples < 2:
        raise ValueError("two draws are the least that have a least and a greatest")
    low, high = 0.0, 1.0
    for _ in range(60):
        share = (low + high) / 2
        low, high = (share, high) if _confidence(share, samples) > confidence else (low, share)
    return low


def _confidence(share: float, samples: int) -> float:
    """Return 1 - b^N - N (1 - b) b^(N-1), in logarithms where b^N would underflow."""
    if share <= 0:
        return 1.0
    power = np.exp((samples - 1) * log1p(share - 1))
    return float(1 - power * (share + samples * (1 - share)))
