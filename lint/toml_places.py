"""Where the keys of a TOML text stand: tomllib reads values but does not tell their places."""

from __future__ import annotations

import re
import tomllib
from bisect import bisect_right
from typing import Any, cast

from ..grammar.netlist import Place

KeyPath = tuple[str, ...]

_KEY = r"(?:[A-Za-z0-9_-]+|\"(?:[^\"\\\n]|\\.)*\"|'[^'\n]*')"
_KEYS = rf"{_KEY}(?:[ \t]*\.[ \t]*{_KEY})*"
_HEADER = re.compile(rf"[ \t]*\[(?P<array>\[)?[ \t]*(?P<keys>{_KEYS})[ \t]*\]")
_ASSIGNMENT = re.compile(rf"[ \t]*(?P<keys>{_KEYS})[ \t]*=[ \t]*")

# Places are kept to this depth; what lies deeper has the place of what encloses it.
_DEEPEST = 8

# A value ends with its line, unless a bracket or a string is still open there.
_PIECE = re.compile(
    r'"""(?:[^\\]|\\.)*?"""+|\'\'\'.*?\'\'\'+'
    r'|"(?:[^"\\\n]|\\.)*"|\'[^\'\n]*\''
    r"|\#[^\n]*|(?P<open>[\[{])|(?P<close>[\]}])|(?P<end>\n)|[^\"'#\[\]{}\n]+",
    re.DOTALL,
)


class TomlPlaces:
    """Line and column of every key and value of a TOML text that tomllib has accepted.

    The tables of an array have their number, from "0", as a key after that of the array.
    """

    def __init__(self, text: str, file: str) -> None:
        self._file = file
        self._lines = [0, *(match.end() for match in re.finditer("\n", text))]
        self._keys: dict[KeyPath, int] = {}
        self._values: dict[KeyPath, int] = {}
        self._scan(text)

    def key(self, path: KeyPath) -> Place:
        """Return the place of a key or a table header; of what encloses it where it is written inline."""
        while path and path not in self._keys:
            path = path[:-1]
        return self._place(self._keys[path]) if path else Place(self._file, 1, 1)

    def value(self, path: KeyPath) -> Place:
        """Return the place where the value of a key begins, or that of the key for a whole table."""
        return self._place(self._values[path]) if path in self._values else self.key(path)

    def _place(self, offset: int) -> Place:
        line = bisect_right(self._lines, offset)
        return Place(self._file, line, offset - self._lines[line - 1] + 1)

    def _scan(self, text: str) -> None:
        table: KeyPath = ()
        length: dict[KeyPath, int] = {}
        position = 0
        while position < len(text):
            header = _HEADER.match(text, position)
            assignment = None if header else _ASSIGNMENT.match(text, position)
            if header:
                table = _path(header["keys"])[:_DEEPEST]
                if header["array"]:
                    length[table] = length.get(table, -1) + 1
                    table = (*table, str(length[table]))
                self._note(table, header.start("keys"))
                position = header.end()
            elif assignment:
                path = table + _path(assignment["keys"])
                self._note(path, assignment.start("keys"))
                self._values.setdefault(path[:_DEEPEST], assignment.end())
                position = assignment.end()
            position = _end_of_line(text, position)

    def _note(self, path: KeyPath, offset: int) -> None:
        """Note the place of a key, and of the tables that it implies, where it stands first."""
        for length in range(min(len(path), _DEEPEST), 0, -1):
            self._keys.setdefault(path[:length], offset)


def _path(keys: str) -> KeyPath:
    """Return the keys of one header or assignment, as tomllib understands its quotes and dots."""
    if '"' not in keys and "'" not in keys:
        return tuple(key.strip(" \t") for key in keys.split("."))
    inner: Any = tomllib.loads(f"{keys} = 0")
    path: list[str] = []
    while inner:  # a table of one key each, down to the zero
        key = next(iter(cast("dict[str, Any]", inner)))
        path.append(key)
        inner = inner[key]
    return tuple(path)


def _end_of_line(text: str, position: int) -> int:
    """Return where the line after the value at `position` begins."""
    depth = 0
    for piece in _PIECE.finditer(text, position):
        if piece["open"]:
            depth += 1
        elif piece["close"]:
            depth -= 1
        elif piece["end"] and depth <= 0:
            return piece.end()
    return len(text)
