"""Arithmetic of a SPICE-style list: `{2*rtop + 1k}` to a number.

The grammar is `expression.lark`. An expression is bounded in length, in nesting and in the work it may cost,
for the text comes from anywhere; every number on the way is a finite float.
"""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Mapping
from functools import cache, lru_cache, partial
from pathlib import Path
from typing import NamedTuple, NoReturn, TypeAlias

from lark import Lark, Token, Transformer, UnexpectedCharacters, UnexpectedInput, UnexpectedToken, v_args

from .expression_functions import CONSTANTS, FUNCTIONS, OPERATORS, SIGNS

LONGEST = 10_000
DEEPEST = 100
MOST_STEPS = 100_000
"""Operations of one evaluation, those inside called functions included."""

_CACHED_LENGTH = 200

_SCALES = {"t": 1e12, "g": 1e9, "k": 1e3, "m": 1e-3, "u": 1e-6, "µ": 1e-6, "μ": 1e-6, "n": 1e-9, "p": 1e-12}
_SCALES |= {"f": 1e-15}
_NUMBER = re.compile(r"(\d+\.?\d*|\.\d+)(?:[eEdD]([+-]?\d+))?([a-zA-ZµμΩΩ]*)(\d*)")
_NAMES = re.compile(r"(?<![\w.])[^\W\d][\w.]*")
_CIRCUIT_FUNCTION = re.compile(r"(?<![\w.])(?:v|i|ddt|idt|sdt|delay|absdelay|laplace|table)\s*\(", re.IGNORECASE)
_CIRCUIT_NAMES = frozenset({"time", "freq", "hertz"})

# The grammar's terminals in words, for what was expected.
_WORDS = {
    "NUMBER": "a number",
    "NAME": "a name",
    "LPAR": "`(`",
    "RPAR": "`)`",
    "RBRACE": "`}`",
    "COMMA": "`,`",
    "COLON": "`:`",
    "PLUS": "an operator",
    "$END": "the end of the expression",
}


class ExpressionError(ValueError):
    """An expression that cannot be read, or has no value.

    index:    where in the text, from 0
    expected: what would have been right there
    remedy:   what to do about it
    dynamic:  it asks for something that only a simulation knows, as V(out) does: no fault, and no number
    """

    def __init__(
        self, message: str, index: int, *, expected: str = "", remedy: str = "", dynamic: bool = False
    ) -> None:
        super().__init__(message)
        self.message = message
        self.index = index
        self.expected = expected or "an expression with a finite real value"
        self.remedy = remedy or "correct the expression, or write the number itself"
        self.dynamic = dynamic


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
    return _Evaluation(values, functions).value(_parsed(text), values, 0)


class _Node(NamedTuple):
    """One operation: `depth` levels with what is below it; `index` is its place in the text.

    kind: "number", "name", "call", "sign", "power", "chain" or "choice"
    head: the name, or the operators of a chain, blank between them
    """

    kind: str
    index: int
    depth: int
    head: str = ""
    number: float = 0.0
    parts: tuple[_Node, ...] = ()


class _Evaluation:
    def __init__(self, values: Values, functions: Functions) -> None:
        self._values = values
        self._functions = functions
        self._steps = 0

    def value(self, node: _Node, values: Values, level: int) -> float:
        """Return the value of `node`, which stands `level` levels below the whole; a choice leaves one side."""
        self._steps += 1
        if self._steps > MOST_STEPS:
            raise ExpressionError(f"more than {MOST_STEPS} operations", node.index)
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
            raise _no_value(node) from None
        if not math.isfinite(result):
            raise _no_value(node)
        return result

    def _named(self, node: _Node, values: Values) -> float:
        if node.head in values:
            return values[node.head]
        if node.head in CONSTANTS:
            return CONSTANTS[node.head]
        raise ExpressionError(
            f"unknown name {node.head}",
            node.index,
            expected="the name of a parameter",
            remedy=f"define it: `.param {node.head} = ...`",
            dynamic=node.head in _CIRCUIT_NAMES,
        )

    def _called(self, node: _Node, numbers: list[float], level: int) -> float:
        function = self._functions[node.head]
        if len(numbers) != len(function.arguments):
            _wrong_count(node, str(len(function.arguments)))
        body = _parsed(function.text)
        if level + body.depth > DEEPEST:
            raise _too_deep(node.index)
        arguments = dict(zip(function.arguments, numbers, strict=True))
        return self.value(body, {**self._values, **arguments}, level + 1)


def _operation(node: _Node) -> Callable[..., float]:
    """Return what a node does with the numbers of its parts."""
    if node.kind == "power":
        return math.pow
    if node.kind == "sign":
        return SIGNS[node.head]
    if node.kind == "chain":
        return partial(_chained, node.head.split())
    if node.head not in FUNCTIONS:
        raise ExpressionError(
            f"unknown function {node.head}",
            node.index,
            expected="a usual function, such as sqrt, min, max or if",
            remedy=f"define it: `.func {node.head}(x) {{...}}`",
        )
    function, least, most = FUNCTIONS[node.head]
    if not least <= len(node.parts) <= most:
        _wrong_count(node, str(least) if least == most else f"{least} or more")
    return function


def _chained(marks: list[str], first: float, *others: float) -> float:
    for mark, number in zip(marks, others, strict=True):
        first = OPERATORS[mark](first, number)
    return first


def _wrong_count(node: _Node, wanted: str) -> NoReturn:
    raise ExpressionError(
        f"{node.head} with {len(node.parts)} arguments",
        node.index,
        expected=f"{wanted} between the parentheses",
        remedy="add or remove arguments",
    )


def _no_value(node: _Node) -> ExpressionError:
    return ExpressionError("no finite real number", node.index)


def _too_deep(index: int) -> ExpressionError:
    return ExpressionError(
        f"an expression nested deeper than {DEEPEST} levels",
        index,
        expected=f"at most {DEEPEST} levels of parentheses, signs and functions",
        remedy="name a part of it in a `.param` of its own",
    )


def _parsed(text: str) -> _Node:
    """Return the operations of `text`; short texts, which come again with every instance, are kept."""
    return _parsed_short(text) if len(text) <= _CACHED_LENGTH else _parse(text)


@lru_cache(maxsize=1024)
def _parsed_short(text: str) -> _Node:
    return _parse(text)


def _parse(text: str) -> _Node:
    if len(text) > LONGEST:
        raise ExpressionError(f"an expression of {len(text)} characters", 0, expected=f"at most {LONGEST}")
    if match := _CIRCUIT_FUNCTION.search(text):
        raise ExpressionError("depends on the simulated circuit", match.start(), dynamic=True)
    try:
        node: object = _grammar().parse(text)
    except UnexpectedInput as error:
        raise _unexpected(text, error) from None
    assert isinstance(node, _Node)
    return node


def _unexpected(text: str, error: UnexpectedInput) -> ExpressionError:
    if isinstance(error, UnexpectedCharacters):
        index = error.pos_in_stream or 0
        return ExpressionError(f"`{text[index]}` has no meaning in an expression", index)
    assert isinstance(error, UnexpectedToken)
    words = sorted({_WORDS[name] for name in error.accepts if name in _WORDS})
    if error.token.type == "$END":
        return ExpressionError("the expression ends too early", len(text), expected=", ".join(words))
    return ExpressionError(f"unexpected `{error.token}`", error.token.start_pos or 0, expected=", ".join(words))


@cache
def _grammar() -> Lark:
    text = (Path(__file__).parent / "expression.lark").read_text(encoding="utf-8")
    return Lark(text, parser="lalr", transformer=_Nodes())


def _node(kind: str, index: int, head: str, parts: tuple[_Node, ...]) -> _Node:
    depth = 1 + max((part.depth for part in parts), default=0)
    if depth > DEEPEST:
        raise _too_deep(index)
    return _Node(kind, index, depth, head, 0.0, parts)


@v_args(inline=True)
class _Nodes(Transformer[Token, _Node]):
    """Builds the nodes while the parser reads, so no tree is walked and nesting costs no stack."""

    def number(self, token: Token) -> _Node:
        index = token.start_pos or 0
        number = _number(token)
        if not math.isfinite(number):
            raise _no_value(_Node("number", index, 1))
        return _Node("number", index, 1, "", number)

    def name(self, token: Token) -> _Node:
        return _Node("name", token.start_pos or 0, 1, token.casefold())

    def call(self, token: Token, *parts: _Node | None) -> _Node:
        arguments = tuple(part for part in parts if part is not None)
        return _node("call", token.start_pos or 0, token.casefold(), arguments)

    def sign(self, token: Token, part: _Node) -> _Node:
        return _node("sign", token.start_pos or 0, str(token), (part,))

    def power(self, base: _Node, exponent: _Node) -> _Node:
        return _node("power", base.index, "", (base, exponent))

    def choice(self, *parts: _Node) -> _Node:
        return _node("choice", parts[0].index, "", parts)

    def chain(self, *children: _Node | Token) -> _Node:
        parts = tuple(child for child in children if isinstance(child, _Node))
        marks = " ".join(child for child in children if isinstance(child, Token))
        return _node("chain", parts[0].index, marks, parts)


def _number(text: str) -> float:
    """Return the number of a literal: its scale factor, as a simulator reads it, or its marking code."""
    match = _NUMBER.fullmatch(text)
    if match is None:
        return math.nan
    digits, exponent, letters, decimals = match.groups()
    if decimals and "." not in digits:
        digits = f"{digits}.{decimals}"
    unit = letters.casefold()
    if unit.startswith("meg"):
        scale = 1e6
    elif unit.startswith("mil"):
        scale = 25.4e-6
    else:
        scale = _SCALES.get(unit[:1], 1.0)
    return float(f"{digits}e{exponent or 0}") * scale
