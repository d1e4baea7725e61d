"""Numbers with a unit and a spread, and how they are printed.

Inside the tool a quantity is a float in SI base units with the name of its unit beside it; pint stands at
the boundary (brief, Python interface), so that a review without a brief need not load it.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import floor, isfinite, isinf, log10
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from pint.facets.plain import PlainQuantity

_PREFIXES = {-12: "p", -9: "n", -6: "µ", -3: "m", 0: "", 3: "k", 6: "M", 9: "G"}

# Units that are never written with a prefix.
_PLAIN_UNITS = frozenset({"%", "degC", "K", "ppm/K", ""})

# Less than a thousandth of a picofarad or picoampere is the rounding of a zero.
_LEAST_SHOWN = 1e-15

# Digits before the point from which on a number is printed with a power of ten: no part is of such a size.
_MOST_DIGITS = 9

_SYMBOLS = {"ohm": "Ω", "degC": "°C"}


@dataclass(frozen=True, slots=True)
class Spread:
    """The least, the nominal and the greatest value of one quantity, in the SI base unit named by `unit`.

    `unit` is one of "V", "A", "ohm", "F", "H", "s", "Hz", "W", "J", "degC", "K" or "" for a plain ratio.
    An infinite end is allowed (a load that never trips); NaN is not.
    """

    minimum: float
    nominal: float
    maximum: float
    unit: str

    def __post_init__(self) -> None:
        """Refuse a spread that contradicts itself: a caller's mistake, never the user's."""
        if not self.minimum <= self.nominal <= self.maximum:
            raise ValueError(f"not a spread: {self.minimum} .. {self.nominal} .. {self.maximum} {self.unit}")

    @classmethod
    def exact(cls, value: float, unit: str) -> Spread:
        """Return the spread of a value without any."""
        return cls(value, value, value, unit)

    @property
    def quantities(self) -> tuple[PlainQuantity[float], PlainQuantity[float], PlainQuantity[float]]:
        """Return minimum, nominal and maximum as pint quantities of the tool's own registry."""
        from .units import quantity

        return (
            quantity(self.minimum, self.unit),
            quantity(self.nominal, self.unit),
            quantity(self.maximum, self.unit),
        )

    def text(self, digits: int = 3) -> str:
        """Return `nominal (minimum .. maximum)`, or the value alone where it has no spread.

        The ends share one unit where they have the same prefix: "12.1 V (11.1 .. 13.1 V)".
        """
        nominal = engineering(self.nominal, self.unit, digits)
        if self.minimum == self.maximum:
            return nominal
        low = engineering(self.minimum, self.unit, digits)
        high = engineering(self.maximum, self.unit, digits)
        if low == nominal == high:
            return nominal
        number, _, unit = low.partition(" ")
        shared = number if unit == high.partition(" ")[2] else low
        return f"{nominal} ({shared} .. {high})"

    def __str__(self) -> str:
        """Return the spread as text, three digits a number."""
        return self.text()


def engineering(value: float, unit: str = "", digits: int = 3) -> str:
    """Return `value` (in SI base units) in engineering notation: `engineering(4700, "ohm")` is "4.70 kΩ".

    `digits` significant digits, rounded half to even on the decimal value; a ratio in "" prints plain.
    """
    symbol = _SYMBOLS.get(unit, unit)
    if isinf(value):
        return f"{'-' if value < 0 else ''}∞ {symbol}".strip()
    if not isfinite(value):
        raise ValueError("not a number")
    if abs(value) < _LEAST_SHOWN:
        return f"0 {symbol}".strip()
    rounded = float(f"{value:.{digits - 1}e}")
    exponent = floor(log10(abs(rounded)))
    power = 0 if unit in _PLAIN_UNITS else max(-12, min(9, 3 * floor(exponent / 3)))
    decimals = max(0, digits - 1 - (exponent - power))
    if exponent - power >= _MOST_DIGITS:
        return f"{rounded:.{digits - 1}e} {symbol}".strip()
    number = f"{rounded / 10.0**power:.{decimals}f}"
    return f"{number} {_PREFIXES[power]}{symbol}".strip()


def figure(value: float, unit: str, digits: int = 3) -> str:
    """Return a value as text: a plain ratio as a percentage, everything else in engineering notation."""
    return percent(value, digits) if unit == "" and isfinite(value) else engineering(value, unit, digits)


def percent(ratio: float, digits: int = 3) -> str:
    """Return a ratio as a percentage without idle zeros: `percent(0.0451)` is "4.51 %"."""
    number = engineering(100 * ratio, "", digits)
    return f"{number.rstrip('0').rstrip('.') if '.' in number else number} %"
