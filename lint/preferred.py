"""Preferred values: the E series of IEC 60063, the values nearest to a wanted one, and usual wattages."""

from __future__ import annotations

from bisect import bisect_left
from collections.abc import Iterator, Sequence
from functools import cache
from math import floor, isinf, log, log10

# IEC 60063: E24 and the series within it are historical and follow no formula.
_E24 = (10, 11, 12, 13, 15, 16, 18, 20, 22, 24, 27, 30, 33, 36, 39, 43, 47, 51, 56, 62, 68, 75, 82, 91)
_OF_E24 = {"E3": 8, "E6": 4, "E12": 2, "E24": 1}

# IEC 60063: E48, E96 and E192 are 10^(k/192) to three digits, but for k = 185: 9.20 in place of 9.19.
_OF_E192 = {"E48": 4, "E96": 2, "E192": 1}
_E192_EXCEPTION = (185, 920)

# Power ratings of resistors as sold, in W, then 1, 2, 5 in each decade (common practice, no source).
_WATTAGES = (0.0625, 0.1, 0.125, 0.25, 0.5, 1.0, 2.0, 3.0, 5.0, 7.0, 10.0, 15.0, 25.0, 50.0)

# What a component's value can be, in any unit.
_LEAST, _GREATEST = 1e-18, 1e15

# Two floats of one marked value differ by rounding only.
_SAME = 1e-6

# How far the sum of a pair may lie from the wanted one, as a factor.
_TOTAL_WITHIN = 2.0


@cache
def series(name: str) -> tuple[float, ...]:
    """Return the values of a series, 1 to below 10; KeyError for a name that is not E3 .. E192."""
    if name in _OF_E24:
        return tuple(value / 10 for value in _E24[:: _OF_E24[name]])
    fine = [round(100 * 10 ** (k / 192)) for k in range(192)]
    exception, value = _E192_EXCEPTION
    fine[exception] = value
    return tuple(value / 100 for value in fine[:: _OF_E192[name]])


def is_a_size(value: float) -> bool:
    """Tell whether any part could have this value: neither zero nor negative, nor beyond all sizes."""
    return _LEAST <= value <= _GREATEST


def neighbours(value: float, name: str) -> tuple[float, float]:
    """Return the preferred values below and above `value`, both the same where it is preferred itself.

    Raises ValueError for a value that no part has: zero, negative, or beyond all sizes.
    """
    if not is_a_size(value):
        raise ValueError(f"no preferred value near {value}")
    decade = floor(log10(value))
    values = [*_decade_values(name, decade), float(f"1e{decade + 1}")]
    above = bisect_left(values, value * (1 - _SAME))
    if above == 0 or values[above] <= value * (1 + _SAME):
        return values[above], values[above]
    return values[above - 1], values[above]


def nearest(value: float, name: str) -> float:
    """Return the preferred value nearest to `value`, by ratio."""
    below, above = neighbours(value, name)
    return below if value / below <= above / value else above


def is_preferred(value: float, names: Sequence[str]) -> bool:
    """Tell whether `value` belongs to one of the series."""
    if not _LEAST <= value <= _GREATEST:
        return False
    return any(below == above for below, above in (neighbours(value, name) for name in names))


def nearest_pair(ratio: float, name: str, total: float) -> tuple[float, float]:
    """Return the (top, bottom) of a divider whose top / bottom is nearest to `ratio`.

    total: the wanted top + bottom; the sum of the pair lies within a factor of two of it. Among pairs of
           equal ratio the one with the nearest sum is taken.
    """
    if not (ratio > 0 and total > 0):
        raise ValueError(f"no pair of ratio {ratio} and total {total}")
    ideal = total / (1 + ratio)

    def miss(pair: tuple[float, float]) -> tuple[float, float]:
        top, bottom = pair
        return round(abs(log(top / bottom / ratio)), 9), abs(log((top + bottom) / total))

    bottoms = _between(ideal / _TOTAL_WITHIN, ideal * _TOTAL_WITHIN, name)
    return min(((top, bottom) for bottom in bottoms for top in neighbours(bottom * ratio, name)), key=miss)


def next_wattage(power: float) -> float:
    """Return the least usual power rating of a resistor that is at least `power`, in W."""
    if power <= _WATTAGES[-1]:
        return _WATTAGES[bisect_left(_WATTAGES, power)]
    if isinf(power):
        return power
    decade = 10.0 ** floor(log10(power))
    return next(step * decade for step in (1, 2, 5, 10) if step * decade >= power)


def _between(low: float, high: float, name: str) -> Iterator[float]:
    """Yield the preferred values from `low` to `high`."""
    for decade in range(floor(log10(low)), floor(log10(high)) + 1):
        yield from (value for value in _decade_values(name, decade) if low <= value <= high)


@cache
def _decade_values(name: str, decade: int) -> tuple[float, ...]:
    # By way of text: 4.7 times 1e-9 is a hair beside 4.7e-09.
    return tuple(float(f"{value}e{decade}") for value in series(name))
