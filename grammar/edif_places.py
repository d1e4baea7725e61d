"""From the offset of a character to its line and column."""

from __future__ import annotations

from array import array

from .netlist import Place

_STRIDE = 1024  # characters between two offsets whose line is known beforehand


class Places:
    """The lines of one text, to find the place of any offset in it.

    Only a few places of a large file are ever asked for, so the lines are counted by stride and the rest when
    it is needed. Lines end with LF or CR LF, in texts without any LF with CR.
    """

    def __init__(self, text: str, file: str) -> None:
        self._file = file
        self._text = text
        self._end = "\n" if "\n" in text else "\r"
        self._lines = array("q", [1])
        self._starts = array("q", [0])
        for offset in range(0, len(text) - _STRIDE, _STRIDE):
            count = text.count(self._end, offset, offset + _STRIDE)
            last = text.rfind(self._end, offset, offset + _STRIDE) + 1
            self._lines.append(self._lines[-1] + count)
            self._starts.append(last or self._starts[-1])

    def at(self, offset: int) -> Place:
        """Return the place of the character at `offset`."""
        stride = min(offset // _STRIDE, len(self._lines) - 1)
        line = self._lines[stride] + self._text.count(self._end, stride * _STRIDE, offset)
        return Place(self._file, line, offset - self._line_start(offset) + 1)

    def _line_start(self, offset: int) -> int:
        stride = min(offset // _STRIDE, len(self._lines) - 1)
        return self._text.rfind(self._end, stride * _STRIDE, offset) + 1 or self._starts[stride]

    def line_at(self, offset: int) -> str:
        """Return the line around `offset`, as written."""
        end = self._text.find(self._end, offset)
        return self._text[self._line_start(offset) : end if end >= 0 else len(self._text)].rstrip("\r")
