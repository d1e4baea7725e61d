"""Drawing the nets of one sheet between its instances."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence

from .edif_budget import Budget
from .edif_ends import ArrayEnd, Connection, End, PartEnd, RipperEnd, SheetEnd
from .edif_forms import Contents, GlobalRef, Joined, JoinedRun, Member, Net, PortList, PortRef
from .edif_library import NameTable, Source
from .edif_names import bit_names
from .edif_notes import NoteKeeper
from .edif_ports import width
from .edif_runs import port_references


class Wiring:
    """The nets of one sheet; `drawn` has the pieces of those that are no arrays."""

    def __init__(
        self, text: str, sheet: SheetEnd, ends: NameTable[End], budget: Budget, notes: NoteKeeper
    ) -> None:
        self._text = text
        self._sheet = sheet
        self._nets = sheet.nets
        self._ends = ends
        self._budget = budget
        self._notes = notes
        self.drawn: list[int] = []

    def draw(self, contents: Contents) -> None:
        """Connect all nets: those of one identifier are one net, on whatever page they are."""
        for port in contents.off_page:
            self._sheet.piece(port.name.identifier, port.name.offset, port.name.display)
        pieces_of: dict[str, Sequence[int]] = {}
        for net in contents.nets:
            pieces = pieces_of.get(net.name.identifier)
            if pieces is None:
                pieces = pieces_of[net.name.identifier] = self._pieces(net)
            for joined in net.joined:
                if isinstance(joined, JoinedRun):
                    self._connect_run(joined, pieces)
                else:
                    self._connect_joined(joined, pieces)
        for reference, pieces in self._sheet.deferred:
            self._connect(reference, pieces)
        for end in self._ends.values():
            if isinstance(end, RipperEnd) and not end.join(self._budget):
                message = "a net at a bus ripper has the name of no bit of the bus"
                self._notes.add("skipped", message, end.offset, "")

    def _pieces(self, net: Net) -> Sequence[int]:
        """Return the pieces of a net that is met for the first time, one for each bit."""
        name, sheet = net.name, self._sheet
        self._budget.spend(1, name.offset)
        if name.sizes:
            bits = bit_names(name.display, width(name, self._budget))
            return [self._nets.named(sheet.path, bit, sheet.depth, name.offset) for bit in bits]
        piece = self._nets.named(sheet.path, name.display, sheet.depth, name.offset)
        self.drawn.append(piece)
        return (piece,)

    # --------------------------------------------------------------------------------------- references

    def _connect_run(self, run: JoinedRun, pieces: Sequence[int]) -> None:
        """Connect plain references, of which a large file has hundreds of thousands."""
        self._budget.spend_on_text(run.start, run.end)
        only = pieces[0] if len(pieces) == 1 else None
        find = self._ends.get
        for port, instance, offset in port_references(self._text, run):
            end = find(instance) if instance else self._sheet
            if only is not None and isinstance(end, PartEnd):
                end.connections.append(Connection(port, only, offset))
            else:
                self._reach(end, instance, Member(port, None, offset), pieces)

    def _connect_joined(self, joined: Joined, pieces: Sequence[int]) -> None:
        for reference in joined.references:
            if isinstance(reference, GlobalRef):
                port = reference.port
                self._nets.join_bits(pieces, [self._nets.shared("", port.identifier, port.offset)])
            elif isinstance(reference, PortList):
                self._connect_list(reference, pieces)
            else:
                self._connect(reference, pieces)

    def _connect_list(self, ports: PortList, pieces: Sequence[int]) -> None:
        """Connect the ports of a list, each to its bit of the net; all of them to a net of one bit."""
        for i, reference in enumerate(ports.ports):
            self._connect(reference, pieces if len(pieces) == 1 else pieces[i : i + 1])

    def _connect(self, reference: PortRef, pieces: Sequence[int]) -> None:
        """Connect one reference, which may name an instance in an instance or a member of an array."""
        self._budget.spend(1, reference.port.offset)
        if not reference.path:
            self._reach(self._sheet, "", reference.port, pieces)
            return
        first, *rest = reference.path
        end = self._ends.get(first.identifier)
        if isinstance(end, ArrayEnd) and first.bit is not None:
            end = end.members[first.bit] if 0 <= first.bit < len(end.members) else None
        if rest and isinstance(end, SheetEnd):
            end.deferred.append((PortRef(reference.port, rest), pieces))
        else:
            self._reach(None if rest else end, first.identifier, reference.port, pieces)

    def _reach(self, end: End | None, instance: str, port: Member, pieces: Sequence[int]) -> None:
        """Put a net on a port of what a reference has led to, and keep it where that does not fit."""
        if end is None:
            message = f"a net refers to the instance {instance}, which is not there"
            self._notes.add("skipped", message, port.offset, instance)
            return
        if len(pieces) > 1:
            self._budget.spend(len(pieces), port.offset)
        if not end.connect(port.identifier, port.bit, pieces, port.offset):
            of = f" of {instance}" if instance else ""
            message = f"the port {port.identifier}{of} is not defined, or is not as wide as its net"
            self._notes.add("pin-mismatch", message, port.offset, instance)

    # ------------------------------------------------------------------------------------- inside cells

    def join_inside(self, parts: Sequence[PartEnd]) -> None:
        """Join the nets at ports that the cell of the sheet or of a part joins inside itself."""
        for joined in self._sheet.source.view.joined:
            self._join_ports(joined, self._sheet.source, lambda key, at: [self._sheet.piece(key, at)])
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
        for port in self._ports_named(joined):
            for key in source.ports.keys(port.identifier):
                self._budget.spend(1, port.offset)
                joint += pieces_at(key, port.offset)
        self._nets.join_all(joint)

    def _ports_named(self, joined: JoinedRun | Joined) -> Iterator[Member]:
        """Yield the ports that a `joined` in an interface names."""
        if isinstance(joined, JoinedRun):
            yield from (Member(port, None, at) for port, _, at in port_references(self._text, joined))
            return
        for reference in joined.references:
            ports = reference.ports if isinstance(reference, PortList) else (reference,)
            yield from (port.port for port in ports)
