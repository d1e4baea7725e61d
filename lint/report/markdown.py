"""The report for the discussion of a change: Markdown, short, what is asked of the reader first.

The worst findings stand in a table; their figures, what could not be checked, what is accepted and the
cautions are folded. No line begins with a text from a file.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from typing import TextIO

from ..verdict import Deviation, Review, Verdict
from . import Gate, Unread
from .details import details
from .markdown_parts import folded, named, table, write_lines
from .markdown_text import code, inline
from .ranking import acceptance, accepted, findings, unanswered
from .words import counts, gate_answer, not_reviewed, word

# Details whose text is no prose.
_CODE = ("formula", "at", "needs")


def write(reviews: Sequence[Review], stream: TextIO, gate: Gate) -> None:
    """Write one section a review, and above several the answer to all."""
    lines: list[str] = []
    if len(reviews) != 1 or gate.unread:
        lines += [f"**pwmlint: {_all(reviews, gate)}**", ""]
        lines += [*(f"- {_not_reviewed(one)}" for one in gate.unread), *([""] if gate.unread else [])]
    for review in reviews:
        lines += _review(review, gate)
    write_lines(lines, stream)


def _review(review: Review, gate: Gate) -> Iterator[str]:
    asked = findings(review)
    yield from (f"### pwmlint: {code(review.netlist)}", "")
    if review.name:
        yield from (f"Design: {inline(review.name)}", "")
    yield from (_answer(review, gate), "")
    rows = [(_called(one), inline(one.message), named(one), _where(one, review)) for one in asked]
    yield from table(("verdict", "finding", "rule", "at"), rows)
    yield from _folded("Findings with their figures", [_finding(one) for one in asked])
    yield from _folded("Could not be checked", [_open(one) for one in unanswered(review)])
    yield from _folded("Accepted", [_accepted(*pair) for pair in accepted(review)])
    off = [[f"- {code(one.rule)} by {code(one.where)}"] for one in review.switched_off]
    yield from _folded("Switched off", off)
    yield from _folded("Cautions", [[f"- {inline(caution)}"] for caution in review.cautions])


def _all(reviews: Sequence[Review], gate: Gate) -> str:
    """Return the answer to a run in words."""
    passed = sum(gate.passes(review) for review in reviews)
    netlists = f"{len(reviews)} netlist{'s' * (len(reviews) != 1)}"
    told = f"{netlists}, {passed} passed the gate ({gate})" if reviews or not gate.unread else ""
    return "; ".join(filter(None, (told, not_reviewed(gate.unread))))


def _not_reviewed(one: Unread) -> str:
    place = f", at {code(one.where)}" if one.where else ""
    remedy = f"; {inline(one.remedy)}" if one.remedy else ""
    return f"{code(one.netlist)} could not be reviewed: {inline(one.message)}{place}{remedy}"


def _answer(review: Review, gate: Gate) -> str:
    """Return the gate's answer and the counts, those of what is accepted apart."""
    left = "".join(text for text, _ in counts(one for one in review.verdicts if one.deviation is None))
    told = [left or "no verdict", f"{review.accepted} accepted" if review.accepted else ""]
    return f"**Gate {gate.of(review)}: {gate_answer(gate.passes(review))}**; {', '.join(filter(None, told))}"


def _called(verdict: Verdict) -> str:
    return word(verdict.outcome, verdict.level)[0]


def _where(verdict: Verdict, review: Review) -> str:
    """Return line and column of a finding; the file as well where it is not the netlist itself."""
    place = verdict.places[0] if verdict.places else None
    if place is None or place.line < 1:
        return ""
    return f"{place.line}:{place.column}" if place.file == review.netlist else code(str(place))


def _headline(verdict: Verdict) -> str:
    return f"- **{_called(verdict)}** {named(verdict)}: {inline(verdict.message)}"


def _finding(verdict: Verdict) -> Iterator[str]:
    yield _headline(verdict)
    for label, text in details(verdict):
        if text:
            yield f"  - {label}: {code(text) if label in _CODE else inline(text)}"


def _open(verdict: Verdict) -> Iterator[str]:
    yield _headline(verdict)
    for need in verdict.needs:
        yield f"  - needs: {code(need)}"


def _accepted(verdict: Verdict, deviation: Deviation) -> Iterator[str]:
    yield _headline(verdict)
    yield f"  - {inline(acceptance(deviation))}"


def _folded(title: str, items: Sequence[Iterable[str]]) -> Iterator[str]:
    return folded(f"{title} ({len(items)})", items)
