"""What number a word of a value text means: depends on the kind of quantity that is wanted.

A marking code has one multiplier letter, and a further letter is its tolerance: `10K` is ten kilohms, `10KK`
ten kilohms within 10 %, and `4K7F` no farad but 4.7 kilohms within 1 %.
"""

from __future__ import annotations

import re
from typing import NamedTuple

from .value_words import (
    Bare,
    Code,
    Coefficient,
    Fact,
    Measure,
    Measures,
    Simulated,
    SimulatedCode,
    Tolerance,
)

UNITS = {
    "resistance": "ohm",
    "capacitance": "F",
    "inductance": "H",
    "voltage": "V",
    "current": "A",
    "power": "W",
    "ratio": "",
    "temperature coefficient": "ppm/K",
}

# Powers of ten of the prefixes; case counts between m and M only.
_PREFIXES = {"": 0, "p": -12, "n": -9, "u": -6, "μ": -6, "m": -3, "k": 3, "M": 6, "meg": 6, "g": 9}

# Powers of ten of the one letter in a code. R, K, M, G, T and L of a resistance and p, n, μ, m and F of a
# capacitance are those of IEC 60062, the rest is custom.
_CODE_LETTERS: dict[str, dict[str, int]] = {
    "resistance": {
        "μ": -6,
        "u": -6,
        "l": -3,
        "m": -3,
        "r": 0,
        "ω": 0,
        "k": 3,
        "M": 6,
        "meg": 6,
        "g": 9,
        "t": 12,
    },
    "capacitance": {"p": -12, "n": -9, "μ": -6, "u": -6, "m": -3, "f": 0},
    "inductance": {"n": -9, "μ": -6, "u": -6, "r": -6, "m": -3},
    "voltage": {"n": -9, "μ": -6, "u": -6, "m": -3, "v": 0, "k": 3},
    "current": {"p": -12, "n": -9, "μ": -6, "u": -6, "m": -3, "a": 0, "k": 3},
    "power": {"μ": -6, "u": -6, "m": -3, "w": 0, "k": 3},
    "ratio": {},
    "temperature coefficient": {},
}

# Behind a code, a unit of the quantity itself is no tolerance letter: `4n7F`, `3u3H`, `4k7R`.
_OWN_UNITS = {
    "resistance": "rωo",
    "capacitance": "f",
    "inductance": "h",
    "voltage": "v",
    "current": "a",
    "power": "w",
}

# Tolerance letters of IEC 60062:2016, in percent (from memory).
_SYMMETRIC_TOLERANCES = {
    "E": 0.005,
    "L": 0.01,
    "P": 0.02,
    "W": 0.05,
    "B": 0.1,
    "C": 0.25,
    "D": 0.5,
    "F": 1.0,
    "G": 2.0,
    "H": 3.0,
    "J": 5.0,
    "K": 10.0,
    "M": 20.0,
    "N": 30.0,
}
_UNSYMMETRIC_TOLERANCES = {"Q": (-10.0, 30.0), "T": (-10.0, 50.0), "S": (-20.0, 50.0), "Z": (-20.0, 80.0)}
TOLERANCE_LETTERS = {
    **{letter: (-share, share) for letter, share in _SYMMETRIC_TOLERANCES.items()},
    **_UNSYMMETRIC_TOLERANCES,
}

# On capacitors below 10 pF these letters are absolute, in farads (from memory).
_SMALL_CAPACITANCE = 10e-12
_SMALL_CAPACITANCE_LETTERS = {"B": 0.1e-12, "C": 0.25e-12, "D": 0.5e-12, "F": 1e-12, "G": 2e-12}

# Powers of ten of the simulators' scale letters, in lower case; the mil, 25.4 micrometres, is none.
_SCALES = {"": 0, "r": 0, "t": 12, "g": 9, "meg": 6, "k": 3, "m": -3, "u": -6, "μ": -6, "n": -9, "p": -12} | {
    "f": -15
}
_MIL = 25.4e-6


class Number(NamedTuple):
    """The number of a value, the tolerance that its code gave, and the sentence on another reading."""

    number: float
    tolerance: tuple[float, float] | None = None
    ambiguous: str = ""


def number_of(fact: Fact | None, quantity: str, word: str) -> Number | None:
    """Return the number where `fact` is of this quantity, else None."""
    match fact:
        case Simulated():
            return _simulated(fact, quantity, word)
        case SimulatedCode():
            return _simulated_code(fact, quantity, word)
        case Code():
            return _coded(fact, quantity, word)
        case Measures((first, *_)) if first.unit == UNITS[quantity]:
            return Number(measured(first))
        case Bare(digits) if _stands_alone(digits, quantity):
            return Number(float(digits))
        case Tolerance(low, high) if quantity == "ratio":
            return Number(high or low)
        case Coefficient(number) if quantity == "temperature coefficient":
            return Number(number)
        case _:
            return None


def _stands_alone(digits: str, quantity: str) -> bool:
    """Tell whether a number without a unit is a value.

    `0402` is a package. A capacitance or an inductance without a unit is in micro- or picofarads, depending
    on the drawing office: only the exponent of `1e-7` shows that it is in farads.
    """
    if re.match(r"[-+]?0[0-9]+$", digits):
        return False
    return quantity not in ("capacitance", "inductance") or "e" in digits.lower()


def _scaled(digits: str, exponent: int) -> float:
    """Return `digits` times a power of ten, to the bit where the digits have no exponent of their own."""
    if "e" in digits.lower():
        return float(digits) * 10.0**exponent
    return float(f"{digits}e{exponent}")


def measured(measure: Measure) -> float:
    """Return a measure in its SI base unit."""
    return _scaled(measure.digits, _PREFIXES[_fold(measure.prefix)])


def _fold(letter: str) -> str:
    """Return a multiplier as the tables spell it: case tells milli from mega, and nothing else."""
    return "M" if letter == "M" else letter.lower()


def _coded(code: Code, quantity: str, word: str) -> Number | None:
    """Read a marking code. It has one multiplier letter; a further one is the unit or else the tolerance."""
    if quantity == "capacitance" and (code.letter, code.tail) == ("M", "F"):
        number = _scaled(code.digits, -6)
        return Number(number, None, f'"{word}" is taken as {number:g} F: MF for microfarad, as of old')
    exponent = _CODE_LETTERS[quantity].get(_fold(code.letter))
    if exponent is None:
        return None
    number = _scaled(code.digits, exponent)
    trap = ""
    if quantity == "inductance" and code.letter == "R":
        trap = f'"{word}" is taken as {number:g} H: R for microhenry is a custom outside IEC 60062'
    if not code.tail or code.tail[0].lower() in _OWN_UNITS[quantity]:
        return Number(number, None, trap)
    if code.tail not in TOLERANCE_LETTERS:
        return None
    return Number(number, tolerance_of(code.tail, number, UNITS[quantity]), trap)


def tolerance_of(letter: str, number: float, unit: str) -> tuple[float, float]:
    """Return the fractions that a tolerance letter of IEC 60062 means on a value of `number`."""
    if unit == "F" and 0 < number < _SMALL_CAPACITANCE and letter in _SMALL_CAPACITANCE_LETTERS:
        share = _SMALL_CAPACITANCE_LETTERS[letter] / number
        return -share, share
    low, high = TOLERANCE_LETTERS[letter]
    return low / 100, high / 100


def _simulated(fact: Simulated, quantity: str, word: str) -> Number:
    """Read a number as the simulators do, and say where its writer may have meant something else."""
    number = _in_scale(fact.digits, fact.scale)
    trap = ""
    if quantity == "resistance" and fact.scale == "M":
        trap = f'"{word}" is {number:g} ohm: M is milli in a SPICE-style list, mega is written MEG'
    elif quantity == "resistance" and (fact.scale + fact.rest).lower().startswith("milli"):
        trap = f'"{word}" is {number:g} ohm to a simulator, which reads MIL as 25.4e-6'
    elif quantity == "capacitance" and fact.scale == "F":
        trap = f'"{word}" is {number:g} F: F is femto in a SPICE-style list'
    elif quantity == "current" and not fact.scale and fact.rest[:1] in ("a", "A"):
        trap = f'"{word}" is taken as {number:g} A: some simulators read the A as atto, 1e-18'
    return Number(number, None, trap)


def _simulated_code(fact: SimulatedCode, quantity: str, word: str) -> Number | None:
    """Read a marking code in a SPICE-style list: what its writer meant, and what a simulator makes of it.

    M is where the two part: mega by the standard on a resistor, milli to every simulator.
    """
    letter = fact.letter.lower()
    digits = f"{fact.whole or 0}.{fact.fraction}"
    if letter == "r" and quantity not in ("resistance", "inductance"):
        return None
    number = _in_scale(digits, fact.letter)
    if letter == "r" and quantity == "inductance":
        number = _scaled(digits, -6)
    if quantity == "resistance" and fact.letter == "M":
        number = _scaled(digits, 6)
    unit = UNITS[quantity]
    other = f"{_in_scale(fact.whole, fact.letter):g} {unit}" if fact.whole else "a model name"
    return Number(number, None, f'"{word}" is taken as {number:g} {unit}; some simulators read {other}')


def _in_scale(digits: str, scale: str) -> float:
    """Return a number with a simulator's scale letters."""
    if scale.lower() == "mil":
        return float(digits) * _MIL
    return _scaled(digits, _SCALES[scale.lower()])
