"""The words of outcomes and levels in reports, and their colours where there are some.

IEC 60073: red asks to act, yellow is abnormal, green is normal, blue asks for something of the reader.
"""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Iterable, Sequence
from typing import TYPE_CHECKING

from ..verdict import Level, Outcome, Verdict

if TYPE_CHECKING:
    from . import Unread
    from .bar import Piece

# One word a verdict: a failed one goes by its level. Worst first: the order in a topic and of the counts.
_WORDS: dict[tuple[Outcome, Level | None], Piece] = {
    (Outcome.FAIL, Level.ERROR): ("error", "bold red"),
    (Outcome.FAIL, None): ("fail", "bold red"),
    (Outcome.FAIL, Level.WARNING): ("warning", "bold yellow"),
    (Outcome.FAIL, Level.NOTE): ("note", "bold yellow"),
    (Outcome.REVIEW, None): ("review", "bold blue"),
    (Outcome.OPEN, None): ("open", "bold blue"),
    (Outcome.INFORMATIONAL, None): ("info", ""),
    (Outcome.PASS, None): ("pass", "green"),
    (Outcome.NOT_APPLICABLE, None): ("not applicable", "dim"),
}

_ORDER = tuple(_WORDS)

# What somebody answers for neither asks to act nor is normal: no colour.
_ACCEPTED: Piece = ("accepted", "")


def word(outcome: Outcome, level: Level | None) -> Piece:
    """Return the word of a verdict in its colour."""
    return _WORDS[_key(outcome, level)]


def word_of(verdict: Verdict) -> Piece:
    """Return the word of a verdict in its colour; an accepted one is called so, whatever its outcome."""
    return _ACCEPTED if verdict.deviation is not None else word(verdict.outcome, verdict.level)


def gate_answer(passed: bool) -> str:
    """Return the answer of a gate."""
    return "passed" if passed else "not passed"


def badness(verdict: Verdict) -> int:
    """Return a key that sorts the worst verdict first."""
    return _ORDER.index(_key(verdict.outcome, verdict.level))


def counts(verdicts: Iterable[Verdict]) -> list[Piece]:
    """Return how many verdicts go by each word, `1 error, 2 pass`; those that do not apply are left out."""
    found = Counter(word_of(verdict) for verdict in verdicts)
    pieces: list[Piece] = []
    for text, style in (*_WORDS.values(), _ACCEPTED):
        if found[text, style] and (text, style) != _WORDS[Outcome.NOT_APPLICABLE, None]:
            pieces += [(", " if pieces else "", ""), (f"{found[text, style]} {text}", style)]
    return pieces


def not_reviewed(unread: Sequence[Unread]) -> str:
    """Return how many netlists could not be reviewed, in words; empty where all could be."""
    count = len(unread)
    return f"{count} netlist{'s' * (count > 1)} could not be reviewed" if count else ""


def grouped(sentences: Iterable[str]) -> list[str]:
    """Return sentences, those that say the same of several parts made one: `R1, R2: 100 ppm/K assumed`."""
    subjects: dict[str, dict[str, None]] = {}
    for sentence in sentences:
        subject, colon, rest = sentence.partition(": ")
        if colon and _REFERENCE.fullmatch(subject):
            subjects.setdefault(rest, {})[subject] = None
        else:
            subjects.setdefault(sentence, {})
    return [f"{', '.join(found)}: {rest}" if found else rest for rest, found in subjects.items()]


_REFERENCE = re.compile(r"[\w/#.-]+")


def _key(outcome: Outcome, level: Level | None) -> tuple[Outcome, Level | None]:
    return outcome, level if outcome is Outcome.FAIL else None
