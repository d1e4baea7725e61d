"""The series of IEC 60063 against an independent list of them (the package `eseries`)."""

from math import log
from typing import cast

import eseries
import pytest
from pwmlint.lint.preferred import nearest, series

NAMES = ("E3", "E6", "E12", "E24", "E48", "E96", "E192")


def listed(name: str) -> list[float]:
    """Return the series of the package from 1 to below 10."""
    values = cast("tuple[int, ...]", eseries.series(getattr(eseries, name)))  # pyright: ignore[reportUnknownMemberType]  # untyped package
    return [value / values[0] for value in values]


@pytest.mark.parametrize("name", NAMES)
def test_series_agrees_with_an_independent_list(name: str) -> None:
    assert series(name) == pytest.approx(listed(name), rel=1e-12)


@pytest.mark.parametrize("name", NAMES)
@pytest.mark.parametrize("value", [0.0137, 0.5, 1.04, 7.77, 33.5, 417.0, 4949.0, 98.7e3, 1.234e6])
def test_nearest_is_the_nearest_by_ratio_of_an_independent_list(name: str, value: float) -> None:
    every = [mantissa * 10.0**decade for decade in range(-3, 8) for mantissa in listed(name)]
    best = min(every, key=lambda one: abs(log(one / value)))
    assert nearest(value, name) == pytest.approx(best)


def test_the_exception_of_e192_is_in_it() -> None:
    """IEC 60063: 10^(185/192) rounds to 9.19, the standard has 9.20."""
    assert round(10 ** (185 / 192), 2) == 9.19
    assert 9.20 in series("E192")
    assert 9.19 not in series("E192")


def test_historical_values_of_e24_differ_from_the_formula() -> None:
    """IEC 60063: 27, 30, 33, 36, 39, 43, 47 and 82 are not what rounding 10^(k/24) gives."""
    formula = [round(10 * 10 ** (k / 24)) for k in range(24)]
    differing = [round(10 * v) for v, f in zip(series("E24"), formula, strict=True) if round(10 * v) != f]
    assert differing == [27, 30, 33, 36, 39, 43, 47, 82]
