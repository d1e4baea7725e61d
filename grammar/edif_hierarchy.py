"""From cells in cells to one flat circuit: the occurrences of parts, and the pieces of net at their ports.

Every sheet (one occurrence of a cell with contents) is walked once, from a list of those that wait: first its
instances are placed, then its nets are drawn between them (edif_wiring.py).
"""

from __future__ import annotations

from .edif_budget import Budget
from .edif_ends import ArrayEnd, End, NoEnd, PartEnd, RipperEnd, SheetEnd, SymbolEnd, TieEnd
from .edif_forms import Contents, Instance, InstanceRun, Library
from .edif_instances import Description, describe, reference_of, symbol_of
from .edif_library import Libraries, NameTable, Source
from .edif_nets import NetPieces
from .edif_notes import NoteKeeper
from .edif_places import Places
from .edif_ports import width
from .edif_wiring import Wiring
from .errors import NetlistError

_DEEPEST = 200


class FlatCircuit:
    """The whole circuit: call `flatten` once, then read `parts`, `nets` and `drawn`.

    drawn: the pieces of single nets, which the file states even where nothing is on them
    """

    def __init__(
        self, text: str, libraries: Libraries, places: Places, budget: Budget, notes: NoteKeeper
    ) -> None:
        self._text = text
        self._libraries = libraries
        self._places = places
        self._budget = budget
        self._notes = notes
        self._missing: set[tuple[str, str]] = set()
        self._waiting: list[SheetEnd] = []
        self.parts: list[PartEnd] = []
        self.nets = NetPieces()
        self.drawn: list[int] = []

    def flatten(self, top: Source) -> None:
        """Walk all sheets from the top down; raise NetlistError where the hierarchy has no end."""
        self._waiting.append(SheetEnd(top, "", None, self.nets))
        while self._waiting:
            sheet = self._waiting.pop()
            sheet.is_entered = True
            self._walk(sheet, sheet.source.view.contents or Contents())
            if sheet.outer is None:
                sheet.source.view.contents = Contents()  # walked once and never again: it takes much memory

    def _walk(self, sheet: SheetEnd, contents: Contents) -> None:
        ends = NameTable[End]()
        first_part, first_inner = len(self.parts), len(self._waiting)
        for instance in contents.instances:
            self._place(instance, sheet, ends)
        for net in contents.nets:
            for instance in net.instances:
                self._place(instance, sheet, ends, in_net=True)
        self._waiting[first_inner:] = reversed(self._waiting[first_inner:])
        wiring = Wiring(self._text, sheet, ends, self._budget, self._notes)
        wiring.draw(contents)
        wiring.join_inside(self.parts[first_part:])
        self.drawn += wiring.drawn

    def _place(
        self, instance: Instance, sheet: SheetEnd, ends: NameTable[End], *, in_net: bool = False
    ) -> None:
        """Make the end that the nets of the sheet find under the name of an instance."""
        name, items = instance.name, instance.items
        if isinstance(items, InstanceRun):
            self._budget.spend_on_text(items.start, items.end)
        else:
            self._budget.spend(len(items), name.offset)
        said = describe(instance, self._text, sheet.source.library.scales)
        source = self._find(instance, sheet.source.library)
        if name.sizes:
            suffixes = [f"[{i}]" for i in range(width(name, self._budget))]
            members = [self._end(instance, said, source, sheet, suffix) for suffix in suffixes]
            end: End = ArrayEnd(members, self._budget)
        elif in_net and not said.designators:
            end = self._mark(instance, said, source, sheet) or NoEnd()
        else:
            end = self._end(instance, said, source, sheet)
        if ends.add(name.identifier, end) is not end:
            message = f"the instance {name.display} is written twice in one cell; nets reach the first"
            self._notes.add("duplicate-reference", message, name.offset, sheet.path + name.display)

    def _find(self, instance: Instance, home: Library) -> Source | None:
        reference = instance.cell
        if reference is None:
            return None
        source = self._libraries.find(reference, home)
        if source is None and (reference.library, reference.cell) not in self._missing:
            self._missing.add((reference.library, reference.cell))
            message = f"the cell {reference.cell} is defined nowhere; its pins are those that the nets name"
            self._notes.add("missing-library", message, instance.name.offset, reference.cell)
        return source

    def _end(
        self, instance: Instance, said: Description, source: Source | None, sheet: SheetEnd, suffix: str = ""
    ) -> End:
        """Decide what an instance is, in the order: a mark on a net, a sheet, a part."""
        self._budget.spend(1 + (source.size() if source else 0), instance.name.offset)
        mark = self._mark(instance, said, source, sheet)
        if mark:
            return mark
        if source and source.view.is_filled():
            inner = self._inner_sheet(instance, said, source, sheet, suffix)
            self._waiting.append(inner)
            return inner
        part = PartEnd(instance, said, source, sheet.path, suffix)
        self.parts.append(part)
        return part

    def _mark(
        self, instance: Instance, said: Description, source: Source | None, sheet: SheetEnd
    ) -> End | None:
        """Return the end for a tie, a ripper, a power symbol or an off-page symbol; None for all else."""
        if source and source.cell.kind == "TIE":
            return TieEnd(self.nets)
        if source and source.cell.kind == "RIPPER":
            return RipperEnd(self.nets, instance.name.offset)
        symbol = symbol_of(said, source)
        if symbol is None:
            return None
        path = "" if symbol.is_global else sheet.path
        return SymbolEnd(self.nets, self.nets.shared(path, symbol.name, instance.name.offset))

    def _inner_sheet(
        self, instance: Instance, said: Description, source: Source, sheet: SheetEnd, suffix: str
    ) -> SheetEnd:
        cell = source.cell.name.display
        if any(outer.source.view is source.view for outer in sheet.chain()):
            raise self._endless(instance, cell, f"the cell {cell} contains itself")
        if sheet.depth >= _DEEPEST:
            raise self._endless(instance, cell, f"cells are nested over {_DEEPEST} levels deep")
        return SheetEnd(source, f"{sheet.path}{reference_of(instance, said).text}{suffix}/", sheet, self.nets)

    def _endless(self, instance: Instance, cell: str, message: str) -> NetlistError:
        return NetlistError(
            message,
            self._places.at(instance.name.offset),
            excerpt=self._places.line_at(instance.name.offset),
            expected="cells that are made of simpler cells, down to parts",
            remedy=f"break the loop at this instance of {cell}, or export the design flat",
        )
