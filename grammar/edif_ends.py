"""What a net can end at: a part, a sheet, a tie, a ripper, a power symbol, or an array of these."""

from __future__ import annotations

from abc import ABC, abstractmethod
from collections.abc import Iterator, Sequence
from typing import NamedTuple

from .edif_budget import Budget
from .edif_forms import Instance, PortRef
from .edif_instances import Description
from .edif_library import Source
from .edif_nets import NetPieces
from .property_names import fold


class Connection(NamedTuple):
    """A port of a part, the piece of net on it, and where the file says so."""

    port: str
    piece: int
    offset: int


class End(ABC):
    """One instance as the nets see it."""

    __slots__ = ()

    @abstractmethod
    def connect(self, port: str, index: int | None, pieces: Sequence[int], offset: int) -> bool:
        """Put pieces of net on a port, or on one member of it; say whether the port is there and as wide."""


class PartEnd(End):
    """An occurrence of a part: it notes what is on its ports."""

    __slots__ = ("connections", "instance", "path", "said", "source", "suffix")

    def __init__(
        self, instance: Instance, said: Description, source: Source | None, path: str, suffix: str
    ) -> None:
        self.instance = instance
        self.said = said
        self.source = source
        self.path = path
        self.suffix = suffix
        self.connections: list[Connection] = []

    def connect(self, port: str, index: int | None, pieces: Sequence[int], offset: int) -> bool:
        """Note the pieces for the bits of the port; without a definition the port is what the nets say."""
        keys = _chosen(self.source.ports.keys(port) if self.source else (), index)
        if not self.source:
            indices = [index] if index is not None else range(len(pieces))
            keys = [port] if index is None and len(pieces) == 1 else [f"{port}[{i}]" for i in indices]
        elif not keys:
            keys = [port]
        self.connections += [Connection(key, piece, offset) for key, piece in zip(keys, pieces, strict=False)]
        return len(keys) == len(pieces)


class SheetEnd(End):
    """An occurrence of a cell with contents: it joins the net outside to the net inside."""

    __slots__ = ("_bits", "deferred", "depth", "is_entered", "nets", "outer", "path", "source")

    def __init__(self, source: Source, path: str, outer: SheetEnd | None, nets: NetPieces) -> None:
        self.source = source
        self.path = path
        self.outer = outer
        self.nets = nets
        self.depth = outer.depth + 1 if outer else 0
        self.is_entered = False
        self.deferred: list[tuple[PortRef, Sequence[int]]] = []
        self._bits: dict[str, int] = {}

    def chain(self) -> Iterator[SheetEnd]:
        """Yield this sheet and those it is in, up to the top."""
        sheet: SheetEnd | None = self
        while sheet:
            yield sheet
            sheet = sheet.outer

    def connect(self, port: str, index: int | None, pieces: Sequence[int], offset: int) -> bool:
        """Join the pieces to those inside, port by port."""
        known = self.source.ports.keys(port)
        keys = _chosen(known, index) or [port]
        for key, piece in zip(keys, pieces, strict=False):
            self.nets.join(self.piece(key, offset), piece)
        return len(keys) == len(pieces) and bool(known or self.is_entered)

    def piece(self, key: str, offset: int, display: str = "") -> int:
        """Return the piece of net at one bit of a port, a new one when it is met for the first time.

        An implicit port that the sheets outside do not connect is the global net of its name.
        """
        if key not in self._bits:
            bit = self.source.ports.bit(key)
            name = display or (bit.display if bit else key)
            if bit and bit.is_implicit and self.is_entered:
                self._bits[key] = self.nets.shared("", name, bit.offset)
            else:
                self._bits[key] = self.nets.named(
                    self.path, name, self.depth, bit.offset if bit else offset, True
                )
        return self._bits[key]


class TieEnd(End):
    """A junction: all that reaches it is one net."""

    __slots__ = ("_nets", "_pieces")

    def __init__(self, nets: NetPieces) -> None:
        self._nets = nets
        self._pieces: Sequence[int] = ()

    def connect(self, port: str, index: int | None, pieces: Sequence[int], offset: int) -> bool:
        """Join bit by bit."""
        if not self._pieces:
            self._pieces = pieces
        return self._nets.join_bits(self._pieces, pieces)


class RipperEnd(End):
    """The place where single nets leave a bus: they join the bits of the bus by name."""

    __slots__ = ("_nets", "_reached", "offset")

    def __init__(self, nets: NetPieces, offset: int) -> None:
        self._nets = nets
        self._reached: list[Sequence[int]] = []
        self.offset = offset

    def connect(self, port: str, index: int | None, pieces: Sequence[int], offset: int) -> bool:
        """Note the pieces; which bit is meant shows when all are known."""
        self._reached.append(pieces)
        return True

    def join(self, budget: Budget) -> bool:
        """Join what reaches the ripper; say whether every piece found its partner."""
        if not self._reached:
            return True
        bus = max(self._reached, key=len)
        budget.spend(len(bus), self.offset)
        by_name = {fold(self._name(bit)): bit for bit in bus}
        fits = True
        for pieces in self._reached:
            if len(pieces) == len(bus):
                self._nets.join_bits(bus, pieces)
                continue
            for piece in pieces:
                bit = by_name.get(fold(self._name(piece)))
                fits = fits and bit is not None
                self._nets.join(piece if bit is None else bit, piece)
        return fits

    def _name(self, piece: int) -> str:
        return self._nets.label(piece).text


class SymbolEnd(End):
    """A power symbol or an off-page symbol: all it is drawn on is the net of its name."""

    __slots__ = ("_nets", "_piece")

    def __init__(self, nets: NetPieces, piece: int) -> None:
        self._nets = nets
        self._piece = piece

    def connect(self, port: str, index: int | None, pieces: Sequence[int], offset: int) -> bool:
        """Join to the net of the name."""
        for piece in pieces:
            self._nets.join(self._piece, piece)
        return True


class NoEnd(End):
    """A drawing without electrical meaning, such as a title block or a lone junction dot."""

    __slots__ = ()

    def connect(self, port: str, index: int | None, pieces: Sequence[int], offset: int) -> bool:
        """Do nothing."""
        return True


class ArrayEnd(End):
    """An array of instances."""

    __slots__ = ("_budget", "members")

    def __init__(self, members: list[End], budget: Budget) -> None:
        self.members = members
        self._budget = budget

    def connect(self, port: str, index: int | None, pieces: Sequence[int], offset: int) -> bool:
        """Share out the pieces over the members; a single one goes to all."""
        self._budget.spend(len(self.members), offset)
        if len(pieces) == 1:
            fits = [member.connect(port, index, pieces, offset) for member in self.members]
            return all(fits)
        each, rest = divmod(len(pieces), len(self.members) or 1)
        shares = [pieces[i * each : (i + 1) * each] for i in range(len(self.members))]
        fits = [
            member.connect(port, index, share, offset)
            for member, share in zip(self.members, shares, strict=True)
            if share
        ]
        return all(fits) and not rest


def _chosen(keys: Sequence[str], index: int | None) -> Sequence[str]:
    """Return the keys of a whole port, or the one of a member counted from 0."""
    return keys if index is None else keys[index : index + 1] if index >= 0 else ()
