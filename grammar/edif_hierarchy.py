"""From cells in cells to one flat circuit: the occurrences of parts, and the pieces of net at their ports.

Every sheet (one occurrence of a cell with contents) is walked once, from a list of those that wait. What an
instance is decides what becomes of a net that reaches it; see edif_ends.py.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence

from .edif_budget import Budget
from .edif_ends import ArrayEnd, Connection, End, NoEnd, PartEnd, RipperEnd, SheetEnd, SymbolEnd, TieEnd
from .edif_forms import GlobalRef, Instance, Joined, Library, Member, Net, PortList, PortRef
from .edif_instances import names_itself, property_pairs, reference_of, symbol_of
from .edif_library import Libraries, NameTable, Source
from .edif_names import bit_names
from .edif_nets import NetPieces
from .edif_places import Places
from .edif_ports import width
from .edif_runs import JoinedRun
from .errors import NetlistError
from .netlist import Note
from .property_names import read_properties

_DEEPEST = 200


class FlatCircuit:
    """The whole circuit: call `flatten` once, then read `parts`, `nets`, `drawn` and `notes`."""

    def __init__(
        self, libraries: Libraries, places: Places, budget: Budget, *, has_designators: bool
    ) -> None:
        self._libraries = libraries
        self._places = places
        self._budget = budget
        self._has_designators = has_designators
        self._missing: set[tuple[str, str]] = set()
        self._rippers: list[RipperEnd] = []
        self._waiting: list[SheetEnd] = []
        self.parts: list[PartEnd] = []
        self.nets = NetPieces()
        self.drawn: list[int] = []
        self.notes: list[Note] = []

    def flatten(self, top: Source) -> None:
        """Walk all sheets from the top down; raise NetlistError where the hierarchy has no end."""
        self._waiting.append(SheetEnd(top, "", None, self.nets))
        while self._waiting:
            self._walk(self._waiting.pop())

    def note(self, kind: str, message: str, offset: int, subject: str = "") -> None:
        """Keep a note about the place of `offset`."""
        self.notes.append(Note(kind, message, self._places.at(offset), subject))

    # ------------------------------------------------------------------------------------------- sheets

    def _walk(self, sheet: SheetEnd) -> None:
        sheet.is_entered = True
        contents = sheet.source.view.contents
        ends = NameTable[End]()
        first_part, first_inner = len(self.parts), len(self._waiting)
        for instance in contents.instances:
            self._place(instance, sheet, ends)
        for net in contents.nets:
            for instance in net.instances:
                self._place(instance, sheet, ends, in_net=True)
        self._waiting[first_inner:] = self._waiting[first_inner:][::-1]
        for port in contents.off_page:
            sheet.piece(port.name.identifier, port.name.offset, port.name.display)
        self._connect_nets(sheet, contents.nets, ends)
        self._join_inside(sheet, self.parts[first_part:])
        for ripper in self._rippers:
            if not ripper.join(self._budget):
                self.note("skipped", "a net at a bus ripper has the name of no bit of the bus", ripper.offset)
        self._rippers.clear()

    def _place(
        self, instance: Instance, sheet: SheetEnd, ends: NameTable[End], *, in_net: bool = False
    ) -> None:
        name = instance.name
        source = self._find(instance, sheet.source.library)
        if name.sizes:
            suffixes = [f"[{i}]" for i in range(width(name, self._budget))]
            end: End = ArrayEnd(
                [self._end(instance, source, sheet, s, in_net) for s in suffixes], self._budget
            )
        else:
            end = self._end(instance, source, sheet, "", in_net)
        if ends.add(name.identifier, end) is not end:
            message = f"the instance {name.display} is written twice in one cell; nets reach the first"
            self.note("duplicate-reference", message, name.offset, sheet.path + name.display)

    def _find(self, instance: Instance, home: Library) -> Source | None:
        if instance.cell is None:
            return None
        source = self._libraries.find(instance.cell, home)
        key = (instance.cell.library, instance.cell.cell)
        if source is None and key not in self._missing:
            self._missing.add(key)
            message = (
                f"the cell {key[1]} is defined nowhere in the file; its pins are those that the nets name"
            )
            self.note("missing-library", message, instance.name.offset, key[1])
        return source

    def _end(
        self, instance: Instance, source: Source | None, sheet: SheetEnd, suffix: str, in_net: bool
    ) -> End:
        self._budget.spend(1 + (len(source.ports.bits) if source else 0), instance.name.offset)
        if source and source.cell.kind == "TIE":
            return TieEnd(self.nets)
        if source and source.cell.kind == "RIPPER":
            self._rippers.append(RipperEnd(self.nets, instance.name.offset))
            return self._rippers[-1]
        if source and source.view.is_filled():
            return self._inner_sheet(instance, source, sheet, suffix)
        if not names_itself(instance) and (in_net or self._has_designators):
            symbol = symbol_of(instance, source)
            if symbol:
                path = "" if symbol.is_global else sheet.path
                return SymbolEnd(self.nets, self.nets.shared(path, symbol.name, instance.name.offset))
            if in_net:
                return NoEnd()
        self.parts.append(PartEnd(instance, source, sheet.source.library, sheet.path, suffix))
        return self.parts[-1]

    def _inner_sheet(self, instance: Instance, source: Source, sheet: SheetEnd, suffix: str) -> SheetEnd:
        chain: SheetEnd | None = sheet
        while chain and chain.source.view is not source.view:
            chain = chain.outer
        if chain or sheet.depth >= _DEEPEST:
            cell = source.cell.name.display
            raise NetlistError(
                f"the cell {cell} contains itself"
                if chain
                else f"cells are nested over {_DEEPEST} levels deep",
                self._places.at(instance.name.offset),
                excerpt=self._places.line_at(instance.name.offset),
                expected="cells that are made of simpler cells, down to parts",
                remedy=f"break the loop at this instance of {cell}, or export the design flat",
            )
        properties = read_properties(property_pairs(instance.properties, sheet.source.library.scales))
        path = f"{sheet.path}{reference_of(instance, properties).text}{suffix}/"
        self._waiting.append(SheetEnd(source, path, sheet, self.nets))
        return self._waiting[-1]

    # --------------------------------------------------------------------------------------------- nets

    def _connect_nets(self, sheet: SheetEnd, nets: Sequence[Net], ends: NameTable[End]) -> None:
        pieces_of: dict[str, Sequence[int]] = {}
        for net in nets:
            pieces = pieces_of.get(net.name.identifier)
            if pieces is None:
                pieces = pieces_of[net.name.identifier] = self._pieces(net, sheet)
            for joined in net.joined:
                if isinstance(joined, JoinedRun):
                    self._connect_run(joined, pieces, sheet, ends)
                else:
                    self._connect_joined(joined, pieces, sheet, ends)
        for reference, pieces in sheet.deferred:
            self._connect(reference, pieces, sheet, ends)

    def _pieces(self, net: Net, sheet: SheetEnd) -> Sequence[int]:
        """Return the pieces of a net met for the first time in this sheet, one for each bit."""
        name = net.name
        self._budget.spend(1, name.offset)
        if not name.sizes:
            self.drawn.append(self.nets.named(sheet.path, name.display, sheet.depth, name.offset))
            return self.drawn[-1:]
        bits = bit_names(name.display, width(name, self._budget))
        return [self.nets.named(sheet.path, bit, sheet.depth, name.offset) for bit in bits]

    def _connect_run(
        self, run: JoinedRun, pieces: Sequence[int], sheet: SheetEnd, ends: NameTable[End]
    ) -> None:
        """Connect plain references, of which a large file has hundreds of thousands."""
        only = pieces[0] if len(pieces) == 1 else None
        for port, instance, offset in run.references():
            end = ends.get(instance) if instance else sheet
            if only is not None and isinstance(end, PartEnd):
                end.connections.append(Connection(port, only, offset))
            else:
                self._reach(end, instance, Member(port, None, offset), pieces)

    def _connect_joined(
        self, joined: Joined, pieces: Sequence[int], sheet: SheetEnd, ends: NameTable[End]
    ) -> None:
        for reference in joined.references:
            if isinstance(reference, JoinedRun):
                self._connect_run(reference, pieces, sheet, ends)
            elif isinstance(reference, GlobalRef):
                port = reference.port
                self.nets.join(pieces[0], self.nets.shared("", port.identifier, port.offset))
            elif isinstance(reference, PortList):
                self._connect_list(reference, pieces, sheet, ends)
            else:
                self._connect(reference, pieces, sheet, ends)

    def _connect_list(
        self, ports: PortList, pieces: Sequence[int], sheet: SheetEnd, ends: NameTable[End]
    ) -> None:
        """Connect the ports of a list, each to its bit of the net; all of them to a net of one bit."""
        for i, reference in enumerate(ports.ports):
            self._connect(reference, pieces if len(pieces) == 1 else pieces[i : i + 1], sheet, ends)

    def _connect(
        self, reference: PortRef, pieces: Sequence[int], sheet: SheetEnd, ends: NameTable[End]
    ) -> None:
        """Connect one reference, which may name an instance in an instance or a member of an array."""
        if not reference.path:
            self._reach(sheet, "", reference.port, pieces)
            return
        first, *rest = reference.path
        end = ends.get(first.identifier)
        if isinstance(end, ArrayEnd) and first.index is not None:
            end = end.members[first.index] if 0 <= first.index < len(end.members) else None
        if rest and isinstance(end, SheetEnd):
            end.deferred.append((PortRef(reference.port, tuple(rest)), pieces))
        else:
            self._reach(None if rest else end, first.identifier, reference.port, pieces)

    def _reach(self, end: End | None, instance: str, port: Member, pieces: Sequence[int]) -> None:
        """Put a net on a port of what a reference has led to; say it where there is none or the width differs."""
        if end is None:
            message = f"a net refers to the instance {instance}, which is not there"
            self.note("skipped", message, port.offset, instance)
            return
        if len(pieces) > 1:
            self._budget.spend(len(pieces), port.offset)
        if not end.connect(port.identifier, port.index, pieces, port.offset):
            of = f" of {instance}" if instance else ""
            message = f"the port {port.identifier}{of} is not defined, or is not as wide as its net"
            self.note("pin-mismatch", message, port.offset, instance)

    def _join_inside(self, sheet: SheetEnd, parts: Sequence[PartEnd]) -> None:
        """Join the nets at ports that a cell joins inside itself."""
        for joined in sheet.source.view.joined:
            self._join_ports(joined, sheet.source, lambda key, offset: [sheet.piece(key, offset)])
        for part in parts:
            if part.source is None or not part.source.view.joined:
                continue
            pieces: dict[str, list[int]] = {}
            for connection in part.connections:
                for key in part.source.ports.keys(connection.port):
                    pieces.setdefault(key, []).append(connection.piece)
            for joined in part.source.view.joined:
                self._join_ports(joined, part.source, lambda key, _, pieces=pieces: pieces.get(key, []))

    def _join_ports(
        self, joined: JoinedRun | Joined, source: Source, pieces_at: Callable[[str, int], Sequence[int]]
    ) -> None:
        joint: list[int] = []
        for port in _ports_named(joined):
            for key in source.ports.keys(port.identifier) or (port.identifier,):
                joint += pieces_at(key, port.offset)
        self._budget.spend(len(joint), 0)
        self.nets.join_all(joint)


def _ports_named(joined: JoinedRun | Joined) -> Iterator[Member]:
    """Yield the ports that a `joined` in an interface names."""
    for reference in joined.references if isinstance(joined, Joined) else (joined,):
        if isinstance(reference, JoinedRun):
            yield from (Member(port, None, offset) for port, _, offset in reference.references())
        elif isinstance(reference, PortList):
            yield from (listed.port for listed in reference.ports)
        else:
            yield reference.port
