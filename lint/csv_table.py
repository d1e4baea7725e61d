"""A table of delimited text with a heading row: finds the headings and the delimiter, keeps every place.

The delimiter is the one under which the heading row names the most columns that we know: that is surer, and
cheaper on hostile text, than statistics over the whole of it.
"""

from __future__ import annotations

import csv
import re
from collections.abc import Iterator, Mapping, Sequence
from typing import NamedTuple

from ..grammar.netlist import Place

_DELIMITERS = (",", ";", "\t", "|")
_HEADING_WITHIN = 20  # lines: a title and a date may stand above the headings

# "Power (W)", "Voltage [V]", "Tolerance / %", "Power, W" (in quotes where the comma is the delimiter)
_HEADING = re.compile(r"(?P<name>[^(\[/,]*)(?:[(\[/,]\s*(?P<unit>[^)\]]*?)\s*[)\]]?)?\s*")


class Column(NamedTuple):
    """What a column gives, and the unit in its heading, empty where it has none."""

    kind: str
    unit: str


class Cell(NamedTuple):
    """A cell as written without its outer blanks, the unit of its heading, and where it stands."""

    text: str
    unit: str
    place: Place


class CsvTable:
    """The columns of one text by kind, and its rows.

    columns:   index to Column, of those that we know; empty where no heading row was found
    delimiter: the character between two cells
    """

    def __init__(self, text: str, file: str, kinds: Mapping[str, str], required: str) -> None:
        """Find the heading row: the first line that names the `required` kind; `kinds` is heading to kind."""
        self._file = file
        self._lines = text.split("\n")
        self._kinds = kinds
        self.columns: dict[int, Column] = {}
        self.delimiter = ","
        self._heading = 0
        for number, line in enumerate(self._lines[:_HEADING_WITHIN]):
            choices = {delimiter: self._named(line, delimiter) for delimiter in _DELIMITERS}
            best = max(choices, key=lambda delimiter: len(choices[delimiter]))
            if any(column.kind == required for column in choices[best].values()):
                self.columns, self.delimiter, self._heading = choices[best], best, number
                return

    def rows(self) -> Iterator[dict[str, Cell]]:
        """Yield each row that is not blank, kind to Cell; of two columns of a kind the first that is filled.

        Raises csv.Error for a cell beyond all size and for a quotation mark that is never closed; `line` then
        tells where.
        """
        below = self._lines[self._heading + 1 :]
        reader = csv.reader((f"{line}\n" for line in below), delimiter=self.delimiter)
        self.line = self._heading + 2
        for texts in reader:
            # A cell that is still open at the end has swallowed all rows below it, and the last line end too.
            open_at_end = reader.line_num == len(below) and not below[-1].rstrip().endswith('"')
            if open_at_end and texts and texts[-1].endswith("\n"):
                raise csv.Error("a quotation mark opens a cell and is never closed")
            row: dict[str, Cell] = {}
            for index, text, column in self._placed(texts):
                known = self.columns.get(index)
                if known is not None and text and known.kind not in row:
                    row[known.kind] = Cell(text, known.unit, Place(self._file, self.line, column))
            if row:
                yield row
            self.line = self._heading + 2 + reader.line_num

    def excerpt(self, line: int) -> str:
        """Return a line of the text, counted from 1."""
        return self._lines[line - 1] if 0 < line <= len(self._lines) else ""

    def _named(self, line: str, delimiter: str) -> dict[int, Column]:
        """Return the columns that we know when `line` is cut at `delimiter`."""
        found: dict[int, Column] = {}
        try:
            headings = [heading for row in csv.reader([line], delimiter=delimiter) for heading in row]
        except csv.Error:  # a cell beyond all size is no heading
            return found
        for index, heading in enumerate(headings):
            match = _HEADING.fullmatch(" ".join(heading.split()))
            name = " ".join(re.sub(r"[_.\-]", " ", match["name"]).casefold().split()) if match else ""
            if match and name in self._kinds:
                found[index] = Column(self._kinds[name], match["unit"] or "")
        return found

    def _placed(self, texts: Sequence[str]) -> Iterator[tuple[int, str, int]]:
        """Yield index, text and column of each cell of the row that begins at `self.line`."""
        line = self.excerpt(self.line)
        position = 0
        for index, text in enumerate(texts):
            text = text.strip()
            # Doubled quotes at most double a cell; one on a further line is not found and gets column 1.
            found = line.find(text, position, position + 2 * len(text) + 8)
            yield index, text, found + 1 if found >= 0 else 1
            position = max(found, position) + len(text)
