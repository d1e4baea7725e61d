"""The text of an expression to the operations in it, by the grammar `expression.lark`."""

from __future__ import annotations

import math
import re
from functools import cache, lru_cache
from pathlib import Path
from typing import NamedTuple, cast

from lark import (
    Lark,
    Token,
    Transformer,
    UnexpectedCharacters,
    UnexpectedInput,
    UnexpectedToken,
    v_args,  # pyright: ignore[reportUnknownVariableType]  # lark leaves its wrapper untyped
)

from .compiled import compiled
from .unexpected import in_words, offending

LONGEST = 10_000
DEEPEST = 100

_CACHED_LENGTH = 200

_SCALES = {
    "t": 1e12,
    "g": 1e9,
    "k": 1e3,
    "m": 1e-3,
    "u": 1e-6,
    "µ": 1e-6,
    "μ": 1e-6,
    "n": 1e-9,
    "p": 1e-12,
    "f": 1e-15,
}
_NUMBER = re.compile(r"(\d+\.?\d*|\.\d+)(?:[eEdD]([+-]?\d+))?([a-zA-ZµμΩΩ]*)(\d*)")
_CIRCUIT_FUNCTION = re.compile(
    r"(?<![\w.])(?:v|i|ddt|idt|sdt|delay|absdelay|laplace|table)\s*\(", re.IGNORECASE
)

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


class Node(NamedTuple):
    """One operation: `depth` levels with what is below it; it starts at `start` in the text.

    kind: "number", "name", "call", "sign", "power", "chain" or "choice"
    head: the name, or the operators of a chain, blank between them
    """

    kind: str
    start: int
    depth: int
    head: str = ""
    number: float = 0.0
    parts: tuple[Node, ...] = ()


def no_value(node: Node) -> ExpressionError:
    """Return the error for an operation without a result."""
    return ExpressionError("no finite real number", node.start)


def too_deep(index: int) -> ExpressionError:
    """Return the error for nesting beyond the bound."""
    return ExpressionError(
        f"an expression nested deeper than {DEEPEST} levels",
        index,
        expected=f"at most {DEEPEST} levels of parentheses, signs and functions",
        remedy="name a part of it in a `.param` of its own",
    )


def parsed(text: str) -> Node:
    """Return the operations of `text`; short texts, which come again with every instance, are kept."""
    return _parsed_short(text) if len(text) <= _CACHED_LENGTH else _parse(text)


@lru_cache(maxsize=1024)
def _parsed_short(text: str) -> Node:
    return _parse(text)


def _parse(text: str) -> Node:
    if len(text) > LONGEST:
        raise ExpressionError(f"an expression of {len(text)} characters", 0, expected=f"at most {LONGEST}")
    if match := _CIRCUIT_FUNCTION.search(text):
        raise ExpressionError("depends on the simulated circuit", match.start(), dynamic=True)
    try:
        node: object = _grammar().parse(text)  # pyright: ignore[reportUnknownMemberType]
    except UnexpectedInput as error:
        raise _unexpected(text, error) from None
    assert isinstance(node, Node)
    return node


def _unexpected(text: str, error: UnexpectedInput) -> ExpressionError:
    if isinstance(error, UnexpectedCharacters):
        index = cast(int, error.pos_in_stream)  # pyright: ignore[reportUnknownMemberType]
        return ExpressionError(f"`{text[index]}` has no meaning in an expression", index)
    assert isinstance(error, UnexpectedToken)
    token = offending(error)
    expected = in_words(error.accepts or (), _WORDS)
    if token.type == "$END":
        return ExpressionError("the expression ends too early", len(text), expected=expected)
    return ExpressionError(f"unexpected `{token}`", token.start_pos or 0, expected=expected)


@cache
def _grammar() -> Lark:
    grammar = Path(__file__).with_name("expression.lark")
    text = grammar.read_text(encoding="utf-8")
    return Lark(text, parser="lalr", transformer=_Nodes(), cache=compiled(grammar))


def _node(kind: str, index: int, head: str, parts: tuple[Node, ...]) -> Node:
    depth = 1 + max((part.depth for part in parts), default=0)
    if depth > DEEPEST:
        raise too_deep(index)
    return Node(kind, index, depth, head, 0.0, parts)


@v_args(inline=True)
class _Nodes(Transformer[Token, Node]):
    """Builds the nodes while the parser reads, so no tree is walked and nesting costs no stack."""

    def number(self, token: Token) -> Node:
        index = token.start_pos or 0
        number = _number(token)
        if not math.isfinite(number):
            raise no_value(Node("number", index, 1))
        return Node("number", index, 1, "", number)

    def name(self, token: Token) -> Node:
        return Node("name", token.start_pos or 0, 1, token.casefold())

    def call(self, token: Token, *parts: Node | None) -> Node:
        arguments = tuple(part for part in parts if part is not None)
        return _node("call", token.start_pos or 0, token.casefold(), arguments)

    def sign(self, token: Token, part: Node) -> Node:
        return _node("sign", token.start_pos or 0, str(token), (part,))

    def power(self, base: Node, exponent: Node) -> Node:
        return _node("power", base.start, "", (base, exponent))

    def choice(self, *parts: Node) -> Node:
        return _node("choice", parts[0].start, "", parts)

    def chain(self, *children: Node | Token) -> Node:
        parts = tuple(child for child in children if isinstance(child, Node))
        if len(parts) == 1:
            return parts[0]  # nothing was chained at this precedence
        marks = " ".join(child for child in children if isinstance(child, Token))
        return _node("chain", parts[0].start, marks, parts)


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
