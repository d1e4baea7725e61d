"""Reading: what of the netlist was assumed, skipped or left out before any question was asked."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence

from ..grammar.netlist import Note
from ..lint.design import Design
from ..lint.rule import netlist_rule
from ..lint.verdict import Outcome, Verdict

_MOST_NAMED = 8


@netlist_rule("connections.reading", level="note", topic="connections")
def reading(design: Design) -> Iterable[Verdict]:
    """Was the netlist read whole and as it was meant?

    What:
        Tells which parts are marked as not fitted and left out, which cards or forms have no meaning here
        and were skipped, which libraries are not at hand, and what the reader took for granted. A part whose
        pins do not fit their definition is for a person to judge.
    Why:
        A verdict holds for the circuit that was understood. What was left out of it must be known to whoever
        reads the verdict.
    Formula:
        none: a text is read, no figure is computed
    Source:
        common practice, no source
    Remedy:
        Correct the netlist, or export it again, where it was meant otherwise.
    Fails:
        X1 REF DTC 0 DIVIDER
        .subckt DIVIDER TOP BOTTOM
        R1 TOP BOTTOM 1k
        .ends
    Passes:
        X1 REF DTC DIVIDER
        .subckt DIVIDER TOP BOTTOM
        R1 TOP BOTTOM 1k
        .ends
    """
    by_kind: dict[str, list[Note]] = {}
    for note in design.netlist.notes:
        by_kind.setdefault(note.kind, []).append(note)
    for note in by_kind.get("pin-mismatch", ()):
        yield Verdict(
            outcome=Outcome.REVIEW,
            message=note.message,
            subject=note.subject,
            places=(note.place,),
            remedy="give it the pins of its definition, or correct the definition",
        )
    yield from _told(by_kind)
    if not by_kind.get("pin-mismatch"):
        yield Verdict(outcome=Outcome.PASS, message="every part has the pins of its definition")


def _told(by_kind: dict[str, list[Note]]) -> Iterator[Verdict]:
    """Yield what is good to know, once for each kind."""
    unfitted = by_kind.get("not-fitted", [])
    if unfitted:
        names = tuple(note.subject for note in unfitted)
        are = "are" if len(names) > 1 else "is"
        yield _informs(f"{_named(names)} {are} marked as not fitted, and left out of the circuit", unfitted)
    skipped = by_kind.get("skipped", [])
    if skipped:
        yield _informs(f"without a meaning here, and skipped: {_named(_subjects(skipped))}", skipped)
    for kind in ("missing-library", "name-collision"):
        notes = by_kind.get(kind, [])
        if notes:
            yield _informs(_listed(notes), notes)
    assumed = by_kind.get("assumption", [])
    if assumed:
        things = f"{len(assumed)} things" if len(assumed) > 1 else "one thing"
        yield _informs(f"the netlist leaves {things} to be assumed", assumed, assumed=True)


def _informs(message: str, notes: Sequence[Note], *, assumed: bool = False) -> Verdict:
    return Verdict(
        outcome=Outcome.INFORMATIONAL,
        message=message,
        places=tuple(note.place for note in notes),
        assumptions=tuple(note.message for note in notes) if assumed else (),
    )


def _subjects(notes: Sequence[Note]) -> tuple[str, ...]:
    """Return what the notes are about, each once; the note itself where it names nothing."""
    return tuple(dict.fromkeys(note.subject or note.message for note in notes))


def _listed(notes: Sequence[Note]) -> str:
    return _named(tuple(dict.fromkeys(note.message for note in notes)), "; ")


def _named(names: Sequence[str], comma: str = ", ") -> str:
    more = len(names) - _MOST_NAMED
    return comma.join(names[:_MOST_NAMED]) + (f" and {more} more" if more > 0 else "")
