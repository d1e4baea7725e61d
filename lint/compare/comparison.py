"""What changed between two revisions: what `compare` hands to reporters, the gate and Python callers."""

from __future__ import annotations

from dataclasses import dataclass, replace
from enum import StrEnum

from ...grammar.netlist import Place
from ..verdict import Level, Review, Verdict


class Change(StrEnum):
    """What became of a verdict.

    NEW, GONE: the question is asked of one revision only
    WORSE:     a worse outcome, or the same one with clearly less margin
    BETTER:    the reverse
    CHANGED:   neither, but another figure or another word for the same rank
    """

    NEW = "new"
    WORSE = "worse"
    GONE = "gone"
    BETTER = "better"
    CHANGED = "changed"


@dataclass(frozen=True, slots=True)
class Difference:
    """One property of a part that changed, as text; empty where a revision does not tell it.

    old_number, new_number: in the SI base unit of `unit`, None where the property is no number
    """

    what: str
    old: str
    new: str
    old_number: float | None = None
    new_number: float | None = None
    unit: str = ""


@dataclass(frozen=True, slots=True)
class PartSeen:
    """A part of one revision; `nets` in the order of its pins, empty for an open one."""

    reference: str
    kind: str
    value: str
    model: str
    nets: tuple[str, ...]
    fitted: bool
    place: Place


@dataclass(frozen=True, slots=True)
class PinMove:
    """A pin that is on another net; None: the revision's part has no such pin, empty: it is open."""

    pin: str
    old: str | None
    new: str | None


@dataclass(frozen=True, slots=True)
class PartChange:
    """A part of both revisions that is not the same in both, or not under one reference designator."""

    old: PartSeen
    new: PartSeen
    renumbered: bool
    differences: tuple[Difference, ...]
    pins: tuple[PinMove, ...]


@dataclass(frozen=True, slots=True)
class NetSeen:
    """A net of one revision and the pins on it, such as `U1.DTC` and `R3`."""

    name: str
    pins: tuple[str, ...]
    place: Place


@dataclass(frozen=True, slots=True)
class NetChange:
    """A net of both revisions under another name, or with other pins.

    gained, lost: pins as the new and the old revision name them
    """

    old: NetSeen
    new: NetSeen
    renamed: bool
    gained: tuple[str, ...]
    lost: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class VerdictChange:
    """A verdict that is not the same in both revisions; `old` or `new` is None where it is new or gone."""

    change: Change
    old: Verdict | None
    new: Verdict | None

    @property
    def verdict(self) -> Verdict:
        """Return the verdict as it is now, or as it was where it is gone."""
        found = self.new or self.old
        assert found is not None
        return found


@dataclass(frozen=True, slots=True)
class Unchanged:
    """How many parts, nets and verdicts are the same in both revisions."""

    parts: int
    nets: int
    verdicts: int


@dataclass(frozen=True, slots=True)
class CircuitChanges:
    """The parts and nets that came, went or are not the same; renumbered and renamed ones are changed."""

    parts_added: tuple[PartSeen, ...] = ()
    parts_removed: tuple[PartSeen, ...] = ()
    parts_changed: tuple[PartChange, ...] = ()
    nets_added: tuple[NetSeen, ...] = ()
    nets_removed: tuple[NetSeen, ...] = ()
    nets_changed: tuple[NetChange, ...] = ()

    def __bool__(self) -> bool:
        """Tell whether anything changed."""
        parts = (*self.parts_added, *self.parts_removed, *self.parts_changed)
        return bool(parts or self.nets_added or self.nets_removed or self.nets_changed)


@dataclass(frozen=True, slots=True)
class Comparison:
    """Everything that changed from `old` to `new`, in a fixed order: same input, same order.

    verdicts:    new ones first, then what is worse
    assumptions: what the comparison took for granted, each a sentence
    """

    old: Review
    new: Review
    circuit: CircuitChanges
    verdicts: tuple[VerdictChange, ...]
    unchanged: Unchanged
    assumptions: tuple[str, ...] = ()

    def of(self, change: Change) -> tuple[VerdictChange, ...]:
        """Return the verdicts with one fate, in their order."""
        return tuple(one for one in self.verdicts if one.change is change)

    def passes(self, gate: Level | None, *, strict: bool = False) -> bool:
        """Tell whether the gate passes: only a verdict that is new or worse can stop it.

        gate, strict: as for `Review.passes`; a verdict that failed before and fails the same stops nothing
        """
        asked = tuple(
            one.new for one in self.verdicts if one.change in (Change.NEW, Change.WORSE) and one.new
        )
        return replace(self.new, verdicts=asked).passes(gate, strict=strict)
