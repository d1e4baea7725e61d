"""The text of a component's value -> a number in SI base units, with the tolerance and ratings beside it.

Two customs meet here. Property text (`spice=False`) follows SI prefixes, units and the marking codes of
IEC 60062; text from a SPICE-style list (`spice=True`) is read as a simulator reads it, M for milli and MEG
for mega. Where the two differ on the very text at hand, `Value.ambiguous` says so in a sentence.

A bare `103` is 103 ohm: the three-digit codes printed on parts cannot be told from numbers, so they are
never decoded.
"""

from __future__ import annotations

import re
from dataclasses import dataclass, replace
from functools import cache, lru_cache
from math import isfinite
from typing import NamedTuple

from .value_numbers import TOLERANCE_LETTERS, UNITS, Number, measured, number_of, tolerance_of
from .value_words import (
    AbsoluteTolerance,
    Bare,
    Dielectric,
    Fact,
    Measures,
    NotFitted,
    Tolerance,
    read_word,
    words,
)

_LONGEST_TEXT = 400

_GREATEST = 1e12  # V, A or W; the square of what is beyond leaves the range of a float sooner or later

_EXPECTED = {
    "resistance": "a resistance such as 4k7, 100 ohm or 10M",
    "capacitance": "a capacitance with its unit, such as 100nF or 4u7",
    "inductance": "an inductance with its unit, such as 47uH",
    "voltage": "a voltage such as 16 V",
    "current": "a current such as 2.5 A",
    "power": "a power such as 0.25 W or 1/4 W",
    "ratio": "a number or a percentage such as 5 %",
    "temperature coefficient": "a temperature coefficient such as 100 ppm/K",
}


class ValueTextError(ValueError):
    """A value text that cannot be read: `column` counts from 1 in the text, `expected` says what fits."""

    def __init__(self, message: str, *, column: int = 1, expected: str = "") -> None:
        super().__init__(message)
        self.column = column
        self.expected = expected


@dataclass(frozen=True, slots=True)
class Value:
    """A component's value and what stands beside it in the same text.

    number:     in SI base units; `unit` is "ohm", "F", "H", "V", "A", "W", "ppm/K" or "" for a ratio
    tolerance:  (low, high) as fractions of the number, such as (-0.2, 0.5); None where the text has none
    voltage, power, current: the ratings in V, W and A; None where the text has none
    fitted:     False where the text says that the part is not populated
    dielectric: "X7R", "C0G", "film" ...; empty where the text has none
    ambiguous:  a sentence where another reader would take the text otherwise; else empty
    """

    number: float
    unit: str
    tolerance: tuple[float, float] | None = None
    voltage: float | None = None
    power: float | None = None
    current: float | None = None
    fitted: bool = True
    dielectric: str = ""
    ambiguous: str = ""


def read_value(text: str, quantity: str, *, spice: bool) -> Value:
    """Return what `text` says as a `quantity`, such as "resistance"; raise ValueTextError where it says none.

    The first word that reads as the quantity is the value; tolerance, ratings, dielectric and fit state are
    taken from the words beside it, and words without a meaning for us (a package, a note) are passed over.
    """
    result = _read(text, quantity, spice)
    if isinstance(result, Value):
        return result
    raise ValueTextError(result.message, column=result.column, expected=_EXPECTED[quantity])


def read_tolerance(text: str) -> tuple[float, float]:
    """Return a tolerance as fractions (low, high): "5 %", "±5%", "-20/+80 %", the letter "J", or "5" for 5 %.

    Raises ValueTextError for anything else, and for a tolerance that leaves nothing of the value.
    """
    letter = text.strip()
    if letter in TOLERANCE_LETTERS:
        return tolerance_of(letter, 1.0, "")
    found = words(text, "ratio") if len(text) <= _LONGEST_TEXT else []
    match read_word(found[0], "word") if len(found) == 1 else None:
        case Tolerance(low, high) if low > -1 and isfinite(high):
            return low, high
        case Bare(digits) if 0 <= float(digits) < 100:
            return -float(digits) / 100, float(digits) / 100
        case _:
            expected = "a tolerance such as 5 %, -20/+80 % or the letter J"
            raise ValueTextError(f"not a tolerance: {_short(text)}", expected=expected)


@lru_cache(maxsize=16_384)
def says_not_fitted(text: str) -> bool:
    """Tell whether a value text says that the part is not populated: "10K,1%,DNI", "open", "not fitted"."""
    facts = (read_word(word, "word") for word in words(text[:_LONGEST_TEXT], "resistance"))
    return any(isinstance(fact, NotFitted) for fact in facts)


class _Refusal(NamedTuple):
    """Why a text is no value: kept in the cache in place of a Value."""

    message: str
    column: int


@lru_cache(maxsize=65_536)
def _read(text: str, quantity: str, spice: bool) -> Value | _Refusal:
    if len(text) > _LONGEST_TEXT:
        return _Refusal(f"a text of {len(text)} characters is too long for a value", 1)
    apart = _apart(quantity).match(text) if spice else None
    whole = f"{apart[1]}{apart[2]}{text[apart.end() :]}" if apart else text
    found, beside = _facts(words(whole, "" if spice else quantity), quantity, spice)
    if found is None:
        return _Refusal(_nothing_found(text, quantity, beside), _column(text))
    ambiguous = found.ambiguous or _comma_trap(text, spice)
    if apart and not ambiguous:
        ambiguous = f'"{apart[0].strip()}" is taken as {found.number:g} {UNITS[quantity]}: a simulator ends '
        ambiguous += "the value at the blank"
    value = Value(found.number, UNITS[quantity], found.tolerance, ambiguous=ambiguous)
    for fact in beside:
        value = _with(value, fact)
    return _refusal(value, quantity, text) or value


def _facts(texts: list[str], quantity: str, spice: bool) -> tuple[Number | None, list[Fact]]:
    """Return the first word that reads as the quantity, and what the other words say."""
    found: Number | None = None
    beside: list[Fact] = []
    for word in texts:
        fact = read_word(word, "simulated" if spice and found is None else "word")
        if found is None:
            found = number_of(fact, quantity, word)
            if found is not None:
                beside += _behind_the_first(fact)
                continue
            if spice:
                fact = read_word(word, "word")
        if fact is not None:
            beside.append(fact)
    return found, beside


def _behind_the_first(fact: Fact | None) -> list[Fact]:
    """Return what is written against the value without anything between, as in `150OHM800mA`."""
    return [Measures(fact.measures[1:])] if isinstance(fact, Measures) else []


def _with(value: Value, fact: Fact) -> Value:
    """Return `value` with what a word beside it says; the first of two ratings stands."""
    match fact:
        case Tolerance(low, high) if low > -1:  # a larger percentage is a note on something else
            return replace(value, tolerance=(low, high))
        case AbsoluteTolerance(measure) if measure.unit == value.unit and value.number > 0:
            share = measured(measure) / value.number
            return replace(value, tolerance=(-share, share))
        case Measures(measures):
            for measure in measures:
                rating = _RATINGS.get(measure.unit)
                if rating is not None and getattr(value, rating) is None:
                    value = replace(value, **{rating: measured(measure)})
            return value
        case Dielectric(name):
            return replace(value, dielectric=name)
        case NotFitted():
            return replace(value, fitted=False)
        case _:
            return value


_RATINGS = {"V": "voltage", "A": "current", "W": "power"}


def _refusal(value: Value, quantity: str, text: str) -> _Refusal | None:
    """Refuse what no part can have."""
    numbers = (value.number, value.voltage, value.power, value.current, *(value.tolerance or ()))
    if not all(isfinite(number) for number in numbers if number is not None):
        return _Refusal(f"{_short(text)} holds a number that is not finite", _column(text))
    if max(map(abs, filter(None, (value.voltage, value.power, value.current))), default=0.0) > _GREATEST or (
        quantity in ("voltage", "current", "power") and abs(value.number) > _GREATEST
    ):
        return _Refusal(f"{_short(text)} is beyond anything on a board", _column(text))
    if value.number < 0 and quantity in ("resistance", "capacitance", "inductance", "power"):
        return _Refusal(f"{_short(text)} is a negative {quantity}", _column(text))
    return None


def _nothing_found(text: str, quantity: str, beside: list[Fact]) -> str:
    if not text.strip():
        return "no value"
    if any(isinstance(fact, Bare) for fact in beside) and quantity in ("capacitance", "inductance"):
        return f"{_short(text)} gives the {quantity} without a unit"
    return f"no {quantity} in {_short(text)}"


@cache
def _apart(quantity: str) -> re.Pattern[str]:
    """Return the pattern of a number and, behind a blank, its scale: to a simulator two words."""
    unit = {"resistance": "ohms?|Ω|Ω", "capacitance": "F", "inductance": "H"}.get(quantity, "(?!)")
    return re.compile(rf"\s*([0-9.]+)\s+((?:meg|[tgkmunpµμ])(?:{unit})?)(?![^\s,])", re.IGNORECASE)


def _comma_trap(text: str, spice: bool) -> str:
    """Return the sentence for a comma that ends the value although a decimal one may be meant."""
    pattern = r"\s*[0-9]+,[0-9]+" if spice else r"\s*[0-9]+,[0-9]{1,3}(?=[\s,;]|$)"
    comma = re.match(pattern, text)
    return f'the comma in "{comma[0].strip()}" is taken as the end of the value' if comma else ""


def _column(text: str) -> int:
    """Return the column, from 1, of the first number in `text`, else 1."""
    number = re.search(r"[-+]?\.?[0-9]", text)
    return number.start() + 1 if number else 1


def _short(text: str) -> str:
    return f'"{text}"' if len(text) <= 40 else f'"{text[:37]}..."'
