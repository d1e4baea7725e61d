"""Strings, identifiers and numbers of EDIF 2 0 0."""

from __future__ import annotations

import re
from decimal import Decimal
from sys import intern
from typing import NamedTuple

_LINE_BREAKS = str.maketrans("", "", "\r\n")
_ESCAPE = re.compile(r"%([0-9]+(?: +[0-9]+)*)%")
_HIGHEST_CODE = 255  # the escapes name characters of one byte; anything higher is no escape
_INTEGER = re.compile(r"[+-]?[0-9]{1,18}")
_EXPONENT_LIMIT = 999
_PLAIN_EXPONENTS = range(-6, 16)  # written out in full; beyond that with an exponent
_BUS = re.compile(
    r"(?P<base>.*)(?P<open>[\[(<])(?P<first>[0-9]{1,6})(?::|\.\.)(?P<last>[0-9]{1,6})(?P<close>[\])>])"
)

_UNIT_SYMBOLS = {
    "RESISTANCE": "ohm",
    "CAPACITANCE": "F",
    "INDUCTANCE": "H",
    "VOLTAGE": "V",
    "CURRENT": "A",
    "POWER": "W",
    "FREQUENCY": "Hz",
    "TIME": "s",
    "CONDUCTANCE": "S",
    "CHARGE": "C",
    "ENERGY": "J",
    "DISTANCE": "m",
}


class Name(NamedTuple):
    """A name as defined: the identifier links, the display text is shown; `sizes` where it is an array."""

    identifier: str
    display: str
    offset: int
    sizes: tuple[int, ...] = ()


def decode(text: str) -> str:
    """Return the value of a string from what stands between its quotes.

    Exporters break lines inside strings anywhere, so line breaks are dropped first; then `%37%` and
    `%13 10%` give the characters of these codes. A `%` that starts no such escape stands for itself,
    because some exporters write values raw (`"10k 1%"`).
    """
    if "\n" in text or "\r" in text:
        text = text.translate(_LINE_BREAKS)
    if "%" in text:
        text = _ESCAPE.sub(_characters, text)
    return text


def shown(name: str, word: str) -> str:
    """Return the name that a rename gives; the identifier `word` where it is blank, for that names no net."""
    return name if name and not name.isspace() else word


def _characters(escape: re.Match[str]) -> str:
    codes = escape[1].split()
    if any(len(code) > 3 or int(code) > _HIGHEST_CODE for code in codes):
        return escape[0]
    return "".join(chr(int(code)) for code in codes)


def identifier(word: str) -> str:
    """Return an identifier without the `&` that marks one which starts with a digit."""
    return intern(word[1:] if word[0] == "&" and len(word) > 1 else word)


def integer(word: str) -> int | None:
    """Return the integer that `word` is, None where it is none or has over 18 digits."""
    return int(word) if _INTEGER.fullmatch(word) else None


def scaled(mantissa: str, exponent: str) -> Decimal | None:
    """Return mantissa x 10^exponent, the number `(e mantissa exponent)`; None where it is not in range."""
    power = integer(exponent)
    if integer(mantissa) is None or power is None or abs(power) > _EXPONENT_LIMIT:
        return None
    return Decimal(mantissa).scaleb(power)


def quantity(number: Decimal, unit: str) -> str:
    """Return a number of EDIF as text in the manner of a value, such as `4700 ohm` or `100e-12 F`."""
    number = number.normalize()
    plain = number.adjusted() in _PLAIN_EXPONENTS or not number
    text = f"{number:f}" if plain else number.to_eng_string().replace("E+", "e").replace("E", "e")
    symbol = _UNIT_SYMBOLS.get(unit.upper(), "")
    return f"{text} {symbol}" if symbol else text


def bit_names(display: str, size: int) -> list[str]:
    """Return the names of the members of an array, member 0 first.

    `a(7:0)` names its members `a(7)` down to `a(0)`; a name without a range counts from 0, `a[0]` first.
    """
    bus = _BUS.fullmatch(display)
    if bus:
        first, last = int(bus["first"]), int(bus["last"])
        if abs(first - last) + 1 == size:
            step = 1 if last >= first else -1
            return [f"{bus['base']}{bus['open']}{first + step * i}{bus['close']}" for i in range(size)]
    return [f"{display}[{i}]" for i in range(size)]
