"""Findings as workflow commands: lines in the log of a CI run that its host shows beside the netlist.

    ::error file=board.edf,line=41,col=7,title=reference.load U1::The reference delivers 12.1 mA.

Hosts show the first few of a kind and drop the rest without a word, so the worst come first, no more are
written than are shown, and the last of a kind says how many there are besides.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from pathlib import PurePath
from typing import TextIO

from ...grammar.errors import printable
from ...grammar.netlist import Place
from ..verdict import Level, Outcome, Review, Verdict
from . import Gate, Unread
from .glyphs import shown
from .ranking import findings, unanswered
from .words import badness, counts, gate_answer, not_reviewed, word

# So many of each kind does a host show for one step of a run.
MOST = 10

_KINDS = {Level.ERROR: "error", Level.WARNING: "warning", Level.NOTE: "notice"}

# What would end a message or a property, each as the host decodes it.
_IN_MESSAGE = {"%": "%25", "\r": "%0D", "\n": "%0A"}
_IN_PROPERTY = {**_IN_MESSAGE, ":": "%3A", ",": "%2C"}


def write(reviews: Sequence[Review], stream: TextIO, gate: Gate) -> None:
    """Write the commands, worst first, and one line that counts everything."""
    lines: dict[str, list[str]] = {"error": [_not_reviewed(one) for one in gate.unread]}
    lines |= {"warning": [], "notice": []}
    for review, verdict in _ranked(reviews):
        lines[_kind(verdict, review, gate)].append(_command(verdict, review))
    for kind, messages in lines.items():
        beyond = len(messages) - MOST
        for number, message in enumerate(messages[:MOST], 1):
            more = f"%0A(and {beyond} more)" if number == MOST and beyond > 0 else ""
            stream.write(shown(f"::{kind} {message}{more}", stream))
    left_out = sum(max(0, len(messages) - MOST) for messages in lines.values())
    stream.write(shown(_summary(reviews, gate, left_out), stream))


def _ranked(reviews: Sequence[Review]) -> Iterator[tuple[Review, Verdict]]:
    pairs = [(review, verdict) for review in reviews for verdict in (*findings(review), *unanswered(review))]
    yield from sorted(pairs, key=lambda pair: badness(pair[1]))


def _kind(verdict: Verdict, review: Review, gate: Gate) -> str:
    """Return the kind of a finding: its level, or whether it stops the gate where it has none."""
    if verdict.outcome is Outcome.FAIL:
        return _KINDS[verdict.level or Level.ERROR]
    return "error" if gate.stops(verdict, review) else "notice"


def _command(verdict: Verdict, review: Review) -> str:
    """Return properties and message of a command."""
    place = verdict.places[0] if verdict.places else Place(review.netlist, 0, 0)
    called = "" if verdict.outcome is Outcome.FAIL else f"{word(verdict.outcome, verdict.level)[0]}: "
    rows = [called + verdict.message, *(f"missing: {need}" for need in verdict.needs)]
    rows += [f"remedy: {verdict.remedy}"] if verdict.remedy else []
    return _at(place, f"{verdict.rule} {verdict.subject}".strip(), rows)


def _not_reviewed(one: Unread) -> str:
    """Return properties and message of the command for a netlist that could not be reviewed."""
    rows = [f"{one.netlist} could not be reviewed: {one.message}"]
    rows += [f"remedy: {one.remedy}"] if one.remedy else []
    return _at(one.place, "not reviewed", rows)


def _at(place: Place, title: str, rows: Iterable[str]) -> str:
    properties = {"file": PurePath(place.file).as_posix()}
    if place.line > 0:
        properties |= {"line": str(place.line), "col": str(max(1, place.column))}
    properties["title"] = title
    told = ",".join(f"{key}={_escaped(value, _IN_PROPERTY)}" for key, value in properties.items())
    return f"{told}::{'%0A'.join(_escaped(row, _IN_MESSAGE) for row in rows)}"


def _escaped(text: str, escapes: dict[str, str]) -> str:
    return printable(text).translate(str.maketrans(escapes))


def _summary(reviews: Sequence[Review], gate: Gate, left_out: int) -> str:
    """Return the line that a reader of the log meets last."""
    told = "".join(text for text, _ in counts(one for review in reviews for one in review.verdicts))
    accepted = sum(review.accepted for review in reviews)
    off = len({one for review in reviews for one in review.switched_off})
    passed = gate.passes_all(reviews)
    sentences = [
        f"pwmlint: {told or 'no verdict'}",
        f"{accepted} of them accepted" if accepted else "",
        f"{left_out} not shown above" if left_out else "",
        f"{off} rule{'s' * (off > 1)} switched off" if off else "",
        not_reviewed(gate.unread),
        f"gate {gate}: {gate_answer(passed)}",
    ]
    return "; ".join(filter(None, sentences))
