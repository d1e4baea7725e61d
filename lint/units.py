"""Where pint stands: texts such as "45 kHz .. 55 kHz" to a Spread in SI base units, never by evaluation."""

from __future__ import annotations

import re
from contextlib import suppress
from functools import cache
from math import isfinite
from pathlib import Path
from typing import TYPE_CHECKING, cast

from .quantity import Spread

if TYPE_CHECKING:
    from pint import UnitRegistry
    from pint.facets.plain import PlainQuantity

_EXPECTED = {
    "V": "a voltage such as 12 V",
    "A": "a current such as 1.5 A",
    "ohm": "a resistance such as 4.7 kohm",
    "F": "a capacitance such as 100 nF",
    "H": "an inductance such as 47 uH",
    "s": "a time such as 5 ms",
    "Hz": "a frequency such as 50 kHz",
    "W": "a power such as 2 W",
    "J": "an energy such as 20 mJ",
    "degC": "a temperature such as 50 degC",
    "": "a ratio such as 45 %",
}

_LONGEST_TEXT = 200
_RANGE = re.compile(r"\s*(?:\.\.\.?|…)\s*")
_NUMBER_AND_UNIT = re.compile(
    r"(?P<number>[+-]?(?:[0-9]+(?:\.[0-9]+)?|\.[0-9]+)(?:[eE][+-]?[0-9]{1,3})?)\s*"
    r"(?P<unit>%|°?[A-Za-z\N{MICRO SIGN}\N{GREEK SMALL LETTER MU}\N{GREEK CAPITAL LETTER OMEGA}]*)"
)


class QuantityTextError(ValueError):
    """A quantity that cannot be read: `column` counts from 1 in the text, `expected` says what fits."""

    def __init__(self, message: str, *, column: int = 1, expected: str = "") -> None:
        super().__init__(message)
        self.column = column
        self.expected = expected


@cache
def registry() -> UnitRegistry[float]:
    """Return the pint registry of all our quantities: the units of lint/units.txt."""
    from pint import UnitRegistry

    # None is pint's own way to begin without its file of units; only its annotation leaves it out.
    units = cast("UnitRegistry[float]", UnitRegistry(None))  # pyright: ignore[reportArgumentType]
    units.load_definitions(Path(__file__).with_name("units.txt").read_text(encoding="utf-8").splitlines())
    return units


def quantity(value: float, unit: str) -> PlainQuantity[float]:
    """Return `value` of `unit` (a name such as "V", or "" for a ratio) as a pint quantity of our registry."""
    # pint leaves the number type of `Quantity` open; here it is float
    return cast("PlainQuantity[float]", registry().Quantity(value, unit or "dimensionless"))  # pyright: ignore[reportUnknownMemberType]


def read_range(text: str, unit: str) -> Spread:
    """Return "10 V .. 15 V", "10 .. 15 V" or "12 V" as a Spread in `unit`; a range's nominal is its middle.

    unit: "V", "A", "ohm", "F", "H", "s", "Hz", "W", "J", "degC" or "" (also written in percent)

    Raises QuantityTextError for anything unreadable, of another dimension, not finite, or with ends swapped.
    """
    if len(text) > _LONGEST_TEXT:
        raise QuantityTextError("the text is too long for a quantity", expected=_EXPECTED[unit])
    text = text.replace("\N{OHM SIGN}", "\N{GREEK CAPITAL LETTER OMEGA}")
    mark = _RANGE.search(text)
    if mark is None:
        return Spread.exact(_read(text, 0, len(text), unit, ""), unit)
    shared = _shared_unit(text[mark.end() :])
    low = _read(text, 0, mark.start(), unit, shared)
    high = _read(text, mark.end(), len(text), unit, "")
    if low > high:
        raise QuantityTextError("the range runs backwards", expected="the lower end first")
    return Spread(low, (low + high) / 2, high, unit)


def read_any_range(text: str) -> Spread:
    """Return a quantity or a range of whichever dimension, as `read_range` does for one that is known."""
    first, *others = _EXPECTED
    try:
        return read_range(text, first)
    except QuantityTextError as problem:
        for unit in others:
            with suppress(QuantityTextError):
                return read_range(text, unit)
        # A wrong dimension is no mistake here, so what is left is one of writing, or an unknown unit.
        raise QuantityTextError(
            str(problem), column=problem.column, expected="a quantity such as 12 V or 1.5 A"
        ) from None


def _shared_unit(text: str) -> str:
    """Return the unit of the right end of a range, which a bare left end shares."""
    match = _NUMBER_AND_UNIT.fullmatch(text.strip())
    return match["unit"] if match else ""


def _read(text: str, start: int, end: int, unit: str, shared: str) -> float:
    """Return the quantity at `text[start:end]`; `shared` is its unit where it has none of its own."""
    part = text[start:end].strip()
    column = start + len(text[start:end]) - len(text[start:end].lstrip()) + 1
    match = _NUMBER_AND_UNIT.fullmatch(part)
    if match is None:
        message = f'"{part}" is not a number with a unit' if part else "nothing is written here"
        raise QuantityTextError(message, column=column, expected=_EXPECTED[unit])
    name = match["unit"] or shared
    if not name and unit:
        raise QuantityTextError(f'"{part}" has no unit', column=column, expected=_EXPECTED[unit])
    value = _converted(float(match["number"]), name, unit, column)
    if not isfinite(value):
        raise QuantityTextError(f'"{part}" is not finite', column=column, expected=_EXPECTED[unit])
    return value


def _converted(number: float, name: str, unit: str, column: int) -> float:
    """Return `number` of the unit written as `name` in our unit of that quantity."""
    from pint.errors import DimensionalityError

    known = _unit_name(name)
    if known is None:
        raise QuantityTextError(f'unknown unit "{name}"', column=column, expected=_EXPECTED[unit])
    try:
        # pint leaves open what may be converted to what
        return quantity(number, known).to(unit or "dimensionless").magnitude  # pyright: ignore[reportUnknownMemberType]
    except DimensionalityError:
        message = f'"{name}" is no unit of this quantity' if name else "the unit is missing"
        raise QuantityTextError(message, column=column, expected=_EXPECTED[unit]) from None


def _unit_name(name: str) -> str | None:
    """Return the unit written as `name` in full, such as "kilovolt"; "" for no unit, None for an unknown one.

    pint also takes a plural s behind a symbol; "Vs" must not pass for volts.
    """
    if name in ("", "%"):
        return "percent" if name else ""
    for prefix, full, plural in registry().parse_unit_name(name):
        if not plural or full in name:
            return prefix + full
    return None
