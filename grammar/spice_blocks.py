"""The structure of one file of a SPICE-style list: its element lines, cards and blocks, as a tree.

The grammar is `spice.lark`. Nothing is looked up and nothing evaluated here.
"""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from typing import TYPE_CHECKING, NamedTuple, TypeAlias, cast

from lark import Lark, ParseTree, Token, UnexpectedInput, UnexpectedToken

from .compiled import compiled
from .errors import NetlistError
from .spice_lines import Line, Source, indent
from .spice_words import Assignment, split
from .unexpected import in_words, offending

if TYPE_CHECKING:
    from .spice_problems import Problems

_KEYWORD = re.compile(r"\s*\.(\w*)")

# What the parser may expect, in words; element lines and other cards are expected nearly everywhere.
_WORDS = {
    "SUBCKT": "`.subckt`",
    "ENDS": "`.ends`",
    "IF": "`.if`",
    "ELSEIF": "`.elseif`",
    "ELSE": "`.else`",
    "ENDIF": "`.endif`",
    "ENDC": "`.endc`",
    "ENDDATA": "`.enddata`",
    "ENDALIASES": "`.endaliases`",
    "END": "`.end`",
    "$END": "the end of the file",
}
_OPENED_BY = {
    "ENDS": "`.subckt`",
    "ENDIF": "`.if`",
    "ELSE": "`.if`",
    "ELSEIF": "`.if`",
    "ENDC": "`.control`",
    "ENDDATA": "`.data`",
    "ENDALIASES": "`.aliases`",
}
_CLOSING = {
    "SUBCKT": "ENDS",
    "IF": "ENDIF",
    "CONTROL": "ENDC",
    "DATA": "ENDDATA",
    "ALIASES": "ENDALIASES",
}
_SKIPPED = ("CONTROL", "DATA", "ALIASES")


class Body(NamedTuple):
    """A run of element lines between two offsets of the source."""

    source: Source
    start: int
    end: int


class Card(NamedTuple):
    """A dot card; `keyword` is casefolded and without its dot."""

    keyword: str
    line: Line


class Section(NamedTuple):
    """A named part of a library, from `.lib name` to `.endl`."""

    name: str
    items: list[Item]
    line: Line


class Branch(NamedTuple):
    """What `.if`, `.elseif` or `.else` leads to; `condition` is empty for the last."""

    condition: str
    line: Line
    items: list[Item]


class Conditional(NamedTuple):
    """The branches from `.if` to `.endif`, in order."""

    branches: list[Branch]


@dataclass(slots=True, eq=False)
class Definition:
    """A subcircuit as written: its formal nodes, optional nodes with their defaults, parameters, contents."""

    name: str
    formals: list[str]
    optional: list[Assignment]
    parameters: list[Assignment]
    items: list[Item]
    line: Line


Item: TypeAlias = Body | Card | Section | Definition | Conditional


def parse(source: Source, problems: Problems) -> list[Item]:
    """Return the items of `source`; every error of structure goes to `problems`."""

    def recover(error: UnexpectedInput) -> bool:
        """Report the token and go on without it; at the end of the file close every block that is open."""
        assert isinstance(error, UnexpectedToken), "the terminals cover every line"
        problems.add(_unexpected(source, error))
        while offending(error).type == "$END" and (opened := _innermost_open(error)) is not None:
            problems.add(_unexpected(source, error))
            error.interactive_parser.feed_token(Token(_CLOSING[opened.type], ""))
        return True

    tree = _grammar().parse(source.clean, on_error=recover)  # pyright: ignore[reportUnknownMemberType]
    return _Builder(source, problems).build(tree)


@cache
def _grammar() -> Lark:
    grammar = Path(__file__).with_name("spice.lark")
    text = grammar.read_text(encoding="utf-8")
    return Lark(text, parser="lalr", lexer="basic", start="deck", cache=compiled(grammar))


def _unexpected(source: Source, error: UnexpectedToken) -> NetlistError:
    """Return the error for a card that fits no open block, or for a block that the file leaves open."""
    token = offending(error)
    kind = token.type
    expected = "an element line, another card, or " + in_words(error.expected, _WORDS)
    opened = _innermost_open(error)
    if opened is None:
        card = _card(source, token)
        return card.line.error(
            indent(card.line),
            f"`.{card.keyword}` without its {_OPENED_BY.get(kind, 'block')}",
            expected,
            "remove the card, or add the card that opens its block; "
            "mind that the first line of a list is its title and is not read",
        )
    line = _card(source, opened).line
    closing = f".{_CLOSING[opened.type].casefold()}"
    if kind not in ("$END", "END"):
        card = _card(source, token)
        return card.line.error(
            indent(card.line),
            f"`.{card.keyword}` inside the `{line.text.split()[0]}` of line {line.number}",
            expected,
            f"close the inner block with `{closing}` first, or remove the card",
        )
    return line.error(
        indent(line),
        f"`{line.text.split()[0]}` is never closed",
        f"`{closing}` on a later line",
        f"add `{closing}` where the block ends",
    )


def _innermost_open(error: UnexpectedToken) -> Token | None:
    """Return the token of the innermost block that is open where the parser stopped."""
    parser = error.interactive_parser
    stack = cast("list[object]", parser.parser_state.value_stack)  # pyright: ignore[reportUnknownMemberType]
    opened: list[Token] = []
    for value in stack:
        if not isinstance(value, Token):
            continue
        if opened and value.type == _CLOSING[opened[-1].type]:
            opened.pop()
        elif value.type in _CLOSING and not (opened and opened[-1].type in _SKIPPED):
            opened.append(value)
    return opened[-1] if opened else None


def _card(source: Source, token: Token) -> Card:
    """Return the card of a token, which holds its whole line."""
    line = source.line(source.place(token.start_pos or 0).line)
    return Card(_keyword(line), line)


def _keyword(line: Line) -> str:
    match = _KEYWORD.match(line.text)
    return match[1].casefold() if match else ""


class _Builder:
    """Turns the parser's tree into items, from the leaves up: the depth of blocks costs no stack."""

    def __init__(self, source: Source, problems: Problems) -> None:
        self._source = source
        self._problems = problems
        self._built: dict[int, Item | Branch] = {}

    def build(self, tree: ParseTree) -> list[Item]:
        """Return the items of the whole tree."""
        for subtree in tree.iter_subtrees():
            if subtree is not tree:
                self._built[id(subtree)] = self._block(subtree)
        return self._items(tree.children)

    def _block(self, subtree: ParseTree) -> Item | Branch:
        first = subtree.children[0]
        assert isinstance(first, Token), "every block begins with its card"
        card = _card(self._source, first)
        if subtree.data == "skipped":
            return card
        if subtree.data == "subcircuit":
            return self._definition(card, self._items(subtree.children[1:-1]))
        condition = card.line.text[indent(card.line) + 1 + len(card.keyword) :]
        if subtree.data == "otherwise":
            condition = "" if card.keyword == "else" else condition
            return Branch(condition, card.line, self._items(subtree.children[1:]))
        inner = subtree.children[1:-1]
        others = [self._built[id(child)] for child in inner if _is_branch(child)]
        items = self._items([child for child in inner if not _is_branch(child)])
        branches = [Branch(condition, card.line, items)]
        return Conditional(branches + [branch for branch in others if isinstance(branch, Branch)])

    def _items(self, children: Iterable[Token | ParseTree]) -> list[Item]:
        items: list[Item] = []
        for child in children:
            if isinstance(child, Token):
                self._add_token(items, child)
            else:
                item = self._built[id(child)]
                assert not isinstance(item, Branch)
                items.append(item)
        return items

    def _add_token(self, items: list[Item], token: Token) -> None:
        start = token.start_pos or 0
        end = start + len(token)
        if token.type == "BODY":
            items.append(Body(self._source, start, end))
        elif token.type == "END":
            items.append(_card(self._source, token))
        else:
            for line in self._source.lines(start, end):
                card = Card(_keyword(line), line)
                if card.keyword == "endl":
                    self._close_section(items, card)
                else:
                    items.append(card)

    def _close_section(self, items: list[Item], card: Card) -> None:
        """Make a section of what follows the last `.lib` that has only a name."""
        for index in range(len(items) - 1, -1, -1):
            opening = items[index]
            if isinstance(opening, Card) and opening.keyword == "lib":
                name = opening.line.text.split()[1:]
                if len(name) == 1:
                    items[index:] = [Section(name[0].casefold(), items[index + 1 :], opening.line)]
                    return
        self._problems.add(
            card.line.error(
                indent(card.line),
                "`.endl` without its `.lib`",
                "`.lib` with the name of a section on an earlier line",
                "remove the card, or add the `.lib` that opens the section",
            )
        )

    def _definition(self, card: Card, items: list[Item]) -> Definition:
        name, formals, optional, parameters = "", [], [], []
        try:
            name, formals, optional, parameters = _header(card.line)
        except NetlistError as error:
            self._problems.add(error)
        return Definition(name, formals, optional, parameters, items, card.line)


def _is_branch(child: Token | ParseTree) -> bool:
    return not isinstance(child, Token) and child.data == "otherwise"


def _header(line: Line) -> tuple[str, list[str], list[Assignment], list[Assignment]]:
    """Return name, formal nodes, optional nodes and parameters of a `.subckt` card."""
    words = split(line)
    if len(words.texts) < 2:
        raise line.error(
            len(line.text.rstrip()),
            "a subcircuit without a name",
            "`.subckt NAME` and its nodes",
            "write the name behind `.subckt`",
        )
    optional = [pair for pair in words.assignments if pair.section == "optional"]
    parameters = [pair for pair in words.assignments if pair.section != "optional"]
    return words.texts[1], words.texts[2:], optional, parameters
