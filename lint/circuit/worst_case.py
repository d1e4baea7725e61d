"""Worst-case analysis: extreme values, root-sum-square, and who contributes what.

Published methods: ECSS-Q-HB-30-01A (extreme value analysis, root-sum-square, what a report must say) and
the practice that supplies, loads and trimmers are outer loops whose ends are never root-summed.

- Extreme value: every parameter at its worst end at once. All corners while they are few; beyond, each
  quantity's ends are looked for along the signs of its sensitivities, at every corner of the outer loops,
  and followed until no single parameter at its other end makes the result any worse.
- Root-sum-square: tolerances vary independently and each half-width counts as three sigma; for every
  corner of the outer loops the half-widths of the result are root-summed about its centre. What is bias
  in a tolerance adds up in full: only the random share is root-summed.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from enum import Enum, auto
from math import isfinite, prod
from typing import TypeAlias

import numpy as np

from ..quantity import Spread
from .linear import Array
from .network import Sample

MOST_CORNER_PARAMETERS = 12
_MOST_CORNERS = 25_600  # twelve parameters, two of them trimmers
_MOST_OUTER_CORNERS = 625  # four trimmers
_MOST_ROWS_AT_ONCE = 1_000  # what the fast memory of a processor holds; more takes longer
_MOST_STEPS = 20  # of the search for a worst corner

# A trimmer is looked at along its travel, not only at the ends: between them a result may turn round.
_TRAVEL = (0.0, 0.25, 0.5, 0.75, 1.0)

# A share of the spread that is less is rounding: no contribution, and no rank above another.
_LEAST_SHARE = 1e-9

# A result may leave the corners by this share of its size before it counts as not monotonic (rounding).
_ROUNDING = 1e-9

# A current of zero, or the difference of two nets at one voltage, comes out of the solver as less than this.
_ROUNDED_ZERO = 1e-12


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


# A value that no part has (1e308 ohm) may overflow to infinity, and counts as that.
@np.errstate(over="ignore", invalid="ignore")
def analyse(
    parameters: Sequence[Parameter], evaluate: Evaluate, units: Mapping[str, str]
) -> dict[str, Analysis]:
    """Return the analysis of every quantity that `evaluate` computes.

    parameters: what varies; names are the keys of the samples
    evaluate:   (sample, size) to quantity name -> array of shape (size,)
    units:      quantity name to its unit
    """
    samples = Samples(parameters)
    evaluate = in_slices(evaluate)
    loops = _OuterLoops(samples)
    star, corner_rows = samples.star(), samples.corners()
    rows = np.concatenate([star, samples.halfway(star), loops.rows, corner_rows])
    ends, inside, around = len(star), 2 * len(star) - 1, len(rows) - len(corner_rows)
    found: dict[str, Analysis] = {}
    for name, column in evaluate(samples.as_sample(rows), len(rows)).items():
        table, corners = loops.table(column[:ends], column[inside:around]), column[around:]
        settled = True
        if not samples.has_all_corners:
            searched, settled = _Search(samples, evaluate, name).both_ends(*loops.directed(table))
            corners = np.concatenate([corners, searched])
        analysis = _analysis(column[:inside], corners, loops.statistical(table), units[name])
        contributions = _contributions(samples, column[1:ends])
        found[name] = Analysis(*analysis[:2], contributions, monotonic=settled and analysis[2])
    return found


def in_slices(evaluate: Evaluate) -> Evaluate:
    """Return `evaluate` with its memory bounded: a slice of the samples at a time."""

    def sliced(sample: Sample, size: int) -> Mapping[str, Array]:
        if size <= _MOST_ROWS_AT_ONCE:
            return evaluate(sample, size)
        parts: list[Mapping[str, Array]] = []
        for start in range(0, size, _MOST_ROWS_AT_ONCE):
            piece = slice(start, min(start + _MOST_ROWS_AT_ONCE, size))
            columns = {name: column[piece] for name, column in sample.items()}
            parts.append(evaluate(columns, piece.stop - piece.start))
        return {name: np.concatenate([part[name] for part in parts]) for name in parts[0]}

    return sliced


class Samples:
    """Builds the rows of parameter values at which the quantities are evaluated."""

    def __init__(self, parameters: Sequence[Parameter]) -> None:
        self.parameters = tuple(parameters)
        self.varying = [i for i, p in enumerate(self.parameters) if p.low != p.high]
        self.tolerances = [i for i in self.varying if self.parameters[i].variation is Variation.TOLERANCE]
        self.outer = [i for i in self.varying if self.parameters[i].variation is not Variation.TOLERANCE]
        self._nominal = np.array([p.nominal for p in self.parameters], dtype=np.float64)
        self._choices = {i: _stations(self.parameters[i]) for i in self.varying}

    def as_sample(self, rows: Array) -> Sample:
        """Return rows of parameter values as the sample that an evaluation takes."""
        columns = np.ascontiguousarray(rows.T)  # each column is run through more than once
        return {p.name: column for p, column in zip(self.parameters, columns, strict=True)}

    def nominal(self) -> Array:
        """Return one row: every parameter at its nominal value."""
        return self._nominal[None, :]

    @property
    def has_all_corners(self) -> bool:
        """Tell whether `corners` are all there are."""
        return len(self.varying) <= MOST_CORNER_PARAMETERS and _grid_size(self._choices) <= _MOST_CORNERS

    @property
    def has_all_outer_corners(self) -> bool:
        """Tell whether `outer_corners` holds every combination of the ends of the outer loops."""
        return 2 ** len(self.outer) <= _MOST_OUTER_CORNERS

    def corners(self) -> Array:
        """Return all corners, or only the outer ones where there are too many parameters for all."""
        return self.combinations(self._choices) if self.has_all_corners else self.outer_corners()

    def outer_corners(self) -> Array:
        """Return the corners of the outer loops, trimmers in between as well while that is not too much.

        Where even the ends are too many to combine: nominal, all low, all high, and each alone at its ends.
        """
        if not self.outer:
            return self.nominal()
        choices = {index: self._choices[index] for index in self.outer}
        if _grid_size(choices) <= _MOST_OUTER_CORNERS:
            return self.combinations(choices)
        ends = {i: (self.parameters[i].low, self.parameters[i].high) for i in self.outer}
        if self.has_all_outer_corners:
            return self.combinations(ends)
        together = np.repeat(self.nominal(), 2, axis=0)
        together[:, self.outer] = np.array(list(ends.values())).T
        return np.vstack([together, self.star_about(self.nominal(), self.outer)])

    def star(self) -> Array:
        """Return the nominal row, then two a varying parameter: it alone at its low and its high end."""
        return self.star_about(self.nominal(), self.varying)

    def halfway(self, star: Array) -> Array:
        """Return the rows half the way from nominal to each end of the star.

        Between the corners a quantity may turn round and come back: here it is caught on the way.
        """
        return star[1:] / 2 + self._nominal / 2  # halved first: the sum of two vast values overflows

    def star_about(self, centres: Array, indices: Sequence[int]) -> Array:
        """Return each centre, and after it two rows a parameter: it alone at its low and its high end."""
        each = 1 + 2 * len(indices)
        rows = np.repeat(centres, each, axis=0)
        for position, index in enumerate(indices):
            rows[2 * position + 1 :: each, index] = self.parameters[index].low
            rows[2 * position + 2 :: each, index] = self.parameters[index].high
        return rows

    def combinations(self, choices: Mapping[int, Sequence[float]]) -> Array:
        """Return a row for every combination of the given values of parameters, the others at nominal."""
        columns = np.repeat(self._nominal[:, None], _grid_size(choices), axis=1)
        rounds = 1
        for index, values in choices.items():
            # The first parameter goes through its values once, each further one within each value before.
            periods = columns[index].reshape(rounds, len(values), -1)
            for position, value in enumerate(values):
                periods[:, position] = value
            rounds *= len(values)
        return columns.T


def _grid_size(choices: Mapping[int, Sequence[float]]) -> int:
    return prod(map(len, choices.values()))


def _stations(parameter: Parameter) -> tuple[float, ...]:
    if parameter.variation is Variation.TRAVEL:
        return tuple(parameter.low + share * (parameter.high - parameter.low) for share in _TRAVEL)
    return (parameter.low, parameter.high)


class _OuterLoops:
    """The outer corners, each with its tolerances one at a time at their ends.

    rows: for each outer corner, tolerances all at nominal, then low, high, low, high ...; none where nothing
          but tolerances varies, for then the star about nominal is all that
    """

    def __init__(self, samples: Samples) -> None:
        self.samples = samples
        self.centres = samples.outer_corners()
        self.rows = self.centres[:0]
        if samples.outer:
            self.rows = samples.star_about(self.centres, samples.tolerances)
        self._tolerances = [samples.parameters[index] for index in samples.tolerances]

    def table(self, about_nominal: Array, values: Array) -> Array:
        """Return the values about each outer corner, a row for each.

        about_nominal: the values at nominal and at the star about it
        values:        those at `rows`
        """
        return (values if self.samples.outer else about_nominal).reshape(len(self.centres), -1)

    def statistical(self, table: Array) -> tuple[float, float]:
        """Return the least and the greatest value by root-sum-square, NaN where they are not to be had."""
        if not self.samples.has_all_outer_corners:
            return np.nan, np.nan
        random = np.array([parameter.random for parameter in self._tolerances], dtype=np.float64)
        half_widths = np.abs(table[:, 2::2] - table[:, 1::2]) / 2
        half_width = np.sqrt(half_widths**2 @ random**2) + half_widths @ (1 - random)
        return float((table[:, 0] - half_width).min()), float((table[:, 0] + half_width).max())

    def directed(self, table: Array) -> tuple[Array, Array]:
        """Return, for each outer corner, where its sensitivities put the least value, and the greatest."""
        rises = table[:, 2::2] >= table[:, 1::2]
        least, most = self.centres.copy(), self.centres.copy()
        low, high = ([getattr(p, end) for p in self._tolerances] for end in ("low", "high"))
        least[:, self.samples.tolerances] = np.where(rises, low, high)
        most[:, self.samples.tolerances] = np.where(rises, high, low)
        return least, most


class _Search:
    """Looks for the worst corners of one quantity where trying every corner would take too long."""

    def __init__(self, samples: Samples, evaluate: Evaluate, name: str) -> None:
        self.samples = samples
        self._evaluate = evaluate
        self._name = name

    def both_ends(self, least: Array, most: Array) -> tuple[Array, bool]:
        """Return the values met on the way to both ends, and whether the search came to rest.

        least, most: rows to start from, those that promise little and those that promise much
        """
        found: list[Array] = []
        rested = True
        for rows, sign in ((least, -1.0), (most, 1.0)):
            values = sign * self._values(rows)
            start = int(np.argmax(values))
            end, at_rest = self._climbed(rows[start], float(values[start]), sign)
            found += [sign * values, np.array([sign * end])]
            rested = rested and at_rest
        return np.concatenate(found), rested

    def _climbed(self, row: Array, value: float, sign: float) -> tuple[float, bool]:
        """Move a corner on, each parameter to the other end that makes `sign` times the quantity greater."""
        varying = self.samples.varying
        for _ in range(_MOST_STEPS):
            star = self.samples.star_about(row[None, :], varying)[1:]
            around = sign * self._values(star)
            better = np.flatnonzero(around > value + _ROUNDING * abs(value))
            if not len(better):
                return value, True
            together = row.copy()
            for position in better:
                together[varying[position // 2]] = star[position, varying[position // 2]]
            steps = np.vstack([together, star[int(np.argmax(around))]])
            values = sign * self._values(steps)
            row, value = steps[int(np.argmax(values))], float(np.max(values))
        return value, False

    def _values(self, rows: Array) -> Array:
        return self._evaluate(self.samples.as_sample(rows), len(rows))[self._name]


def _analysis(
    inside: Array, corners: Array, statistical: tuple[float, float], unit: str
) -> tuple[Spread, Spread, bool]:
    """Return the spread, the statistical one, and whether the corners bound what lies between them.

    inside: the values between the corners, the nominal one first
    """
    nominal, low, high = float(inside[0]), float(corners.min()), float(corners.max())
    slack = max(_ROUNDING * max(abs(low), abs(high), abs(nominal)), _ROUNDED_ZERO)
    finite = isfinite(low) and isfinite(high) and isfinite(nominal)
    monotonic = not finite or (inside.min() >= low - slack and inside.max() <= high + slack)
    spread = Spread(min(low, nominal), nominal, max(high, nominal), unit)
    least, most = _finite_or(statistical[0], spread.minimum), _finite_or(statistical[1], spread.maximum)
    return spread, Spread(min(least, nominal), nominal, max(most, nominal), unit), monotonic


def _finite_or(value: float, fallback: float) -> float:
    return value if isfinite(value) else fallback


def _contributions(samples: Samples, star: Array) -> tuple[tuple[str, float], ...]:
    differences: list[float] = (star[1::2] - star[0::2]).tolist()
    widths = [abs(width) if isfinite(width) else 0.0 for width in differences]
    total = sum(widths)
    if total == 0:
        return ()
    parameters = [samples.parameters[index] for index in samples.varying]
    # Equal shares are ranked by name, whatever rounding makes of them.
    ranked = sorted(
        (-round(width / total / _LEAST_SHARE), parameter.label or parameter.name, width / total)
        for parameter, width in zip(parameters, widths, strict=True)
    )
    return tuple((label, share) for _, label, share in ranked if share > _LEAST_SHARE)
