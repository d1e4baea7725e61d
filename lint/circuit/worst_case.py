"""Worst-case analysis: extreme values, root-sum-square, and who contributes what.

Published methods: ECSS-Q-HB-30-01A (extreme value analysis, root-sum-square, what a report must say) and
the practice that supplies, loads and trimmers are outer loops whose ends are never root-summed.

- Extreme value: every parameter at its worst end at once. All corners up to `MOST_CORNER_PARAMETERS`;
  beyond, each quantity's ends are looked for along the signs of its sensitivities.
- Root-sum-square: tolerances vary independently and each half-width counts as three sigma; for every
  corner of the outer loops the half-widths of the result are root-summed about its centre. What is bias
  in a tolerance adds up in full: only the random share is root-summed.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from enum import Enum, auto
from itertools import product
from typing import TypeAlias

import numpy as np

from ..quantity import Spread
from .solver import Array, Sample

MOST_CORNER_PARAMETERS = 12

# A trimmer is looked at along its travel, not only at the ends: between them a result may turn round.
_TRAVEL = (0.0, 0.25, 0.5, 0.75, 1.0)

# A result may leave the corners by this share of its size before it counts as not monotonic (rounding).
_ROUNDING = 1e-9


class Variation(Enum):
    """Why a parameter varies."""

    TOLERANCE = auto()  # from unit to unit, independent of the others: may be root-summed
    RANGE = auto()  # supply, load, regime: any value will be met, an outer loop
    TRAVEL = auto()  # position of a trimmer: an outer loop, looked at in between as well


@dataclass(frozen=True, slots=True)
class Parameter:
    """Something that varies: `low <= nominal <= high`, in SI base units; `label` is for people.

    random: the share (0 to 1) of a tolerance that varies from unit to unit on its own; the rest is bias
            (temperature, ageing), which hits all units alike and is never root-summed
    """

    name: str
    low: float
    nominal: float
    high: float
    variation: Variation = Variation.TOLERANCE
    label: str = ""
    random: float = 1.0

    def __post_init__(self) -> None:
        """Refuse crossed ends."""
        if not self.low <= self.nominal <= self.high:
            raise ValueError(f"{self.name}: {self.low} .. {self.nominal} .. {self.high}")


Evaluate: TypeAlias = Callable[[Sample, int], Mapping[str, Array]]


@dataclass(frozen=True, slots=True)
class Analysis:
    """What one quantity does over its parameters.

    contributions: (label, share 0..1 of the summed one-at-a-time half-widths), the greatest first
    monotonic:     False where a value inside the box lies outside its corners: the ends are then not
                   to be trusted, and the caller must say so instead of printing them
    """

    spread: Spread
    statistical: Spread
    contributions: tuple[tuple[str, float], ...]
    monotonic: bool


def analyse(
    parameters: Sequence[Parameter], evaluate: Evaluate, units: Mapping[str, str]
) -> dict[str, Analysis]:
    """Return the analysis of every quantity that `evaluate` computes.

    parameters: what varies; names are the keys of the samples
    evaluate:   (sample, size) to quantity name -> array of shape (size,)
    units:      quantity name to its unit
    """
    samples = Samples(parameters)
    rows = np.vstack([samples.nominal(), samples.corners(), samples.star()])
    values = evaluate(samples.as_sample(rows), len(rows))
    first_star = len(rows) - samples.star_rows
    outer = _outer_loops(samples, evaluate)
    found: dict[str, Analysis] = {}
    for name, column in values.items():
        nominal, corners, star = column[0], column[1:first_star], column[first_star:]
        if len(samples.varying) > MOST_CORNER_PARAMETERS:
            corners = np.concatenate([corners, _directed(samples, evaluate, name, star)])
        found[name] = _analysis(samples, float(nominal), corners, star, outer[name], units[name])
    return found


class Samples:
    """Builds the rows of parameter values at which the quantities are evaluated."""

    def __init__(self, parameters: Sequence[Parameter]) -> None:
        self.parameters = tuple(parameters)
        self.varying = [i for i, p in enumerate(self.parameters) if p.low != p.high]
        self.tolerances = [i for i in self.varying if self.parameters[i].variation is Variation.TOLERANCE]
        self.outer = [i for i in self.varying if self.parameters[i].variation is not Variation.TOLERANCE]
        self._nominal = np.array([p.nominal for p in self.parameters], dtype=np.float64)
        self.star_rows = 2 * len(self.varying)

    def as_sample(self, rows: Array) -> Sample:
        """Return rows of parameter values as the sample that an evaluation takes."""
        return {p.name: rows[:, i] for i, p in enumerate(self.parameters)}

    def nominal(self) -> Array:
        """Return one row: every parameter at its nominal value."""
        return self._nominal[None, :]

    def corners(self) -> Array:
        """Return all corners, or only the outer ones where there are too many parameters for all."""
        indices = self.varying if len(self.varying) <= MOST_CORNER_PARAMETERS else self.outer
        return self.combinations(indices[:MOST_CORNER_PARAMETERS])

    def outer_corners(self) -> Array:
        """Return the corners of the outer loops, tolerances at their nominal values."""
        return self.combinations(self.outer[:MOST_CORNER_PARAMETERS])

    def star(self) -> Array:
        """Return two rows a varying parameter: it alone at its low end, then at its high end."""
        return self.star_about(self._nominal, self.varying)

    def star_about(self, centre: Array, indices: Sequence[int]) -> Array:
        """Return two rows a parameter about any centre: it alone at its low end, then at its high end."""
        rows = np.repeat(centre[None, :], 2 * len(indices), axis=0)
        for position, index in enumerate(indices):
            rows[2 * position, index] = self.parameters[index].low
            rows[2 * position + 1, index] = self.parameters[index].high
        return rows

    def combinations(self, indices: Sequence[int]) -> Array:
        """Return every combination of the stations of the given parameters, the others nominal."""
        choices = [_stations(self.parameters[index]) for index in indices]
        rows = np.repeat(self.nominal(), int(np.prod([len(c) for c in choices])), axis=0)
        if indices:
            rows[:, list(indices)] = list(product(*choices))
        return rows


def _stations(parameter: Parameter) -> tuple[float, ...]:
    if parameter.variation is Variation.TRAVEL:
        return tuple(parameter.low + share * (parameter.high - parameter.low) for share in _TRAVEL)
    return (parameter.low, parameter.high)


def _directed(samples: Samples, evaluate: Evaluate, name: str, star: Array) -> Array:
    """Return the values of one quantity at the two corners that its sensitivities point to.

    Used beyond MOST_CORNER_PARAMETERS, where trying every corner would take too long.
    """
    rows = np.repeat(samples.nominal(), 2, axis=0)
    for position, index in enumerate(samples.varying):
        low, high = samples.parameters[index].low, samples.parameters[index].high
        rises = star[2 * position + 1] >= star[2 * position]
        rows[0, index] = low if rises else high
        rows[1, index] = high if rises else low
    return evaluate(samples.as_sample(rows), 2)[name]


def _outer_loops(samples: Samples, evaluate: Evaluate) -> dict[str, tuple[Array, Array]]:
    """Return, for each quantity, the centre of every outer corner and its root-summed half-width."""
    centres = samples.outer_corners()
    block = 1 + 2 * len(samples.tolerances)
    rows = np.vstack(
        [np.vstack([centre[None, :], samples.star_about(centre, samples.tolerances)]) for centre in centres]
    )
    values = evaluate(samples.as_sample(rows), len(rows))
    random = np.array([samples.parameters[index].random for index in samples.tolerances], dtype=np.float64)
    loops: dict[str, tuple[Array, Array]] = {}
    for name, column in values.items():
        table = column.reshape(len(centres), block)
        with np.errstate(invalid="ignore"):
            half_widths = np.abs(table[:, 2::2] - table[:, 1::2]) / 2
        root_sum = np.sqrt(np.sum((half_widths * random) ** 2, axis=1))
        loops[name] = table[:, 0], root_sum + np.sum(half_widths * (1 - random), axis=1)
    return loops


def _analysis(
    samples: Samples,
    nominal: float,
    corners: Array,
    star: Array,
    outer: tuple[Array, Array],
    unit: str,
) -> Analysis:
    low, high = float(np.min(corners)), float(np.max(corners))
    inside = np.append(star, nominal)
    slack = _ROUNDING * max(abs(low), abs(high), abs(nominal), 1e-30)
    finite = bool(np.isfinite([low, high, nominal]).all())
    monotonic = not finite or bool(np.all(inside >= low - slack) and np.all(inside <= high + slack))
    spread = Spread(min(low, nominal), nominal, max(high, nominal), unit)
    centre, half_width = outer
    with np.errstate(invalid="ignore"):
        least = _finite_or(float(np.min(centre - half_width)), spread.minimum)
        most = _finite_or(float(np.max(centre + half_width)), spread.maximum)
    statistical = Spread(min(least, nominal), nominal, max(most, nominal), unit)
    return Analysis(spread, statistical, _contributions(samples, star), monotonic)


def _finite_or(value: float, fallback: float) -> float:
    return value if np.isfinite(value) else fallback


def _contributions(samples: Samples, star: Array) -> tuple[tuple[str, float], ...]:
    with np.errstate(invalid="ignore"):
        widths = np.nan_to_num(np.abs(star[1::2] - star[0::2]), posinf=0.0)
    total = float(np.sum(widths))
    if total == 0:
        return ()
    labels = [samples.parameters[i].label or samples.parameters[i].name for i in samples.varying]
    ranked = sorted(zip(labels, (float(w) / total for w in widths), strict=True), key=lambda x: (-x[1], x[0]))
    return tuple((label, share) for label, share in ranked if share > 0)
