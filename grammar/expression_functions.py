"""The operators, functions and constants of expressions in SPICE-style lists, as simulators document them."""

from __future__ import annotations

import math
import operator
from collections.abc import Callable, Mapping

_ANY = 64
"""Arguments that a function of any number of them takes at most."""


def _signed_power(base: float, exponent: float) -> float:
    return math.copysign(math.pow(abs(base), exponent), base)


def _sign(x: float) -> float:
    return math.copysign(1.0, x) if x else 0.0


def _nominal(value: float, *_: float) -> float:
    """Return the middle of a random distribution: a review takes its tolerances from elsewhere."""
    return value


def _limited(x: float, *bounds: float) -> float:
    """Return `x` between two bounds; with one argument more than `x`, `x` is a nominal value and it its spread."""
    return x if len(bounds) < 2 else min(max(x, min(bounds)), max(bounds))


def _if(condition: float, yes: float, no: float) -> float:
    return yes if condition else no


def _as_number(compare: Callable[[float, float], object]) -> Callable[[float, float], float]:
    return lambda a, b: float(bool(compare(a, b)))


OPERATORS: Mapping[str, Callable[[float, float], float]] = {
    "+": operator.add,
    "-": operator.sub,
    "*": operator.mul,
    "/": operator.truediv,
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

FUNCTIONS: Mapping[str, tuple[Callable[..., float], int, int]] = {
    "abs": (abs, 1, 1),
    "acos": (math.acos, 1, 1),
    "acosh": (math.acosh, 1, 1),
    "agauss": (_nominal, 1, 4),
    "arccos": (math.acos, 1, 1),
    "arcsin": (math.asin, 1, 1),
    "arctan": (math.atan, 1, 1),
    "asin": (math.asin, 1, 1),
    "asinh": (math.asinh, 1, 1),
    "atan": (math.atan, 1, 1),
    "atan2": (math.atan2, 2, 2),
    "atanh": (math.atanh, 1, 1),
    "aunif": (_nominal, 1, 3),
    "buf": (lambda x: float(x > 0.5), 1, 1),
    "cbrt": (math.cbrt, 1, 1),
    "ceil": (math.ceil, 1, 1),
    "cos": (math.cos, 1, 1),
    "cosh": (math.cosh, 1, 1),
    "db": (lambda x: 20 * math.log10(abs(x)), 1, 1),
    "exp": (math.exp, 1, 1),
    "fabs": (abs, 1, 1),
    "floor": (math.floor, 1, 1),
    "fmod": (math.fmod, 2, 2),
    "gauss": (_nominal, 1, 4),
    "hypot": (math.hypot, 2, 2),
    "if": (_if, 3, 3),
    "int": (math.trunc, 1, 1),
    "inv": (lambda x: float(x <= 0.5), 1, 1),
    "limit": (_limited, 2, 3),
    "ln": (math.log, 1, 1),
    "log": (math.log, 1, 1),
    "log10": (math.log10, 1, 1),
    "max": (max, 2, _ANY),
    "mc": (_nominal, 1, 2),
    "min": (min, 2, _ANY),
    "nint": (round, 1, 1),
    "par": (_nominal, 1, 1),
    "pow": (math.pow, 2, 2),
    "pwr": (_signed_power, 2, 2),
    "pwrs": (_signed_power, 2, 2),
    "round": (round, 1, 1),
    "sgn": (_sign, 1, 1),
    "sign": (lambda x, y=1.0: math.copysign(x, y), 1, 2),
    "sin": (math.sin, 1, 1),
    "sinh": (math.sinh, 1, 1),
    "sqrt": (math.sqrt, 1, 1),
    "stp": (lambda x: float(x > 0), 1, 1),
    "tan": (math.tan, 1, 1),
    "tanh": (math.tanh, 1, 1),
    "trunc": (math.trunc, 1, 1),
    "u": (lambda x: float(x > 0), 1, 1),
    "unif": (_nominal, 1, 2),
    "uramp": (lambda x: max(x, 0.0), 1, 1),
    "ustep": (lambda x: float(x > 0), 1, 1),
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
