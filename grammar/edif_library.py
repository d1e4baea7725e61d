"""Finding what a name means: exact spelling first, then without regard to case."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Generic, NamedTuple, TypeVar

from .edif_budget import Budget
from .edif_forms import Cell, CellRef, Edif, Library, View
from .edif_ports import PortTable

_Value = TypeVar("_Value")


class NameTable(Generic[_Value]):
    """Values by name. The standard folds case and some exporters do not, so the exact spelling goes first."""

    def __init__(self) -> None:
        self._exact: dict[str, _Value] = {}
        self._folded: dict[str, _Value] | None = None

    def add(self, name: str, value: _Value) -> _Value:
        """Store a value under a name that is new, and return the value that the name has now."""
        self._folded = None
        return self._exact.setdefault(name, value)

    def get(self, name: str) -> _Value | None:
        """Return the value of a name, None where nothing of this name is known."""
        found = self._exact.get(name)
        if found is not None:
            return found
        if self._folded is None:
            self._folded = {}
            for known, value in self._exact.items():
                self._folded.setdefault(known.casefold(), value)
        return self._folded.get(name.casefold())

    def values(self) -> Iterator[_Value]:
        """Yield the values in the order of the file."""
        return iter(self._exact.values())

    def collisions(self) -> Iterator[tuple[str, str, _Value]]:
        """Yield each name that differs from an earlier one by case only: the earlier name, it, its value."""
        if len({name.casefold() for name in self._exact}) == len(self._exact):
            return
        first: dict[str, str] = {}
        for name, value in self._exact.items():
            earlier = first.setdefault(name.casefold(), name)
            if earlier != name:
                yield earlier, name, value


class Source(NamedTuple):
    """A cell as an instance uses it: the view meant, and the library in which both are."""

    library: Library
    cell: Cell
    view: View
    ports: PortTable

    def size(self) -> int:
        """Return how many pins and properties each part made of this cell has."""
        return len(self.ports.bits) + len(self.view.properties) + len(self.cell.properties)


class Libraries:
    """All cells of a file."""

    def __init__(self, edif: Edif, budget: Budget) -> None:
        self._budget = budget
        self._port_tables: dict[int, PortTable] = {}
        self._libraries = NameTable[tuple[Library, NameTable[Cell]]]()
        self._anywhere = NameTable[tuple[Library, Cell]]()
        for library in edif.libraries:
            _, cells = self._libraries.add(library.name.identifier, (library, NameTable[Cell]()))
            for cell in library.cells:
                cells.add(cell.name.identifier, cell)
                self._anywhere.add(cell.name.identifier, (library, cell))
        self._found: dict[tuple[CellRef, int], Source | None] = {}

    def find(self, reference: CellRef, home: Library | None) -> Source | None:
        """Return the cell meant: in the library named, else in `home`, else in any."""
        key = (reference, id(home))
        if key not in self._found:
            self._found[key] = self._search(reference, home)
        return self._found[key]

    def _search(self, reference: CellRef, home: Library | None) -> Source | None:
        named = reference.library or (home.name.identifier if home else "")
        within = self._libraries.get(named)
        cell = within[1].get(reference.cell) if within else None
        if within and cell:
            return self._source(within[0], cell, reference.view)
        anywhere = self._anywhere.get(reference.cell)
        return self._source(*anywhere, reference.view) if anywhere else None

    def _source(self, library: Library, cell: Cell, view_name: str) -> Source:
        view = choose_view(cell, view_name)
        ports = self._port_tables.get(id(view))
        if ports is None:
            ports = self._port_tables[id(view)] = PortTable(view, self._budget)
        return Source(library, cell, view, ports)

    def last_filled(self) -> Source | None:
        """Return the last cell of the file that shows how it is made."""
        filled = [
            (library, cell)
            for library, cells in self._libraries.values()
            for cell in cells.values()
            if any(view.is_filled() for view in cell.views)
        ]
        return self._source(*max(filled, key=lambda found: found[1].name.offset), "") if filled else None

    def collisions(self) -> Iterator[tuple[str, str, Cell]]:
        """Yield the names of cells of one library that differ by case only."""
        for _, cells in self._libraries.values():
            yield from cells.collisions()


def choose_view(cell: Cell, name: str) -> View:
    """Return the view of this name; else one that shows how the cell is made, else one with ports."""
    views = NameTable[View]()
    for view in cell.views:
        views.add(view.name.identifier, view)
    candidates = [found] if (found := views.get(name)) else cell.views
    return next(
        (view for view in candidates if view.is_filled()),
        next((view for view in candidates if view.ports), candidates[0] if candidates else View(cell.name)),
    )
