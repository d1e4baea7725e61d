"""What changed between two revisions of a schematic, in parts, nets and verdicts.

    from pwmlint.lint.compare import compare
    found = compare("HEAD~1:boards/fan.cir", "boards/fan.cir")

Revisions may be of different formats. Nothing here prints or exits.
"""

from __future__ import annotations

from collections.abc import Sequence
from contextlib import ExitStack
from pathlib import Path

from ..design import Design
from ..estimate import Method
from ..verdict import Review
from .circuits import assumptions, circuit_changes
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
from .reading import read_revision
from .side import Side
from .source import opened
from .verdicts import Names, verdict_changes

__all__ = [
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
]


def compare(
    old: str | Path,
    new: str | Path,
    *,
    brief: str | Path | None = None,
    parts_list: str | Path | None = None,
    allow_include: Sequence[Path] = (),
    method: Method = Method.EXTREME,
) -> Comparison:
    """Compare two revisions of a netlist and return everything that changed.

    old, new:   paths, or `REV:path` of a git repository: then brief, parts list and included files are those
                of that revision; one of them may be "-" for standard input
    brief, parts_list, allow_include, method: as for `review`, and the same for both revisions
    Raises NetlistError, or one of its kinds, for an input that cannot be read.
    """
    with ExitStack() as stack:
        sources = [stack.enter_context(opened(str(text))) for text in (old, new)]
        sides = [
            source.read(
                lambda path: read_revision(
                    path, brief=brief, parts_list=parts_list, allow_include=allow_include, method=method
                )
            )
            for source in sources
        ]
        found = compare_designs(sides[0][0], sides[1][0], sides[0][1], sides[1][1])
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
        assumptions=assumptions(*sides, matching),
    )
