"""Notes as they come up while a file is read, so many of each kind and no more."""

from __future__ import annotations

from collections import Counter

from .edif_places import Places
from .netlist import Note, Place

_MOST = 1000  # of a kind: more than anyone reads


class NoteKeeper:
    """Keeps notes; of those beyond a thousand of one kind it keeps the number."""

    def __init__(self, places: Places) -> None:
        self._places = places
        self._counts: Counter[str] = Counter()
        self._notes: list[Note] = []

    def add(self, kind: str, message: str, place: Place | int, subject: str) -> None:
        """Keep a note about a place, or about the place of an offset."""
        self._counts[kind] += 1
        if self._counts[kind] <= _MOST:
            place = self._places.at(place) if isinstance(place, int) else place
            self._notes.append(Note(kind, message, place, subject))

    def all(self) -> list[Note]:
        """Return the notes in the order in which they came up, and for each kind how many are left out."""
        left_out = [(kind, count - _MOST) for kind, count in self._counts.items() if count > _MOST]
        more = [
            Note(kind, f"{count} more notes of this kind", self._places.at(0)) for kind, count in left_out
        ]
        return self._notes + more
