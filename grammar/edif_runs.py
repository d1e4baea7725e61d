"""What stands inside the coarse tokens of edif.lark, read when it is needed.

The grammar has already checked the shape of such a token, so that these patterns only take it apart.
Kept as text until then, a run of forms takes a fraction of the memory, and nothing at all is spent on the
cells that a design does not use.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from typing import NamedTuple

from .edif_names import decode, identifier

_WORD = r'([^\s()"]+)\s*'
_RENAME = rf'\(\s*rename\s+{_WORD}"([^"]*)"\s*\)\s*'
_DISPLAYED = r'(?:\(\s*stringdisplay\s*)?"([^"]*)"'
_PORT_REF = re.compile(rf"\(\s*portref\s+{_WORD}(?:\(\s*instanceref\s+{_WORD}\)\s*)?\)", re.IGNORECASE)
_PLAIN_PROPERTY = re.compile(rf'\(\s*[a-z]+\s+{_WORD}\(\s*string\s*"([^"]*)"\s*\)\s*\)', re.IGNORECASE)
_PROPERTY = re.compile(rf"\(\s*[a-z]+\s*(?:{_WORD}|{_RENAME})\(\s*string\s*{_DISPLAYED}", re.IGNORECASE)
_PORT_INSTANCE = re.compile(
    rf"\(\s*portinstance\s*(?:{_WORD}|\(\s*name\s+{_WORD}.*?)\(\s*designator\s*{_DISPLAYED}",
    re.IGNORECASE | re.DOTALL,
)
_QUOTED = re.compile(r'"([^"]*)"')
_RENAMED = re.compile(_RENAME, re.IGNORECASE)
_VIEW_REF = re.compile(
    rf"\(\s*viewref\s+{_WORD}(?:\(\s*cellref\s+{_WORD}(?:\(\s*libraryref\s+{_WORD})?)?", re.IGNORECASE
)


class JoinedRun(NamedTuple):
    """A run of `(portRef port (instanceRef instance))` that starts at `offset` of the file."""

    text: str
    offset: int

    def references(self) -> Iterator[tuple[str, str, int]]:
        """Yield port, instance (empty where a port of the cell itself is meant) and offset."""
        for match in _PORT_REF.finditer(self.text):
            port, instance = match.groups("")
            yield identifier(port), instance and identifier(instance), self.offset + match.start()


class PropertyRun(NamedTuple):
    """A run of `(property name (string "value"))`."""

    text: str

    def pairs(self) -> Iterator[tuple[str, str]]:
        """Yield the names and the decoded values."""
        for name, value in _PLAIN_PROPERTY.findall(self.text):
            yield identifier(name), decode(value)


def read_property(text: str) -> tuple[str, str]:
    """Return the display name and the decoded value of a property with a string, as it starts in `text`."""
    match = _PROPERTY.match(text)
    assert match is not None  # the terminal has the same shape
    plain, _, renamed, value = match.groups()
    return identifier(plain) if plain else decode(renamed), decode(value)


def read_pin_number(text: str) -> tuple[str, str]:
    """Return the port and its designator from a `portInstance` with its designator in front."""
    match = _PORT_INSTANCE.match(text)
    assert match is not None
    return identifier(match[1] or match[2]), decode(match[3])


def read_quoted(text: str) -> str:
    """Return the first string in `text`, decoded."""
    match = _QUOTED.search(text)
    assert match is not None
    return decode(match[1])


def read_rename(text: str) -> tuple[str, str]:
    """Return the identifier and the decoded display text of a rename."""
    match = _RENAMED.match(text)
    assert match is not None
    return identifier(match[1]), decode(match[2])


def read_view_ref(text: str) -> tuple[str, str, str]:
    """Return the identifiers of view, cell and library; empty where they are not named."""
    match = _VIEW_REF.match(text)
    assert match is not None
    view, cell, library = match.groups()
    return identifier(view), identifier(cell) if cell else "", identifier(library) if library else ""
