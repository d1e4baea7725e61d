"""What the reader of SPICE-style lists collects on its way: errors up to a limit, and notes."""

from __future__ import annotations

from collections import Counter

from .errors import NetlistError
from .netlist import Note, Place

MOST_ERRORS = 20
MOST_NOTES = 100
"""Notes of one kind; a list with more has one cause for all of them, and memory is not endless."""


class Problems:
    """The errors of one run; the list is read on after each, so that all are told at once."""

    def __init__(self, file: str) -> None:
        self._file = file
        self._errors: dict[tuple[Place, str], NetlistError] = {}

    def add(self, error: NetlistError) -> None:
        """Remember `error`, once; raise them all when there are `MOST_ERRORS`."""
        self._errors.setdefault((error.place, error.message), error)
        if len(self._errors) >= MOST_ERRORS:
            self.raise_any()

    def raise_any(self) -> None:
        """Raise the first error, the others beside it; return where there is none."""
        if not self._errors:
            return
        errors = sorted(
            self._errors.values(), key=lambda error: (error.place.file != self._file, error.place)
        )
        errors[0].also = tuple(errors[1:])
        raise errors[0]


class Notes:
    """The notes of one run, bounded for each kind."""

    def __init__(self) -> None:
        self._notes: list[Note] = []
        self._counts: Counter[str] = Counter()

    def add(self, kind: str, message: str, place: Place, subject: str = "") -> None:
        """Remember a note, or only count it where there are `MOST_NOTES` of its kind."""
        self._counts[kind] += 1
        if self._counts[kind] <= MOST_NOTES:
            self._notes.append(Note(kind, message, place, subject))

    def all(self, file: str) -> list[Note]:
        """Return the notes, with one more for each kind of which some were only counted."""
        more = [
            Note(kind, f"and {count - MOST_NOTES} more of this kind", Place(file, 0, 0))
            for kind, count in self._counts.items()
            if count > MOST_NOTES
        ]
        return self._notes + more
