"""What a run of the reader of SPICE-style lists collects, errors and notes, and what it may spend."""

from __future__ import annotations

from collections import Counter

from .errors import NetlistError
from .netlist import Note, Place
from .spice_lines import Line

MOST_ERRORS = 20
MOST_NOTES = 100
"""Notes of one kind; a list with more has one cause for all of them, and memory is not endless."""

EXPANSION = 70_000_000
"""Bytes, estimated, that instances may take whatever the length of the list: some 60 000 parts."""

_EXPANSION_PER_CHARACTER = 20


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


class Budget:
    """The memory that instances and repeated inclusions may take.

    A few lines can stand for any number of parts; what is written once is bounded by the list itself.
    """

    def __init__(self, characters: int) -> None:
        self._left = EXPANSION + _EXPANSION_PER_CHARACTER * characters

    def spend(self, cost: int, line: Line) -> None:
        """Take `cost` bytes for what `line` brings in; raise NetlistError where too little is left."""
        self._left -= cost
        if self._left < 0:
            raise line.error(
                0,
                "the subcircuits expand to more parts than can be read",
                "some 60 000 parts in all instances, fewer where they have many nets or parameters",
                "give the list of the board alone, without the subcircuits that multiply",
            )


class Run:
    """Problems, notes and budget of one run, handed from step to step."""

    def __init__(self, file: str, characters: int) -> None:
        self.problems = Problems(file)
        self.notes = Notes()
        self.budget = Budget(characters)
