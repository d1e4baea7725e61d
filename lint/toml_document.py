"""A TOML file that a person wrote: its tables, asked key by key, and every mistake in them with its place."""

from __future__ import annotations

import re
import tomllib
from collections.abc import Iterator, Sequence
from datetime import date, datetime
from difflib import get_close_matches
from math import inf
from pathlib import Path
from typing import Any, TypeVar, cast

from ..grammar.errors import NetlistError
from ..grammar.netlist import Place
from .quantity import Spread
from .text_file import read_text
from .toml_places import KeyPath, TomlPlaces
from .units import QuantityTextError, read_any_range, read_range
from .wording import one_of

_LARGEST_FILE = 1_000_000
_LONGEST_LINE = 2_000
_MOST_ERRORS = 20

_QUOTED = re.compile(r"(?P<quote>[\"'])(?!(?P=quote))")

_Kind = TypeVar("_Kind")


class TomlDocument:
    """The document of one file. Mistakes are collected, so that one run shows them all; see `finish`.

    text: what the file holds, where that is known without opening it
    Raises `error` at once where the file cannot be read as TOML.
    """

    def __init__(self, path: str | Path, error: type[NetlistError], text: str | None = None) -> None:
        self.file = str(path)
        self._error = error
        text = read_text(path, error, limit=_LARGEST_FILE) if text is None else text
        self._lines = text.split("\n")
        content = self._load(text)
        self._places = TomlPlaces(text, self.file)
        self._mistakes: list[NetlistError] = []
        self.root = Table(self, (), content)

    def finish(self) -> None:
        """Raise the first mistake of the file, with the others as `also`; return where there is none."""
        if self._mistakes:
            first, *others = sorted(self._mistakes, key=lambda mistake: mistake.place)
            first.also = tuple(others[: _MOST_ERRORS - 1])
            raise first

    @property
    def mistakes(self) -> tuple[NetlistError, ...]:
        """The mistakes that are known, in the order in which they were found."""
        return tuple(self._mistakes)

    @property
    def has_enough(self) -> bool:
        """Tell whether as many mistakes are known as will be shown: a search for more is idle."""
        return len(self._mistakes) >= _MOST_ERRORS

    def place(self, path: KeyPath) -> Place:
        """Return where a key stands."""
        return self._places.key(path)

    def value_place(self, path: KeyPath) -> Place:
        """Return where the value of a key begins."""
        return self._places.value(path)

    def mistake(self, message: str, place: Place, *, expected: str = "", remedy: str = "") -> None:
        """Note a mistake."""
        self._mistakes.append(self._made(message, place, expected=expected, remedy=remedy))

    def excerpt(self, place: Place) -> str:
        """Return the line of a place."""
        return self._lines[place.line - 1] if 0 < place.line <= len(self._lines) else ""

    def _made(self, message: str, place: Place, *, expected: str = "", remedy: str = "") -> NetlistError:
        return self._error(message, place, excerpt=self.excerpt(place), expected=expected, remedy=remedy)

    def _load(self, text: str) -> dict[str, Any]:
        for number, line in enumerate(self._lines, 1):
            if len(line) > _LONGEST_LINE:  # tomllib takes quadratic time over a key of thousands of parts
                raise self._made(
                    f"a line of {len(line):,} characters",
                    Place(self.file, number, 1),
                    expected=f"lines of at most {_LONGEST_LINE:,} characters",
                    remedy="break the line; a list may stand on several",
                )
        try:
            return tomllib.loads(text)
        except RecursionError:
            raise self._made("brackets are nested too deeply", Place(self.file, 0, 0)) from None
        except tomllib.TOMLDecodeError as problem:
            message, place = self._problem(str(problem))
            remedy = 'write every quantity as a text with its unit: key = "12 V"'
            raise self._made(message, place, expected="TOML", remedy=remedy) from None

    def _problem(self, problem: str) -> tuple[str, Place]:
        """Return the message of tomllib and the place that it names in words."""
        message, _, where = problem.rpartition(" (at ")
        found = re.match(r"line (\d+), column (\d+)", where)
        if found:
            return f"not TOML: {message}", Place(self.file, int(found[1]), int(found[2]))
        end = Place(self.file, len(self._lines), len(self._lines[-1]) + 1)
        return f"not TOML: {message or problem}, at the end of the file", end


class Table:
    """One table: its keys are asked by name and come back checked, or None where they are absent or wrong."""

    def __init__(
        self, document: TomlDocument, path: KeyPath, content: dict[str, Any], name: str = ""
    ) -> None:
        self._document = document
        self._path = path
        self._content = content
        self._name = name or f"[{'.'.join(path)}]"

    @property
    def place(self) -> Place:
        """Where the table begins."""
        return self._document.place(self._path)

    def know(self, keys: Sequence[str]) -> bool:
        """Note a mistake for each key that is not among `keys`, and tell whether there is none."""
        unknown = [key for key in self._content if key not in keys]
        for key in unknown:
            if not self._document.has_enough:
                near = get_close_matches(key.casefold(), keys, n=1)
                self._document.mistake(
                    f'unknown key "{key}"' + (f" in {self._name}" if self._path else ""),
                    self._document.place((*self._path, key)),
                    expected=one_of(keys),
                    remedy=f'did you mean "{near[0]}"?' if near else "remove it",
                )
        return not unknown

    @property
    def keys(self) -> tuple[str, ...]:
        """The keys, in the order of the file."""
        return tuple(self._content)

    def value_place(self, key: str) -> Place:
        """Return where the value of `key` begins."""
        return self._document.value_place((*self._path, key))

    def is_table(self, key: str) -> bool:
        """Tell whether a table stands under the key."""
        return isinstance(self._content.get(key), dict)

    def has(self, key: str) -> bool:
        """Tell whether the key is there, right or wrong."""
        return key in self._content

    def table(self, key: str) -> Table:
        """Return the table under `key`, an empty one where there is none."""
        path = (*self._path, key)
        content = cast("dict[str, Any] | None", self._typed(key, dict, f"a table [{'.'.join(path)}]"))
        return Table(self._document, path, content or {})

    def tables(self) -> Iterator[tuple[str, Table]]:
        """Yield each table right below this one with its key."""
        for key, content in self._content.items():
            table = self.table(key)
            if isinstance(content, dict):
                yield key, table

    def array(self, key: str) -> Iterator[Table]:
        """Yield each table of the array `key`, written `[[key]]`."""
        expected = f"tables, each under [[{key}]]"
        items = cast("list[Any]", self._typed(key, list, expected) or [])
        for number, content in enumerate(items):
            if isinstance(content, dict):
                path = (*self._path, key, str(number))
                yield Table(self._document, path, cast("dict[str, Any]", content), f"[[{key}]]")
            else:
                self.mistake(key, f'"{key}" is not what belongs there', expected=expected)

    def text(self, key: str, expected: str = "a text in quotes") -> str | None:
        """Return a text that says something."""
        text = self._typed(key, str, expected)
        if text is not None and not text.strip():
            self.mistake(key, f'"{key}" is empty', expected=expected)
            return None
        return text

    def choice(self, key: str, choices: Sequence[str]) -> str | None:
        """Return a text that is one of `choices`."""
        text = self.text(key, one_of(choices))
        if text is None or text in choices:
            return text
        near = get_close_matches(text.casefold(), choices, n=1)
        remedy = f'did you mean "{near[0]}"?' if near else ""
        self.mistake(key, f'unknown {key} "{text}"', expected=one_of(choices), remedy=remedy)
        return None

    def flag(self, key: str) -> bool | None:
        """Return true or false."""
        return self._typed(key, bool, "true or false, without quotes")

    def day(self, key: str) -> date | None:
        """Return a day as ISO 8601 writes it, with or without quotes."""
        expected = "a day such as 2027-03-31"
        value = self._content.get(key)
        if isinstance(value, str):
            try:
                return date.fromisoformat(value)
            except ValueError:
                self.mistake(key, f'"{key}" is no day', expected=expected)
                return None
        if isinstance(value, datetime):  # which is a date as well, for Python
            self.mistake(key, f'"{key}" has a time of day', expected=expected)
            return None
        return self._typed(key, date, expected)

    def texts(
        self, key: str, expected: str = 'a list of texts such as ["1IN+", "1IN-"]'
    ) -> tuple[str, ...] | None:
        """Return a list of texts that has at least one."""
        items = cast("list[Any] | None", self._typed(key, list, expected))
        if items is None:
            return None
        if not items or not all(isinstance(item, str) for item in items):
            self.mistake(key, f'"{key}" is no list of texts', expected=expected)
            return None
        return tuple(items)

    def spread(self, key: str, unit: str | None, *, least: float = -inf, most: float = inf) -> Spread | None:
        """Return a quantity or a range of one in `unit`, inside `least` and `most`; None: in any unit."""
        text = self._typed(key, str, 'a text with a unit such as "12 V"')
        if text is None:
            return None
        try:
            found = read_any_range(text) if unit is None else read_range(text, unit)
        except QuantityTextError as problem:
            remedy = 'correct the number or its unit; a range reads "10 V .. 15 V"'
            self.mistake(key, str(problem), expected=problem.expected, remedy=remedy, offset=problem.column)
            return None
        if found.minimum < least or found.maximum > most:
            limits = [f"at least {least:g} {unit}".strip()] if least > -inf else []
            limits += [f"at most {most:g} {unit}".strip()] if most < inf else []
            self.mistake(key, f'"{key}" is out of its range', expected=" and ".join(limits))
            return None
        return found

    def quantity(self, key: str, unit: str, *, least: float = -inf, most: float = inf) -> float | None:
        """Return a single quantity in `unit`."""
        found = self.spread(key, unit, least=least, most=most)
        if found is not None and found.minimum != found.maximum:
            self.mistake(key, f'"{key}" is a range', expected='a single value such as "2 %"')
            return None
        return found.nominal if found is not None else None

    def mistake(
        self, key: str, message: str, *, expected: str = "", remedy: str = "", offset: int = 0
    ) -> None:
        """Note a mistake in the value of `key`; `offset` counts characters from the quote of a text."""
        place = self.value_place(key)
        # Only a text in single quote marks can be counted into; of others, its beginning is shown.
        if offset and _QUOTED.match(self._document.excerpt(place), place.column - 1):
            place = place._replace(column=place.column + offset)
        self._document.mistake(message, place, expected=expected, remedy=remedy)

    def _typed(self, key: str, kind: type[_Kind], expected: str) -> _Kind | None:
        value = self._content.get(key)
        if value is None or isinstance(value, kind):
            return value
        self.mistake(key, f'"{key}" is not what belongs there', expected=expected)
        return None
