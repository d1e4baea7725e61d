"""What changed between two revisions of a schematic, in parts, nets and verdicts.

    from pwmlint.lint.compare import compare
    found = compare("HEAD~1:boards/fan.cir", "boards/fan.cir")

Revisions may be of different formats. Nothing here prints or exits.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from contextlib import ExitStack
from datetime import date
from pathlib import Path

from ..design import Design
from ..estimate import Method
from ..policy import Policy
from ..rule import Rule
from ..verdict import Review
from .circuits import assumptions, circuit_changes, switched_off
from .comparison import (
    Change,
    CircuitChanges,
    Comparison,
    Difference,
    NetChange,
    NetSeen,
    PartChange,
    PartSeen,
    PinMove,
    Unchanged,
    VerdictChange,
)
from .pairing import match
from .reading import Asked, read_revision
from .side import Side
from .source import Source, opened
from .verdicts import Names, verdict_changes

__all__ = [
    "Asked",
    "Change",
    "CircuitChanges",
    "Comparison",
    "Difference",
    "NetChange",
    "NetSeen",
    "PartChange",
    "PartSeen",
    "PinMove",
    "Unchanged",
    "VerdictChange",
    "compare",
    "compare_designs",
    "compare_each",
]


def compare(
    old: str | Path,
    new: str | Path,
    *,
    brief: str | Path | None = None,
    parts_list: str | Path | None = None,
    deviations: str | Path | None = None,
    allow_include: Sequence[Path] = (),
    method: Method = Method.EXTREME,
    rules: Sequence[Rule] | None = None,
    policy: Policy | None = None,
    today: date | None = None,
) -> Comparison:
    """Compare two revisions of a netlist and return everything that changed.

    old, new: paths, or `REV:path` of a git repository: then brief, parts list, deviations and included files
              are those of that revision; one of them may be "-" for standard input
    The other arguments are those of `review`, and the same for both revisions.
    Raises NetlistError, or one of its kinds, for an input that cannot be read.
    """
    asked = Asked(
        brief=brief,
        parts_list=parts_list,
        deviations=deviations,
        allow_include=allow_include,
        method=method,
        rules=rules,
        policy=policy,
        today=today,
    )
    return compare_each(old, new, lambda source: asked)


def compare_each(old: str | Path, new: str | Path, asked: Callable[[Source], Asked]) -> Comparison:
    """Compare two revisions as `compare` does, each reviewed as `asked` says of it."""
    with ExitStack() as stack:
        sources = [stack.enter_context(opened(str(text))) for text in (old, new)]
        read = [source.read(lambda source: read_revision(source.path, asked(source))) for source in sources]
        found = compare_designs(read[0][0], read[1][0], read[0][1], read[1][1])
        for source in sources:
            found = source.named(found)
        return found


def compare_designs(old: Design, new: Design, old_review: Review, new_review: Review) -> Comparison:
    """Compare two designs that are read and reviewed already."""
    sides = Side(old), Side(new)
    matching = match(*sides)
    circuit = circuit_changes(*sides, matching)
    names = Names(matching.references, matching.nets.forward)
    verdicts, same_verdicts = verdict_changes(old_review.verdicts, new_review.verdicts, names)
    return Comparison(
        old=old_review,
        new=new_review,
        circuit=circuit,
        verdicts=verdicts,
        unchanged=Unchanged(
            len(matching.pairs) - len(circuit.parts_changed),
            len(matching.nets.forward) - len(circuit.nets_changed),
            same_verdicts,
        ),
        assumptions=(*assumptions(*sides, matching), *switched_off(old_review, new_review)),
    )
