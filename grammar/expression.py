"""Arithmetic of a SPICE-style list: `{2*rtop + 1k}` to a number.

The grammar is `expression.lark`. An expression is bounded in length, in nesting and in the work it may cost,
for the text comes from anywhere; every number on the way is a finite float.
"""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Mapping
from functools import partial
from typing import NamedTuple, NoReturn, TypeAlias

from .expression_functions import CONSTANTS, OPERATORS, SIGNS, function_named
from .expression_grammar import DEEPEST, ExpressionError, Node, no_value, parsed, too_deep

MOST_STEPS = 100_000
"""Operations of one evaluation, those inside called functions included."""

_NAMES = re.compile(r"(?<![\w.])[^\W\d][\w.]*")
_CIRCUIT_NAMES = frozenset({"time", "freq", "hertz"})


class Function(NamedTuple):
    """A function of the list's own, as `.func twice(x) {2*x}`; names casefolded."""

    arguments: tuple[str, ...]
    text: str


Values: TypeAlias = Mapping[str, float]
Functions: TypeAlias = Mapping[str, Function]


def names_in(text: str, functions: Functions) -> set[str]:
    """Return the names, casefolded, whose numbers `text` and the functions it calls may ask for.

    The text need not be well formed.
    """
    names: set[str] = set()
    pending = [text]
    called: set[str] = set()
    while pending:
        text = pending.pop()
        for name in _NAMES.findall(text):
            folded = name.casefold()
            names.add(folded)
            if folded in functions and folded not in called:
                called.add(folded)
                pending.append(functions[folded].text)
    return names


def evaluate(text: str, values: Values, functions: Functions) -> float:
    """Return the value of `text`, given the values of names and the list's own functions (casefolded).

    Raises ExpressionError where it cannot be read, holds an unknown name, has no finite real value, or goes
    beyond a bound.
    """
    return _Evaluation(values, functions).value(parsed(text), values, 0)


class _Evaluation:
    def __init__(self, values: Values, functions: Functions) -> None:
        self._values = values
        self._functions = functions
        self._steps = 0

    def value(self, node: Node, values: Values, level: int) -> float:
        """Return the value of `node`, `level` levels below the whole; of a choice only the chosen side."""
        self._steps += 1
        if self._steps > MOST_STEPS:
            raise ExpressionError(f"more than {MOST_STEPS} operations", node.start)
        if node.kind == "number":
            return node.number
        if node.kind == "name":
            return self._named(node, values)
        if node.kind == "choice" or (node.kind == "call" and node.head == "if" and len(node.parts) == 3):
            condition = self.value(node.parts[0], values, level + 1)
            return self.value(node.parts[1 if condition else 2], values, level + 1)
        numbers = [self.value(part, values, level + 1) for part in node.parts]
        if node.kind == "call" and node.head in self._functions:
            return self._called(node, numbers, level)
        operation = _operation(node)
        try:
            result = operation(*numbers)
        except (ArithmeticError, ValueError):
            raise no_value(node) from None
        if not math.isfinite(result):
            raise no_value(node)
        return result

    def _named(self, node: Node, values: Values) -> float:
        if node.head in values:
            return values[node.head]
        if node.head in CONSTANTS:
            return CONSTANTS[node.head]
        raise ExpressionError(
            f"unknown name {node.head}",
            node.start,
            expected="the name of a parameter",
            remedy=f"define it: `.param {node.head} = ...`",
            dynamic=node.head in _CIRCUIT_NAMES,
        )

    def _called(self, node: Node, numbers: list[float], level: int) -> float:
        function = self._functions[node.head]
        if len(numbers) != len(function.arguments):
            _wrong_count(node, str(len(function.arguments)))
        body = parsed(function.text)
        if level + body.depth > DEEPEST:
            raise too_deep(node.start)
        arguments = dict(zip(function.arguments, numbers, strict=True))
        return self.value(body, {**self._values, **arguments}, level + 1)


def _operation(node: Node) -> Callable[..., float]:
    """Return what a node does with the numbers of its parts."""
    if node.kind == "power":
        return math.pow
    if node.kind == "sign":
        return SIGNS[node.head]
    if node.kind == "chain":
        return partial(_chained, node.head.split())
    found = function_named(node.head)
    if found is None:
        raise ExpressionError(
            f"unknown function {node.head}",
            node.start,
            expected="a usual function, such as sqrt, min, max or if",
            remedy=f"define it: `.func {node.head}(x) {{...}}`",
        )
    function, least, most = found
    if not least <= len(node.parts) <= most:
        _wrong_count(node, str(least) if least == most else f"{least} or more")
    return function


def _chained(marks: list[str], first: float, *others: float) -> float:
    for mark, number in zip(marks, others, strict=True):
        first = OPERATORS[mark](first, number)
    return first


def _wrong_count(node: Node, wanted: str) -> NoReturn:
    raise ExpressionError(
        f"{node.head} with {len(node.parts)} arguments",
        node.start,
        expected=f"{wanted} between the parentheses",
        remedy="add or remove arguments",
    )
