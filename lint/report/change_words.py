"""What changed in parts and nets, in words: a line each, one for several of which the same is to be said."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from ..compare.comparison import CircuitChanges, Difference, NetChange, PartChange, PartSeen, PinMove
from ..compare.describe import END

ADDED, REMOVED, CHANGED, RENUMBERED, RENAMED = "added", "removed", "changed", "renumbered", "renamed"

ARROW = " -> "
"""Between what was and what is."""

_NETS, _PINS = 8, 12
_NOTHING = "none"


@dataclass(frozen=True, slots=True)
class Line:
    """One change.

    word:    one of the words above
    subject: parts or nets, such as `C1, C2` or `SENSE -> FB`
    texts:   what changed of it, each on a line of its own
    count:   of how many parts or nets it is told
    """

    word: str
    subject: str
    texts: tuple[str, ...]
    count: int = 1


def part_lines(circuit: CircuitChanges) -> list[Line]:
    """Return the changes of the parts: removed, added, then what is another part now or not the same."""
    lines = [Line(REMOVED, part.reference, (_part(part),)) for part in circuit.parts_removed]
    lines += [Line(ADDED, part.reference, (_part(part),)) for part in circuit.parts_added]
    lines += [_renumbered(change) for change in circuit.parts_changed if change.renumbered]
    return lines + _grouped(change for change in circuit.parts_changed if not change.renumbered)


def net_lines(circuit: CircuitChanges) -> list[Line]:
    """Return the changes of the nets in the same order."""
    lines = [Line(REMOVED, net.name, (f"joined {listed(net.pins, _PINS)}",)) for net in circuit.nets_removed]
    lines += [Line(ADDED, net.name, (f"joins {listed(net.pins, _PINS)}",)) for net in circuit.nets_added]
    lines += [_net(change) for change in circuit.nets_changed if change.renamed]
    return lines + [_net(change) for change in circuit.nets_changed if not change.renamed]


def counted(lines: Iterable[Line]) -> str:
    """Return how many changes go by each word: "1 removed, 3 added"."""
    found: dict[str, int] = {}
    for line in lines:
        found[line.word] = found.get(line.word, 0) + line.count
    return ", ".join(f"{count} {word}" for word, count in found.items())


def listed(names: Sequence[str], most: int) -> str:
    """Return the first names of a list and how many more there are."""
    more = f" and {len(names) - most} more" if len(names) > most else ""
    return ", ".join(names[:most]) + more


def difference(one: Difference) -> str:
    """Return a difference in words: `value 38.3 kΩ -> 3.83 kΩ`."""
    return f"{one.what} {one.old or _NOTHING}{ARROW}{one.new or _NOTHING}"


def _part(part: PartSeen) -> str:
    """Return a part in words: `220 Ω resistor on REF, MET`."""
    called = " ".join(filter(None, (part.value or part.model, part.kind if part.kind != "other" else "part")))
    nets = [net or "nothing" for net in part.nets]
    where = f" on {listed(nets, _NETS)}" if nets else ""
    return f"{called}{where}{'' if part.fitted else ', not fitted'}"


def _grouped(changes: Iterable[PartChange]) -> list[Line]:
    groups: dict[tuple[str, ...], list[str]] = {}
    for change in changes:
        groups.setdefault(_texts(change), []).append(change.new.reference)
    return [Line(CHANGED, listed(names, _PINS), texts, len(names)) for texts, names in groups.items()]


def _renumbered(change: PartChange) -> Line:
    subject = f"{change.old.reference}{ARROW}{change.new.reference}"
    return Line(RENUMBERED, subject, _texts(change) or (_part(change.new),))


def _texts(change: PartChange) -> tuple[str, ...]:
    return (*map(difference, change.differences), *map(_move, change.pins))


def _move(move: PinMove) -> str:
    pin = move.pin if move.pin == END else f"pin {move.pin}"
    if move.new is None:
        return f"{pin} is gone, was on {move.old or 'nothing'}"
    if move.old is None:
        return f"{pin} is new, on {move.new or 'nothing'}"
    return f"{pin} from {move.old or 'nothing'} to {move.new or 'nothing'}"


def _net(change: NetChange) -> Line:
    texts = [f"gained {listed(change.gained, _PINS)}"] if change.gained else []
    texts += [f"lost {listed(change.lost, _PINS)}"] if change.lost else []
    if not change.renamed:
        return Line(CHANGED, change.new.name, tuple(texts))
    texts = texts or [f"joins {listed(change.new.pins, _PINS)}"]
    return Line(RENAMED, f"{change.old.name}{ARROW}{change.new.name}", tuple(texts))
