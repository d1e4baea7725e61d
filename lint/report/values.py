"""Quantities as data for programs: plain objects of numbers in SI base units."""

from __future__ import annotations

from math import isfinite

from ..quantity import Spread
from ..verdict import Limit

_DIGITS, _LEAST = 9, 1e-15

# An object of numbers and the name of their unit.
Values = dict[str, float | str | None]


def spread_values(spread: Spread) -> Values:
    """Return the three values of a spread and its unit."""
    return {
        "minimum": number(spread.minimum),
        "nominal": number(spread.nominal),
        "maximum": number(spread.maximum),
        "unit": spread.unit,
    }


def limit_values(limit: Limit) -> Values:
    """Return the two sides of a limit and its unit."""
    return {"minimum": number(limit.minimum), "maximum": number(limit.maximum), "unit": limit.unit}


def number(value: float | None) -> float | None:
    """Return a number as JSON can hold it: there is no infinity in JSON, null stands for it.

    Nine digits of it: what comes after them, or is that near to zero, is the rounding of the machine that
    computed it, and the same input must give the same bytes on another.
    """
    if value is None or not isfinite(value):
        return None
    return float(f"{value:.{_DIGITS}g}") if abs(value) >= _LEAST else 0.0
