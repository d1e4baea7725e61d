"""The operators, functions and constants of expressions in SPICE-style lists, as simulators document them."""

from __future__ import annotations

import math
import operator
from collections.abc import Callable, Mapping

_ANY = 64
"""Arguments that a function of any number of them takes at most."""


def _signed_power(base: float, exponent: float) -> float:
    return math.copysign(math.pow(abs(base), exponent), base)


def _copied_sign(x: float, y: float = 1.0) -> float:
    return math.copysign(x, y)


def _sign(x: float) -> float:
    return math.copysign(1.0, x) if x else 0.0


def _nominal(value: float, *_: float) -> float:
    """Return the middle of a random distribution: a review takes its tolerances from elsewhere."""
    return value


def _limited(x: float, *bounds: float) -> float:
    """Return `x` between two bounds; with only one more argument `x` is a nominal value with its spread."""
    return x if len(bounds) < 2 else min(max(x, min(bounds)), max(bounds))


def _if(condition: float, yes: float, no: float) -> float:
    return yes if condition else no


def _as_number(compare: Callable[[float, float], object]) -> Callable[[float, float], float]:
    return lambda a, b: float(bool(compare(a, b)))


OPERATORS: Mapping[str, Callable[[float, float], float]] = {
    "+": operator.add,
    "-": operator.sub,
    "*": operator.mul,
    "/": lambda a, b: a / b,
    "%": math.fmod,
    "<": _as_number(operator.lt),
    "<=": _as_number(operator.le),
    ">": _as_number(operator.gt),
    ">=": _as_number(operator.ge),
    "==": _as_number(operator.eq),
    "!=": _as_number(operator.ne),
    "&": _as_number(lambda a, b: a and b),
    "&&": _as_number(lambda a, b: a and b),
    "|": _as_number(lambda a, b: a or b),
    "||": _as_number(lambda a, b: a or b),
}

SIGNS: Mapping[str, Callable[[float], float]] = {
    "+": operator.pos,
    "-": operator.neg,
    "!": lambda x: float(not x),
    "~": lambda x: float(not x),
}

_OF_ONE: Mapping[str, Callable[[float], float]] = {
    "abs": abs,
    "acos": math.acos,
    "acosh": math.acosh,
    "arccos": math.acos,
    "arcsin": math.asin,
    "arctan": math.atan,
    "asin": math.asin,
    "asinh": math.asinh,
    "atan": math.atan,
    "atanh": math.atanh,
    "buf": lambda x: float(x > 0.5),
    "cbrt": math.cbrt,
    "ceil": math.ceil,
    "cos": math.cos,
    "cosh": math.cosh,
    "db": lambda x: 20 * math.log10(abs(x)),
    "exp": math.exp,
    "fabs": abs,
    "floor": math.floor,
    "int": math.trunc,
    "inv": lambda x: float(x <= 0.5),
    "ln": math.log,
    "log": math.log,
    "log10": math.log10,
    "nint": round,
    "par": lambda x: x,
    "round": round,
    "sgn": _sign,
    "sin": math.sin,
    "sinh": math.sinh,
    "sqrt": math.sqrt,
    "stp": lambda x: float(x > 0),
    "tan": math.tan,
    "tanh": math.tanh,
    "trunc": math.trunc,
    "u": lambda x: float(x > 0),
    "uramp": lambda x: max(x, 0.0),
    "ustep": lambda x: float(x > 0),
}

_OF_TWO: Mapping[str, Callable[[float, float], float]] = {
    "atan2": math.atan2,
    "fmod": math.fmod,
    "hypot": lambda x, y: math.hypot(x, y),
    "pow": math.pow,
    "pwr": _signed_power,
    "pwrs": _signed_power,
}

_OF_MORE: Mapping[str, tuple[Callable[..., float], int, int]] = {
    "agauss": (_nominal, 1, 4),
    "aunif": (_nominal, 1, 3),
    "gauss": (_nominal, 1, 4),
    "if": (_if, 3, 3),
    "limit": (_limited, 2, 3),
    "max": (lambda *numbers: float(max(numbers)), 2, _ANY),
    "mc": (_nominal, 1, 2),
    "min": (lambda *numbers: float(min(numbers)), 2, _ANY),
    "sign": (_copied_sign, 1, 2),
    "unif": (_nominal, 1, 2),
}

CONSTANTS: Mapping[str, float] = {
    "pi": math.pi,
    "e": math.e,
    "temper": 27.0,  # degrees Celsius, the temperature at which simulators start
    "temp": 27.0,
    "true": 1.0,
    "false": 0.0,
    "yes": 1.0,
    "no": 0.0,
}


def function_named(name: str) -> tuple[Callable[..., float], int, int] | None:
    """Return a function with the least and the most arguments that it takes, or None where there is none."""
    if name in _OF_ONE:
        return _OF_ONE[name], 1, 1
    if name in _OF_TWO:
        return _OF_TWO[name], 2, 2
    return _OF_MORE.get(name)
