"""The parts list: a CSV file, as spreadsheets and capture tools write it -> value and ratings by reference.

Headings and their other names are data, in parts_list_headings.toml.
"""

from __future__ import annotations

import csv
import re
import tomllib
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field
from functools import cache
from pathlib import Path
from types import MappingProxyType

from ..grammar.errors import NetlistError
from ..grammar.netlist import Place
from ..grammar.property_names import is_fitted
from ..grammar.values import ValueTextError, read_tolerance, read_value
from .csv_table import Cell, CsvTable
from .references import expand
from .text_file import read_text

_LARGEST_FILE = 5_000_000
_MOST_REFERENCES = 200_000
_MOST_ERRORS = 20

# What a bare number means where the heading of its column has no unit.
_USUAL_UNITS = {
    "tolerance": "%",
    "power": "W",
    "voltage": "V",
    "current": "A",
    "temperature coefficient": "ppm/K",
}
_BARE = re.compile(r"[-+±]?[0-9]*[.,/]?[0-9]+\s*")
_WITH_COMMA = re.compile(r"[-+±]?[0-9]+,[0-9]+[^0-9,]*")

# Percent. Up to here a bare tolerance may as well be a fraction: both 0.1 % and 10 % are sold.
_DOUBTFUL_TOLERANCE = 0.2

_NOTHING = frozenset(
    {
        *("", "-", "--", "\N{EN DASH}", "\N{EM DASH}", "?", "*", "~"),
        *("n/a", "n.a.", "na", "none", "null", "tba", "tbd", "unknown"),
    }
)

_REMEDY = "correct the cell, or leave it empty where the figure is not known"


class PartsListError(NetlistError):
    """A parts list that cannot be read, or that contradicts itself."""


@dataclass(frozen=True, slots=True)
class PartData:
    """What the parts list says of one part; None or empty where it says nothing.

    value:            the text of the value, as written
    tolerance_range:  (low, high) as fractions, such as (-0.2, 0.8)
    power, voltage, current: ratings in W, V and A
    temperature_coefficient: in ppm/K
    fitted:           False where the list says that the part is left out
    """

    value: str
    tolerance_range: tuple[float, float] | None
    power: float | None
    voltage: float | None
    current: float | None
    package: str
    dielectric: str
    temperature_coefficient: float | None
    fitted: bool
    place: Place = field(compare=False)

    @property
    def tolerance(self) -> float | None:
        """Return the tolerance as one fraction, the larger side of an unsymmetric one."""
        return None if self.tolerance_range is None else max(abs(side) for side in self.tolerance_range)


@dataclass(frozen=True, slots=True)
class PartsList:
    """The whole list: reference designator to what is said of it, in the order of the file."""

    file: str
    rows: Mapping[str, PartData]

    def unmatched(self, references: Iterable[str]) -> list[str]:
        """Return the references of the list that are none of the netlist's `references`."""
        known = set(references)
        return [reference for reference in self.rows if reference not in known]

    def missing(self, references: Iterable[str]) -> list[str]:
        """Return those of the netlist's `references` for which the list has no row."""
        return [reference for reference in references if reference not in self.rows]


def read_parts_list(path: str | Path) -> PartsList:
    """Read a parts list; raise PartsListError, with every mistake in the file, where it cannot be used."""
    file = str(path)
    text = read_text(path, PartsListError, limit=_LARGEST_FILE)
    return _Reader(text, file).parts_list()


class _Reader:
    """Walks the rows once and keeps every mistake, so that one run shows them all."""

    def __init__(self, text: str, file: str) -> None:
        self._file = file
        self._table = CsvTable(text, file, _kinds(), "reference")
        self._rows: dict[str, PartData] = {}
        self._listed = 0
        self._mistakes: list[PartsListError] = []

    def parts_list(self) -> PartsList:
        if not self._table.columns:
            raise PartsListError(
                "no column of reference designators",
                Place(self._file, 1, 1),
                excerpt=self._table.excerpt(1),
                expected="a heading row such as Reference, Value, Tolerance, Power, Voltage",
                remedy="name the column of the reference designators Reference",
            )
        try:
            for row in self._table.rows():
                self._read(row)
                if len(self._mistakes) >= _MOST_ERRORS:
                    break
        except csv.Error as problem:
            self._mistake(
                str(problem),
                Place(self._file, self._table.line, 1),
                expected="a row of cells",
                remedy="close the quotation mark of the cell, or shorten it",
            )
        if self._mistakes:
            first, *others = self._mistakes
            first.also = tuple(others[: _MOST_ERRORS - 1])
            raise first
        return PartsList(self._file, MappingProxyType(self._rows))

    def _read(self, row: Mapping[str, Cell]) -> None:
        """Read one row into the parts that it lists."""
        listed = row.get("reference")
        if listed is None:
            return  # a total, a comment, a part without a reference
        try:
            references = expand(listed.text)
        except ValueError as problem:
            self._mistake(str(problem), listed.place, expected="references such as R1-R4, R7")
            return
        self._listed += len(references)  # counted with repeats: a small file can list a range very often
        if self._listed > _MOST_REFERENCES:
            self._mistake(f"more than {_MOST_REFERENCES:,} parts", listed.place)
            return
        part = PartData(
            value=self._value(row),
            tolerance_range=self._tolerance(row.get("tolerance")),
            power=self._quantity(row, "power"),
            voltage=self._quantity(row, "voltage"),
            current=self._quantity(row, "current"),
            package=_text(row, "package"),
            dielectric=_text(row, "dielectric"),
            temperature_coefficient=self._quantity(row, "temperature coefficient"),
            fitted=_is_fitted(row),
            place=listed.place,
        )
        for reference in references:
            if self._rows.setdefault(reference, part) != part:
                self._contradiction(reference, listed.place)
                return

    def _contradiction(self, reference: str, place: Place) -> None:
        self._mistake(
            f"{reference} has another row, line {self._rows[reference].place.line}, that says otherwise",
            place,
            expected="one row per part, or rows that agree",
            remedy="delete or correct one of the two",
        )

    def _value(self, row: Mapping[str, Cell]) -> str:
        """Return the text of the value, a decimal comma made a point where the comma cuts no cells."""
        text = _text(row, "value") or _text(row, "comment")
        # "10,1%" is a value and its tolerance, whatever cuts the cells.
        return text.replace(",", ".") if "%" not in text and self._has_decimal_comma(text) else text

    def _quantity(self, row: Mapping[str, Cell], kind: str) -> float | None:
        """Return a rating in its SI base unit; a bare number has the heading's unit, else the usual one."""
        cell = row.get(kind)
        if cell is None or cell.text.casefold() in _NOTHING:
            return None
        text = self._with_unit(cell, kind)
        try:
            number = read_value(text, kind, spice=False).number
        except ValueTextError as problem:
            self._mistake(f"{kind}: {problem}", cell.place, expected=problem.expected, remedy=_REMEDY)
            return None
        if number < 0 and kind != "temperature coefficient":
            self._mistake(f"{kind}: a rating below zero", cell.place)
            return None
        return number

    def _tolerance(self, cell: Cell | None) -> tuple[float, float] | None:
        if cell is None or cell.text.casefold() in _NOTHING:
            return None
        text = self._with_unit(cell, "tolerance")
        bare = _BARE.fullmatch(cell.text) is not None and not cell.unit
        try:
            found = read_tolerance(text)
        except ValueTextError as problem:
            self._mistake(str(problem), cell.place, expected=problem.expected, remedy=_REMEDY)
            return None
        if bare and 0 < 100 * found[1] <= _DOUBTFUL_TOLERANCE:
            self._mistake(
                f"the tolerance {cell.text} may be a fraction or a percentage",
                cell.place,
                expected="a tolerance with its unit, such as 5 %",
                remedy="write the unit in the cells or in the heading: Tolerance (%)",
            )
            return None
        return found

    def _with_unit(self, cell: Cell, kind: str) -> str:
        """Return the text of a cell, with the unit of its column where it has none of its own."""
        text = cell.text.replace(",", ".") if self._has_decimal_comma(cell.text) else cell.text
        return f"{text} {cell.unit or _USUAL_UNITS[kind]}" if _BARE.fullmatch(text) else text

    def _has_decimal_comma(self, text: str) -> bool:
        return self._table.delimiter != "," and _WITH_COMMA.fullmatch(text) is not None

    def _mistake(self, message: str, place: Place, *, expected: str = "", remedy: str = "") -> None:
        excerpt = self._table.excerpt(place.line)
        self._mistakes.append(
            PartsListError(message, place, excerpt=excerpt, expected=expected, remedy=remedy)
        )


def _is_fitted(row: Mapping[str, Cell]) -> bool:
    """Tell whether a part is fitted, by the columns that say so, or by what stands in that of its value."""
    said = {kind: _text(row, kind) for kind in ("fit", "not fit")}
    return is_fitted(_text(row, "value") or _text(row, "comment"), said)


def _text(row: Mapping[str, Cell], kind: str) -> str:
    cell = row.get(kind)
    return cell.text if cell is not None and cell.text.casefold() not in _NOTHING else ""


@cache
def _kinds() -> dict[str, str]:
    """Return each heading that we know, with what its column gives."""
    table = tomllib.loads(Path(__file__).with_name("parts_list_headings.toml").read_text(encoding="utf-8"))
    return {heading: kind.replace("_", " ") for kind, headings in table.items() for heading in headings}
