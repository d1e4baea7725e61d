"""A bound on what a file may grow to when its hierarchy and its arrays are written out."""

from __future__ import annotations

from .edif_places import Places
from .errors import NetlistError

_SPARE = 60_000  # parts, nets and ports that a small file may still grow to: under 100 MB
_CHARACTERS_EACH = 10  # no part, net or port is written in less
_CHARACTERS_OF_ITEMS = 50  # the same for what is said of a part, and for the ports that a net joins


class Budget:
    """Counts parts, nets and ports as they are made, against what a file of this size can state honestly."""

    def __init__(self, places: Places, size: int) -> None:
        self._places = places
        self._limit = _SPARE + size // _CHARACTERS_EACH
        self._left = self._limit

    def spend(self, count: int, offset: int) -> None:
        """Count some more; raise NetlistError with the place of `offset` when it is too many."""
        self._left -= count
        if self._left < 0:
            raise NetlistError(
                f"the hierarchy or the arrays of this file grow to over {self._limit} parts, nets and ports",
                self._places.at(offset),
                excerpt=self._places.line_at(offset),
                expected="a board's worth of parts",
                remedy="check the sizes of the arrays, and cells that use one another many times over; "
                "else review one block at a time",
            )

    def spend_on_text(self, start: int, end: int) -> None:
        """Count a span of text that is read once more for every occurrence of what it stands in."""
        self.spend((end - start) // _CHARACTERS_OF_ITEMS, start)
