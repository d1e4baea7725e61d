# ruff: noqa: N802 (a method that serves a terminal of edif.lark bears its name)
"""From the text of an EDIF file to its forms: the LALR parser and the transformer embedded in it.

The parser builds no tree: each form is made the moment its list is closed, from what its items have become.
"""

from __future__ import annotations

import re
from functools import cache, lru_cache
from importlib import import_module
from pathlib import Path
from typing import Any, cast

from lark import Lark, Token, Transformer

from .compiled import compiled
from .edif_forms import CellRef, Designator, Edif, Instance, JoinedRun, Net, PinNumber, Property
from .edif_make import NAMED_FORMS, PLAIN_FORMS, edif
from .edif_names import Name, identifier, shown
from .edif_runs import (
    read_instance,
    read_net,
    read_pin_number,
    read_property,
    read_quoted,
    read_rename,
    read_view_ref,
)
from .edif_values import indexed

_SHORT = 200  # characters
_BLANKS = " \t\n\r\f\v"  # those of ASCII, as the grammar knows them
_Items = list[Any]


def parse(text: str) -> Edif:
    """Return the forms of an EDIF text.

    Raises lark.UnexpectedInput where the text does not follow the grammar.
    """
    return cast(Edif, cast(Any, _parser()).parse(text))  # lark says Tree, the transformer makes an Edif


@cache
def _parser() -> Lark:
    """Return the parser, its lexer and loop the compiled ones where the package lark_cython is installed."""
    try:
        plugins = cast(dict[str, Any], import_module("lark_cython").plugins)
    except ImportError:
        plugins = {}
    return build_parser(plugins)


def build_parser(plugins: dict[str, Any]) -> Lark:
    """Return a new parser with the given plugins of lark; none for plain lark."""
    grammar = Path(__file__).with_name("edif.lark")
    return Lark(
        grammar.read_text(encoding="utf-8"),
        parser="lalr",
        lexer="basic",  # a keyword is known by its parenthesis, so the lexer needs no context
        start="edif",
        transformer=FormBuilder(),
        g_regex_flags=re.ASCII,
        cache=compiled(grammar),
        _plugins=plugins,
    )


class FormBuilder(Transformer[Token, Edif]):
    """Makes the forms, innermost first; the first item of a rule is the token that opens the list."""

    def ATOM(self, token: Token) -> Name:
        """A word: an identifier, an integer or a keyword that is used as a name."""
        word = identifier(token.value.rstrip(_BLANKS))
        return Name(word, word, _start(token))

    def STRING(self, token: Token) -> str:
        """A string, decoded."""
        return read_quoted(token.value)

    def RENAME_SIMPLY(self, token: Token) -> Name:
        """`(rename identifier "text")`."""
        return read_rename(token.value, _start(token))

    def DESIGNATOR_SIMPLY(self, token: Token) -> Designator:
        """`(designator "text")`."""
        return Designator(read_quoted(token.value))

    def PROPERTY_SIMPLY(self, token: Token) -> Property:
        """A property with a string."""
        return read_property(token.value)

    def PORT_INSTANCE_SIMPLY(self, token: Token) -> PinNumber:
        """`(portInstance port ...)`."""
        return read_pin_number(token.value)

    def VIEW_REF_SIMPLY(self, token: Token) -> CellRef:
        """`(viewRef view (cellRef cell (libraryRef library)))`."""
        return _cell_ref(token.value)

    def JOINED_SIMPLY(self, token: Token) -> JoinedRun:
        """A whole `joined` form that holds plain references to ports and nothing else."""
        return JoinedRun(_start(token), _start(token) + len(token.value))

    def NET_SIMPLY(self, token: Token) -> Net:
        """A whole net in the usual spelling."""
        name, joined = read_net(token.value, _start(token))
        return Net(name, [joined])

    def INSTANCE_SIMPLY(self, token: Token) -> Instance:
        """A whole instance in the usual spelling."""
        name, view_ref, items = read_instance(token.value, _start(token))
        return Instance(name, _cell_ref(view_ref), items)

    def edif(self, items: _Items) -> Edif:
        """The whole file."""
        return edif(items[1:])

    def named(self, items: _Items) -> object:
        """A form with a name."""
        return NAMED_FORMS[_keyword(items[0])](items[1:])

    def plain(self, items: _Items) -> object:
        """A form without a name."""
        return PLAIN_FORMS[_keyword(items[0])](items[1:])

    def name(self, items: _Items) -> Name:
        """`(name identifier ...)`."""
        return items[1]

    def rename(self, items: _Items) -> Name:
        """`(rename identifier "text")` in another spelling than the usual one."""
        return items[1]._replace(display=shown(items[2], items[1].identifier))

    def display(self, items: _Items) -> str:
        """`(stringDisplay "text" ...)`."""
        return items[1]

    def indexed(self, items: _Items) -> Name:
        """`(array name ...)` and `(member name ...)`."""
        return indexed(items[1:])

    def unknown(self, items: _Items) -> None:
        """A list without meaning for a netlist, and all that is in it."""


_short_cell_ref = lru_cache(maxsize=4096)(read_view_ref)


def _cell_ref(view_ref: str) -> CellRef:
    """Return what a `viewRef` refers to, which is the same short text a thousand times over."""
    return _short_cell_ref(view_ref) if len(view_ref) <= _SHORT else read_view_ref(view_ref)


def _keyword(opening: Token) -> str:
    return opening.value[1:].strip().lower()


def _start(token: Token) -> int:
    """Return where a token starts; one that was read from text always knows."""
    return token.start_pos or 0
