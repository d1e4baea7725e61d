"""What reports for programs are made of: quantities as numbers in SI base units, and the text of a report."""

from __future__ import annotations

import json
from importlib.metadata import version
from math import isfinite
from typing import Any

from ..quantity import Spread
from ..verdict import Limit

_DIGITS, _LEAST = 9, 1e-15

# An object of numbers and the name of their unit.
Values = dict[str, float | str | None]


def spread_values(spread: Spread | None) -> Values | None:
    """Return the three values of a spread and its unit, None where there is none."""
    if spread is None:
        return None
    return {
        "minimum": number(spread.minimum),
        "nominal": number(spread.nominal),
        "maximum": number(spread.maximum),
        "unit": spread.unit,
    }


def limit_values(limit: Limit | None) -> Values | None:
    """Return the two sides of a limit and its unit, None where there is none."""
    if limit is None:
        return None
    return {"minimum": number(limit.minimum), "maximum": number(limit.maximum), "unit": limit.unit}


def number(value: float | None) -> float | None:
    """Return a number as JSON can hold it: there is no infinity in JSON, null stands for it.

    Nine digits of it: what comes after them, or is that near to zero, is the rounding of the machine that
    computed it, and the same input must give the same bytes on another.
    """
    if value is None or not isfinite(value):
        return None
    return float(f"{value:.{_DIGITS}g}") if abs(value) >= _LEAST else 0.0


def tool() -> dict[str, str]:
    """Return what wrote the report."""
    return {"name": "pwmlint", "version": version("pwmlint")}


def serialised(report: dict[str, Any]) -> str:
    """Return a report as the text of a file: ASCII throughout, no number that JSON has not."""
    return json.dumps(report, indent=2, allow_nan=False) + "\n"
