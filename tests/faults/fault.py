"""One fault: what was done to which board, and which rules one of which must speak of it."""

from __future__ import annotations

from dataclasses import dataclass

from .board import Board
from .edits import Edit


@dataclass(frozen=True, slots=True)
class Fault:
    """A single fault.

    words:  what is wrong, as an engineer would tell it
    rules:  one of these must fail, or ask a person to judge, and did neither on the sound board
    missed: why no rule can see it from a netlist; empty where one must
    """

    board: Board
    words: str
    edit: Edit
    rules: tuple[str, ...]
    missed: str = ""

    @property
    def identity(self) -> str:
        """Return the fault's name in a test report."""
        return f"{self.board.name}: {self.words}"

    @property
    def topic(self) -> str:
        """Return the topic of the first rule that must speak."""
        return self.rules[0].partition(".")[0]


def faults_of(board: Board, *rows: tuple[str, Edit, str] | tuple[str, Edit, str, str]) -> tuple[Fault, ...]:
    """Make faults of rows: words, edit, rules separated by blanks and, where it is missed, the reason."""
    return tuple(Fault(board, row[0], row[1], tuple(row[2].split()), *row[3:]) for row in rows)
