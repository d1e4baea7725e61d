"""Cut the text of a component's value into words, and tell what each word is by the grammar `value.lark`."""

from __future__ import annotations

import re
import unicodedata
from functools import cache
from pathlib import Path
from typing import NamedTuple, cast

from lark import (
    Lark,
    Token,
    Transformer,
    v_args,  # pyright: ignore[reportUnknownVariableType]  # lark leaves its wrapper untyped
)
from lark.exceptions import LarkError

from .compiled import compiled

# Digits are kept as text, sign included, until the multiplier is known: 4.7 nF is then 4.7e-09 to the bit.


class Bare(NamedTuple):
    """A number without a unit."""

    digits: str


class Code(NamedTuple):
    """A marking code: `4k7J` is ("4.7", "k", "J"), `10K` is ("10", "K", ""), `R47` is ("0.47", "R", "")."""

    digits: str
    letter: str
    tail: str


class Measure(NamedTuple):
    """A number with a unit ("ohm", "F", "H", "V", "A" or "W"), the prefix still as written."""

    digits: str
    prefix: str
    unit: str


class Measures(NamedTuple):
    """Measures written without anything between, such as `150OHM800mA`."""

    measures: tuple[Measure, ...]


class Tolerance(NamedTuple):
    """A tolerance as fractions."""

    low: float
    high: float


class AbsoluteTolerance(NamedTuple):
    """A tolerance in the unit of the value, such as `±0.25pF`."""

    measure: Measure


class Coefficient(NamedTuple):
    """A temperature coefficient in ppm/K."""

    number: float


class Dielectric(NamedTuple):
    """A dielectric class or family, in its usual spelling."""

    name: str


class NotFitted(NamedTuple):
    """A mark that the part is not populated."""


class Simulated(NamedTuple):
    """A number as a simulator reads it: scale letters and the ignored rest as written."""

    digits: str
    scale: str
    rest: str


class SimulatedCode(NamedTuple):
    """A marking code in a SPICE-style list: `2meg5` is ("2", "meg", "5"), `R47` is ("", "R", "47")."""

    whole: str
    letter: str
    fraction: str


Fact = (
    Bare
    | Code
    | Measures
    | Tolerance
    | AbsoluteTolerance
    | Coefficient
    | Dielectric
    | NotFitted
    | Simulated
    | SimulatedCode
)

_UNIT = r"(?:ohms?|Ω|farads?|henrys?|henries|volts?|VDC|VAC|amps?|amperes?|watts?|[RFHVAW])"
_PREFIX_OR_UNIT = rf"(?:(?:meg|[pnuμmkMG])?{_UNIT}|meg|[kMG]|%|ppm)(?![a-z0-9])"

# What belongs together is joined before the text is cut, in this order.
_JOINS: tuple[tuple[re.Pattern[str], str], ...] = (
    (re.compile("\N{MINUS SIGN}"), "-"),
    (re.compile(r"\+/?-"), "±"),
    (re.compile(r"(?<=ppm) ?/ ?(?:K|deg|°)? ?C?(?![a-z])", re.I), ""),
    (re.compile(r"([+-][0-9.]+) ?%? ?/? ?([+-][0-9.]+) ?%"), r"\1\2%"),
    (
        re.compile(
            r"\b(?:not|no|do[ _]not)[ _-]?(?:fit|stuff|populate|place|install|mount)(?:t?ed|d)?\b", re.I
        ),
        "DNP",
    ),
    (re.compile(r"(?<=±) (?=[0-9.])"), ""),
    (re.compile(r"(?<= )0,([0-9]+)(?= ?%)"), r"0.\1"),
)
_BLANK_BEFORE_UNIT = re.compile(rf"(?<=[0-9.])[ _]+(?={_PREFIX_OR_UNIT})", re.I)
_FRACTION_OF_WATT = re.compile(r"(?<![0-9./])([1-3])/(2|3|4|5|8|10|12|16|20|32) ?W(?![a-z])", re.I)

# Blanks, commas and brackets part two words, and so does a hyphen after or before a letter (`0805-NC`,
# `10k-1%`), but not the one of an exponent.
_CUT = re.compile(r"[ ,;/_()\[\]{}\"']+|(?<=[A-Za-zΩμ])(?<![0-9.][eEdD])-|(?<=[0-9%])-(?=[A-Za-z])")

# The comma is a decimal one where the unit of the part follows; elsewhere it parts two words.
_DECIMAL_COMMA = {
    "resistance": r"(?:meg|[mkMG])?(?:ohms?|Ω|R)|meg|[kM]",
    "capacitance": r"[pnuμm]F?",
    "inductance": r"[nuμm]H?|H",
    "voltage": r"[mk]?V",
    "current": r"[uμm]?A",
    "power": r"m?W",
    "ratio": r"%?",
    "temperature coefficient": r"ppm",
}


def words(text: str, quantity: str) -> list[str]:
    """Return the words of `text`; with a quantity, decimal commas and blanks before its unit are understood.

    `quantity` is empty for text of a SPICE-style list, where a blank or a comma always ends a number.
    """
    text = " ".join(unicodedata.normalize("NFKC", text).replace("\N{FRACTION SLASH}", "/").split())
    for pattern, replacement in _JOINS:
        text = pattern.sub(replacement, text)
    text = _FRACTION_OF_WATT.sub(_watts, text)
    if quantity:
        text = _BLANK_BEFORE_UNIT.sub("", text)
        text = _decimal_comma(quantity).sub(r"\1.\2", text)
    return [word for word in _CUT.split(text) if word]


@cache
def _decimal_comma(quantity: str) -> re.Pattern[str]:
    units = _DECIMAL_COMMA[quantity]
    return re.compile(rf"(?<![\w.,])([0-9]+),([0-9]+)(?=(?:{units})(?![a-z0-9]))", re.I)


def _watts(match: re.Match[str]) -> str:
    return f"{int(match[1]) / int(match[2])}W"


def read_word(word: str, kind: str) -> Fact | None:
    """Return what one word says, or None where it says nothing that we know.

    `kind` is "word" for property text and "simulated" for the value in a SPICE-style list.
    """
    plain = _plain(word, kind)
    if plain is not None:
        return plain
    try:
        # lark types every result as a tree; ours is what the transformer below made of it.
        return cast(Fact, _parser().parse(word, start=kind))  # pyright: ignore[reportUnknownMemberType]
    except LarkError:  # a package, a note, a part number: most words of a schematic are no quantities
        return None


# The words that most values are made of, read without the grammar, which takes 20 ms to build. A test holds
# them to what the grammar says.
_NUMBER = r"([0-9]+(?:\.[0-9]+)?|\.[0-9]+)"
_PLAIN_SIMULATED = re.compile(_NUMBER + r"(meg|[tgkmunpf])?", re.I)
_PLAIN_CODE = re.compile(_NUMBER + r"([kKMnpu])")
_PLAIN_TAIL = re.compile(_NUMBER + r"(%|ppm|[VAW]|[pnuPNUμ]F)?")
_PLAIN_CLASS = re.compile(r"C0G|[XYZ][4-9][PRSTUVL]")


def _plain(word: str, kind: str) -> Fact | None:
    """Return what a word of the commonest shapes says, None for every other shape."""
    if kind == "simulated":
        found = _PLAIN_SIMULATED.fullmatch(word)
        return Simulated(found[1], found[2] or "", "") if found else None
    if found := _PLAIN_TAIL.fullmatch(word):
        return _tailed(found[1], found[2] or "")
    if found := _PLAIN_CODE.fullmatch(word):
        return Code(found[1], found[2], "")
    return Dielectric(word) if _PLAIN_CLASS.fullmatch(word) else None


def _tailed(digits: str, tail: str) -> Fact:
    """Return what a number means with a per cent sign, a unit or nothing behind it."""
    if not tail:
        return Bare(digits)
    if tail == "%":
        return Tolerance(-float(digits) / 100, float(digits) / 100)
    if tail == "ppm":
        return Coefficient(float(digits))
    return Measures((Measure(digits, tail[:-1], tail[-1]),))


@v_args(inline=True)
class _Facts(Transformer[Token, Fact]):
    """Make a Fact of each alternative of the grammar."""

    def bare(self, sign: Token | None, digits: Token) -> Bare:
        return Bare(_signed(sign, digits))

    def scaled(self, sign: Token | None, digits: Token, letter: Token, tail: Token | None) -> Code:
        return Code(_signed(sign, digits), str(letter), str(tail or ""))

    def marked(
        self, sign: Token | None, whole: Token, letter: Token, fraction: Token, tail: Token | None
    ) -> Code:
        return Code(f"{_signed(sign, whole)}.{fraction}", str(letter), str(tail or ""))

    def marked_below_one(self, letter: Token, fraction: Token, tail: Token | None) -> Code:
        return Code(f"0.{fraction}", str(letter), str(tail or ""))

    def measure(self, digits: Token, prefix: Token | None, unit: Token) -> Measure:
        return Measure(str(digits), str(prefix or ""), _UNITS[unit[0].lower()])

    def measures(self, sign: Token | None, first: Measure, *others: Measure) -> Measures:
        return Measures((first._replace(digits=_signed(sign, first.digits)), *others))

    def absolute_tolerance(self, _plus_minus: Token, measure: Measure) -> AbsoluteTolerance:
        return AbsoluteTolerance(measure)

    def symmetric_tolerance(self, sign: Token | None, digits: Token, _percent: Token) -> Tolerance:
        share = float(digits) / 100
        return Tolerance(0.0 if sign == "+" else -share, 0.0 if sign == "-" else share)

    def unsymmetric_tolerance(
        self, sign: Token, digits: Token, other_sign: Token, other_digits: Token, _percent: Token
    ) -> Tolerance:
        one, other = float(sign + digits) / 100, float(other_sign + other_digits) / 100
        return Tolerance(min(one, other), max(one, other))

    def coefficient(self, sign: Token | None, digits: Token, _ppm: Token) -> Coefficient:
        return Coefficient(float(_signed(sign, digits)))

    def dielectric(self, name: Token) -> Dielectric:
        return Dielectric(_DIELECTRICS.get(name.upper(), name.upper() if len(name) == 3 else name.lower()))

    def not_fitted(self, _mark: Token) -> NotFitted:
        return NotFitted()

    def simulated(
        self, sign: Token | None, digits: Token, scale: Token | None, rest: Token | None
    ) -> Simulated:
        plain = digits.lower().replace("d", "e")  # simulators also write the exponent with a `d`
        return Simulated(_signed(sign, plain), str(scale or ""), str(rest or ""))

    def simulated_code(
        self, sign: Token | None, whole: Token, letter: Token, fraction: Token, _rest: Token | None
    ) -> SimulatedCode:
        return SimulatedCode(_signed(sign, whole), str(letter), str(fraction))

    def simulated_below_one(self, letter: Token, fraction: Token, _rest: Token | None) -> SimulatedCode:
        return SimulatedCode("", str(letter), str(fraction))


# COG and NPO are misspellings of C0G and NP0; NP0 is the older name of the class C0G.
_DIELECTRICS = {"COG": "C0G", "NP0": "C0G", "NPO": "C0G"}

# By the first letter of the unit, in lower case.
_UNITS = {"o": "ohm", "ω": "ohm", "r": "ohm", "f": "F", "h": "H", "v": "V", "a": "A", "w": "W"}


def _signed(sign: str | None, digits: str) -> str:
    return f"-{digits}" if sign == "-" else str(digits)


@cache
def _parser() -> Lark:
    grammar = Path(__file__).with_name("value.lark")
    return Lark(
        grammar.read_text(encoding="utf-8"),
        parser="lalr",
        start=["word", "simulated"],
        maybe_placeholders=True,
        transformer=_Facts(),
        cache=compiled(grammar),
    )
