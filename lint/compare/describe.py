"""Parts, nets and pins of the revisions as the comparison tells them, once it is settled which is which."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass

from ...grammar.netlist import Net, Part
from .comparison import NetChange, NetSeen, PartChange, PartSeen, PinMove
from .correspondence import pin_name
from .differences import differences, value_text
from .nets import NetMatching, PartPair
from .pairing import Matching
from .side import Side

END = "one end"


def part_seen(side: Side, part: Part) -> PartSeen:
    """Return a part as a report names it."""
    return PartSeen(
        reference=part.reference,
        kind=side.kind(part),
        value=value_text(side, part),
        model=part.model,
        nets=side.nets_of(part),
        fitted=part.fitted,
        place=part.place,
    )


def part_change(old: Side, new: Side, pair: PartPair, nets: NetMatching) -> PartChange | None:
    """Return what changed of a part of both revisions, None where nothing did."""
    found = differences(old, pair.old, new, pair.new)
    moves = tuple(pin_moves(old, new, pair, nets))
    renumbered = _is_renumbered(old, new, pair)
    if not (found or moves or renumbered):
        return None
    return PartChange(part_seen(old, pair.old), part_seen(new, pair.new), renumbered, found, moves)


def _is_renumbered(old: Side, new: Side, pair: PartPair) -> bool:
    """Tell whether a part goes by another reference designator; an exporter's prefix makes no other one."""
    one, other = pair.old.reference, pair.new.reference
    if one == other or one.removeprefix("/").casefold() == other.removeprefix("/").casefold():
        return False
    written = sorted((one, other), key=len)
    elements = {pair.old.element.casefold(), pair.new.element.casefold()} - {""}
    longer = written[1].rpartition("/")[2].casefold()
    shorter = written[0].rpartition("/")[2].casefold()
    prefixed = longer[:1] in elements and longer[1:].lstrip("_") == shorter
    return not (
        prefixed and (old.netlist.format != new.netlist.format or pair.old.element != pair.new.element)
    )


def pin_moves(old: Side, new: Side, pair: PartPair, nets: NetMatching) -> Iterator[PinMove]:
    """Yield the pins that are on another net than before."""
    for move in _moved(old, new, pair, nets):
        index, partner = move
        name = END
        if not pair.pins.alike:
            name = (
                pin_name(new, pair.new, partner)
                if partner is not None
                else pin_name(old, pair.old, index or 0)
            )
        yield PinMove(
            name,
            None if index is None else old.nets_of(pair.old)[index],
            None if partner is None else new.nets_of(pair.new)[partner],
        )


def _moved(
    old: Side, new: Side, pair: PartPair, nets: NetMatching
) -> Iterator[tuple[int | None, int | None]]:
    """Yield old and new index of the pins that moved, came or went."""
    here, there = old.nets_of(pair.old), new.nets_of(pair.new)
    likely = pair.pins.likely
    if pair.pins.alike or (likely and not numbers_fit(old, new, pair, nets)):
        yield from _moved_by_nets(old, new, pair, nets)
        return
    for index, partner in pair.pins.certain or likely:
        if not nets.same(here[index], there[partner]):
            yield index, partner
    across = old.netlist.format != new.netlist.format
    yield from ((index, None) for index in _telling(old, here, pair.pins.old_left, across))
    yield from ((None, index) for index in _telling(new, there, pair.pins.new_left, across))


def numbers_fit(old: Side, new: Side, pair: PartPair, nets: NetMatching) -> bool:
    """Tell whether the numbers of a part's pins fit most of its nets, and are to be trusted on the others."""
    here, there = old.nets_of(pair.old), new.nets_of(pair.new)
    kept = sum(nets.same(here[one], there[other]) for one, other in pair.pins.likely)
    return 2 * kept > len(pair.pins.likely)


def _telling(side: Side, nets: Sequence[str], left: Iterable[int], across: bool) -> Iterator[int]:
    """Yield the pins that the other revision lacks, save those that add nothing.

    These are open or, between formats, beside another pin of the part: the bulk of a list's transistor.
    """
    times = Counter(nets if across else ())
    for index in left:
        if not side.is_open(nets[index]) and times[nets[index]] <= 1:
            yield index


def _moved_by_nets(
    old: Side, new: Side, pair: PartPair, nets: NetMatching
) -> Iterator[tuple[int | None, int | None]]:
    """Pair pins that stayed on their nets, in whatever order, and yield the rest as they come."""
    here, there = old.nets_of(pair.old), new.nets_of(pair.new)
    left, rest = nets.apart(here, there)
    yield from zip(left, rest, strict=False)
    yield from ((index, None) for index in left[len(rest) :] if not old.is_open(here[index]))
    yield from ((None, index) for index in rest[len(left) :] if not new.is_open(there[index]))


def pin_text(side: Side, reference: str, index: int) -> str:
    """Return a pin as it stands in a list of pins: `U1.DTC`, and `R3` alone where its ends are alike."""
    part = side.netlist.parts[reference]
    name = pin_name(side, part, index)
    return reference if len(part.pins) <= 2 and name in ("1", "2") else f"{reference}.{name}"


def net_seen(side: Side, net: Net) -> NetSeen:
    """Return a net as a report names it."""
    return NetSeen(net.name, tuple(pin_text(side, *pin) for pin in net.pins), net.place)


@dataclass(frozen=True, slots=True)
class Traffic:
    """Which pins came to a net and which left it, by net."""

    gained: dict[str, list[tuple[str, int]]]
    lost: dict[str, list[tuple[str, int]]]


def traffic(old: Side, new: Side, matching: Matching) -> Traffic:
    """Return the pins that came to each net of the new revision, and that left each net of the old one."""
    found = Traffic({}, {})
    for pair in matching.pairs:
        for index, partner in _moved(old, new, pair, matching.nets):
            _note(found.lost, old, pair.old, index)
            _note(found.gained, new, pair.new, partner)
    paired = {pair.new.reference for pair in matching.pairs}
    for side, notes, known in ((old, found.lost, matching.references), (new, found.gained, paired)):
        for part in side.netlist.parts.values():
            if part.reference not in known:
                for index in range(len(part.pins)):
                    _note(notes, side, part, index)
    return found


def _note(notes: dict[str, list[tuple[str, int]]], side: Side, part: Part, index: int | None) -> None:
    if index is not None and (net := side.nets_of(part)[index]):
        notes.setdefault(net, []).append((part.reference, index))


def net_change(old: Side, new: Side, one: str, other: str, pins: Traffic) -> NetChange | None:
    """Return what changed of a net of both revisions, None where nothing did."""
    gained, lost = pins.gained.get(other, ()), pins.lost.get(one, ())
    same_format = old.netlist.format == new.netlist.format
    renamed = old.key(one) != new.key(other)
    if renamed and not same_format and old.is_open(one) and new.is_open(other):
        renamed = False  # a list must name what a schematic leaves open
    if not (renamed or gained or lost):
        return None
    return NetChange(
        net_seen(old, old.netlist.nets[one]),
        net_seen(new, new.netlist.nets[other]),
        renamed,
        tuple(pin_text(new, *pin) for pin in gained),
        tuple(pin_text(old, *pin) for pin in lost),
    )
