"""What stands inside the coarse tokens of edif.lark, read when it is needed.

The grammar has already checked the shape of such a token, so these patterns only take it apart. Until then a
token is kept as a span of the text: that takes little memory, and nothing at all is spent on the cells that a
design does not use.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from sys import intern

from .edif_forms import (
    CellRef,
    Designator,
    InstanceRun,
    JoinedRun,
    PinNumber,
    Property,
)
from .edif_names import Name, decode, shown

_DEEPEST = 8  # as the terminal LIST


def _list(depth: int) -> str:
    """Return a pattern for a list with lists nested in it to this depth; strings may hold parentheses."""
    inner = ""
    for _ in range(depth):
        inner = rf'\((?>[^()"]++|"[^"]*+"{inner and "|" + inner})*+\)'
    return rf"{inner}\s*+"


_LIST = _list(_DEEPEST)
_WORD = r'(?>&(?=[^\s()"]))?+([^\s()"]++)\s*+'  # without the & that marks an identifier
_RENAME = rf'\(\s*+rename\s++{_WORD}"([^"]*+)"\s*+\)\s*+'
_NAMED = rf'\(\s*+name\s++{_WORD}(?>[^()"]++|"[^"]*+"|{_LIST})*+\)\s*+'
_DISPLAYED = r'(?>\(\s*+stringdisplay\s*+)?+"([^"]*+)"'
_LIBRARY_REF = rf"\(\s*+libraryref\s++{_WORD}\)\s*+"
_CELL_REF = rf"\(\s*+cellref\s++{_WORD}(?>{_LIBRARY_REF})?+\)\s*+"
_VIEW_REF = rf"\(\s*+viewref\s++{_WORD}(?>{_CELL_REF})?+\)\s*+"
_PROPERTY = rf"\(\s*+(?:property|parameter(?>assign)?+)\s*+(?:{_WORD}|{_RENAME})\(\s*+string\s*+{_DISPLAYED}"
_DESIGNATOR = rf"\(\s*+designator\s*+{_DISPLAYED}"
_PORT_INSTANCE = (
    rf"\(\s*+portinstance\s*+(?:{_WORD}|{_NAMED})(?>(?!\(\s*+designator){_LIST})*+(?>{_DESIGNATOR})?+"
)


def _compiled(pattern: str) -> re.Pattern[str]:
    return re.compile(pattern, re.IGNORECASE | re.ASCII)


_QUOTED_FORM = _compiled(r'"([^"]*+)"')
_RENAME_FORM = _compiled(_RENAME)
_VIEW_REF_FORM = _compiled(_VIEW_REF)
_PROPERTY_FORM = _compiled(_PROPERTY)
_PORT_INSTANCE_FORM = _compiled(_PORT_INSTANCE)
_PORT_REF_FORM = _compiled(rf"\(\s*+portref\s++{_WORD}(?>\(\s*+instanceref\s++{_WORD}\)\s*+)?+\)\s*+")
_JOINED_FORM = _compiled(r"\(\s*+joined\s*+")
_NET_FORM = _compiled(rf"\(\s*+net\s*+(?:{_WORD}|{_RENAME})(?>(?!\(\s*+joined){_LIST})*+")
_INSTANCE_FORM = _compiled(rf"\(\s*+instance\s*+(?:{_WORD}|{_NAMED}|{_RENAME})({_VIEW_REF})")
_ITEM_FORM = _compiled(rf"(?:(?={_PROPERTY})|(?={_DESIGNATOR})|(?={_PORT_INSTANCE})|){_LIST}")
_PROPERTY_VALUE = 4  # the groups of the pattern above: the last one that matched tells what the item is
_DESIGNATOR_TEXT = 5
_PIN_NUMBER = 8


def port_references(text: str, run: JoinedRun) -> Iterator[tuple[str, str, int]]:
    """Yield port, instance (empty where a port of the cell itself is meant) and offset of each `portRef`."""
    for match in _PORT_REF_FORM.finditer(text, run.start, run.end):
        port, instance = match.groups("")
        yield intern(port), instance, match.start()


def instance_items(text: str, run: InstanceRun) -> Iterator[Property | Designator | PinNumber]:
    """Yield what the items of an instance say, in the order of the file."""
    for match in _ITEM_FORM.finditer(text, run.start, run.end):
        last = match.lastindex
        if last == _PROPERTY_VALUE:
            plain, _, renamed, value = match.group(1, 2, 3, 4)
            if value:  # many exporters write a row of empty fields
                yield Property(intern(plain) if plain else decode(renamed), decode(value))
        elif last == _PIN_NUMBER:
            yield PinNumber(match[6] or match[7], decode(match[8]))
        elif last == _DESIGNATOR_TEXT:
            yield Designator(decode(match[5]))


def read_instance(token: str, start: int) -> tuple[Name, str, InstanceRun]:
    """Return the name of an instance, its `viewRef` as written, and the span of its items."""
    match = _INSTANCE_FORM.match(token)
    assert match is not None  # the terminal has the same shape
    plain, named, renamed, display, view_ref, *_ = match.groups()
    word = plain or named or renamed
    group = 1 if plain else 2 if named else 3
    name = Name(
        word, word if display is None else shown(decode(display), word), start + _word_start(match, group)
    )
    return name, view_ref, InstanceRun(start + match.end(), start + len(token))


def read_net(token: str, start: int) -> tuple[Name, JoinedRun]:
    """Return the name of a net and the span in which its ports are."""
    match = _NET_FORM.match(token)
    assert match is not None
    plain, renamed, display = match.groups()
    word = plain or renamed
    name = Name(
        word,
        word if display is None else shown(decode(display), word),
        start + _word_start(match, 1 if plain else 2),
    )
    joined = _JOINED_FORM.match(token, match.end())
    assert joined is not None
    return name, JoinedRun(start + joined.end(), start + len(token))


def read_property(token: str) -> Property:
    """Return a property with a string by its display name."""
    match = _PROPERTY_FORM.match(token)
    assert match is not None
    plain, _, renamed, value = match.groups()
    return Property(intern(plain) if plain else decode(renamed), decode(value))


def read_pin_number(token: str) -> PinNumber:
    """Return the port and its designator from a `portInstance` with its designator in front."""
    match = _PORT_INSTANCE_FORM.match(token)
    assert match is not None
    plain, named, number = match.groups("")
    return PinNumber(plain or named, decode(number))


def read_quoted(token: str) -> str:
    """Return the first string in a token."""
    match = _QUOTED_FORM.search(token)
    assert match is not None
    return decode(match[1])


def read_rename(token: str, start: int) -> Name:
    """Return the name that a rename defines."""
    match = _RENAME_FORM.match(token)
    assert match is not None
    return Name(match[1], shown(decode(match[2]), match[1]), start + _word_start(match, 1))


def read_view_ref(token: str) -> CellRef:
    """Return the cell that a `viewRef` names, its library and the view."""
    match = _VIEW_REF_FORM.match(token)
    assert match is not None
    view, cell, library = match.groups("")
    return CellRef(cell, library, view)


def _word_start(match: re.Match[str], group: int) -> int:
    """Return where a word starts in the text, its & included."""
    start = match.start(group)
    return start - 1 if match.string[start - 1] == "&" else start
