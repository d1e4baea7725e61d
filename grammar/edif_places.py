"""From the offset of a character to its line and column."""

from __future__ import annotations

import re
from array import array
from bisect import bisect_right

from .netlist import Place

_LINE_END = re.compile(r"\r\n?|\n")


class Places:
    """The lines of one text, to find the place of any offset in it."""

    def __init__(self, text: str, file: str) -> None:
        self._file = file
        self._text = text
        self._starts = array("q", [0])
        self._starts.extend(match.end() for match in _LINE_END.finditer(text))

    def at(self, offset: int) -> Place:
        """Return the place of the character at `offset`."""
        line = bisect_right(self._starts, offset)
        return Place(self._file, line, offset - self._starts[line - 1] + 1)

    def line_at(self, offset: int) -> str:
        """Return the line around `offset`, as written."""
        line = bisect_right(self._starts, offset)
        end = self._starts[line] if line < len(self._starts) else len(self._text)
        return self._text[self._starts[line - 1] : end].rstrip("\r\n")
