"""Which pieces of net are one net, and what it is called."""

from __future__ import annotations

import re
from collections.abc import Sequence
from typing import NamedTuple

_AUTOMATIC = re.compile(r"(?:N|NET|NET0*_)?[$_-]?[0-9]+", re.IGNORECASE)


class Label(NamedTuple):
    """A name that a net may be called by; the least one wins.

    local:     False for the name of a power symbol or a global port, which goes before all others
    depth:     levels below the top of the hierarchy: outer names win
    automatic: True for a name that the schematic tool made up, such as N00012
    of_port:   True for the name of a port
    order:     as met in the file
    """

    local: bool
    depth: int
    automatic: bool
    of_port: bool
    order: int
    text: str
    offset: int


class NetPieces:
    """A disjoint-set forest of net pieces, each a small integer, with the best label of each set.

    Source: R. E. Tarjan, "Efficiency of a Good But Not Linear Set Union Algorithm", JACM 22 (1975).
    """

    def __init__(self) -> None:
        self._parent: list[int] = []
        self._label: list[Label] = []
        self._shared: dict[tuple[str, str], int] = {}

    def _new(self, label: Label) -> int:
        self._parent.append(len(self._parent))
        self._label.append(label)
        return len(self._parent) - 1

    def named(self, path: str, name: str, depth: int, offset: int, of_port: bool = False) -> int:
        """Return a new piece, joined to nothing, of a net or a port in the sheet at `path`."""
        automatic = _AUTOMATIC.fullmatch(name) is not None
        return self._new(Label(True, depth, automatic, of_port, len(self._parent), path + name, offset))

    def shared(self, path: str, name: str, offset: int) -> int:
        """Return the one piece that all symbols of this name share in the sheet at `path`, or in all ("")."""
        if (path, name) not in self._shared:
            label = Label(False, 0, False, False, len(self._parent), path + name, offset)
            self._shared[path, name] = self._new(label)
        return self._shared[path, name]

    def find(self, piece: int) -> int:
        """Return the piece that stands for the whole set: the first one made."""
        parent = self._parent
        while parent[piece] != piece:
            parent[piece] = piece = parent[parent[piece]]
        return piece

    def join(self, one: int, other: int) -> None:
        """Make one set of two."""
        one, other = self.find(one), self.find(other)
        if one == other:
            return
        first, second = min(one, other), max(one, other)
        self._parent[second] = first
        self._label[first] = min(self._label[first], self._label[second])

    def join_all(self, pieces: Sequence[int]) -> None:
        """Make one set of all."""
        for piece in pieces[1:]:
            self.join(pieces[0], piece)

    def join_bits(self, one: Sequence[int], other: Sequence[int]) -> bool:
        """Join bit by bit; say whether the widths are the same. What is left over stays as it is."""
        for bit, other_bit in zip(one, other, strict=False):
            self.join(bit, other_bit)
        return len(one) == len(other)

    def label(self, piece: int) -> Label:
        """Return the best label of the set."""
        return self._label[self.find(piece)]
