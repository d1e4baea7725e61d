"""Which part of the old revision is which part of the new one.

A part is the one with its reference designator, however an exporter prefixes it. Where the drawing was
numbered anew that says the wrong thing: then a part is the one of its kind and value on the same nets, where
there is only one such in both revisions and this reading leaves fewer changes to tell than the first.
"""

from __future__ import annotations

from collections import Counter, defaultdict
from collections.abc import Callable, Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass

from ...grammar.netlist import Part
from .correspondence import correspondence
from .nets import NetMatching, PartPair
from .side import Side
from .worth import worth

# What a net is for the comparison: a text that is the same in both revisions, None where it has no partner.
_Identity = Callable[[str], str | None]


@dataclass(frozen=True, slots=True)
class Matching:
    """Parts and nets of both revisions brought together; `references` is old to new."""

    pairs: tuple[PartPair, ...]
    references: Mapping[str, str]
    nets: NetMatching


def match(old: Side, new: Side) -> Matching:
    """Return which part and which net is which; of two readings the one with fewer changes."""
    by_reference = _by_reference(old, new)
    plain = _matching(old, new, by_reference)
    if not _unsettled(old, new, plain):
        return plain
    readings = [plain]
    for identities in (_by_pins(plain.nets), _by_name(old, new)):
        references = _renumbered(old, new, by_reference, identities)
        if references != by_reference:
            readings.append(_matching(old, new, references))
            # A part that was numbered anew on a net that was renamed: only now is that net known.
            if more := _lone_twins(old, new, references, _by_pins(readings[-1].nets)):
                readings.append(_matching(old, new, references | more))
    return min(readings, key=lambda reading: _changes(old, new, reading))


def _by_reference(old: Side, new: Side) -> dict[str, str]:
    """Return the parts with the same reference designator, letter case and exporters' prefixes apart."""
    found = {reference: reference for reference in old.netlist.parts if reference in new.netlist.parts}
    for spell in (_folded, _without_prefix):
        taken = set(found.values())
        here = _unique(old, [one for one in old.netlist.parts if one not in found], spell)
        there = _unique(new, [one for one in new.netlist.parts if one not in taken], spell)
        found |= {here[key]: there[key] for key in here if key in there}
    return found


def _unique(side: Side, references: Sequence[str], spell: Callable[[Side, str], str]) -> dict[str, str]:
    """Return references by their other spelling, those left out that share one."""
    spelt = {reference: spell(side, reference) for reference in references}
    times = Counter(spelt.values())
    return {key: reference for reference, key in spelt.items() if times[key] == 1}


def _folded(side: Side, reference: str) -> str:
    del side
    return reference.removeprefix("/").casefold()


def _without_prefix(side: Side, reference: str) -> str:
    """Return a reference without the element letter that a list puts before a name of another class."""
    path, slash, name = _folded(side, reference).rpartition("/")
    element = side.netlist.parts[reference].element.casefold()
    rest = name[1:].lstrip("_")
    if element and name.startswith(element) and rest[:1].isalpha() and rest[-1:].isdecimal():
        name = rest
    return path + slash + name


def _matching(old: Side, new: Side, references: Mapping[str, str]) -> Matching:
    pairs = tuple(_pairs(old, new, references))
    return Matching(pairs, references, NetMatching(old, new, pairs))


def _pairs(old: Side, new: Side, references: Mapping[str, str]) -> Iterator[PartPair]:
    for reference, part in old.netlist.parts.items():
        if reference in references:
            other = new.netlist.parts[references[reference]]
            yield PartPair(part, other, correspondence(old, part, new, other))


# ------------------------------------------------------------------------------ parts numbered anew


def _unsettled(old: Side, new: Side, matching: Matching) -> bool:
    """Tell whether another reading of the parts could explain more: some moved, or came and went."""
    gone = len(old.netlist.parts) > len(matching.pairs)
    come = len(new.netlist.parts) > len(matching.pairs)
    return (gone and come) or any(_moved(old, new, pair, matching.nets) for pair in matching.pairs)


def _by_pins(nets: NetMatching) -> tuple[_Identity, _Identity]:
    return nets.forward.get, lambda net: net if net in nets.backward else None


def _by_name(old: Side, new: Side) -> tuple[_Identity, _Identity]:
    def identity(side: Side, others: Side) -> _Identity:
        keys = others.by_key
        return lambda net: key if net and (key := side.key(net)) in keys else None

    return identity(old, new), identity(new, old)


def _renumbered(
    old: Side, new: Side, references: Mapping[str, str], identities: tuple[_Identity, _Identity]
) -> dict[str, str]:
    """Return the parts by reference, save those that are certainly another one under another reference."""
    twins = _twins(old, new, identities)
    targets = set(twins.values())
    heads = [reference for reference in twins if reference not in targets]
    found = dict(references)
    done: set[str] = set()
    # Parts numbered anew form chains, R3 is now R4, R4 is now R5, or rings: each is taken as a whole.
    for reference in (*heads, *twins):
        chain: list[str] = []
        while reference in twins and reference not in done:
            done.add(reference)
            chain.append(reference)
            reference = twins[reference]
        if chain and _is_shorter(old, new, references, chain, twins):
            for one in chain:
                found[one] = twins[one]
            if reference in found and reference not in chain:
                del found[reference]  # the chain's end had a part of its own in the old revision
    return found


def _twins(old: Side, new: Side, identities: tuple[_Identity, _Identity]) -> dict[str, str]:
    """Return the parts of which both revisions have one and only one alike, under different references."""
    sides = (old, old.netlist.parts.values()), (new, new.netlist.parts.values())
    groups = _alike(sides, identities)
    found: dict[str, str] = {}
    for one, other in groups:
        both = set(one) & set(other)
        gone = [reference for reference in one if reference not in both]
        come = [reference for reference in other if reference not in both]
        if len(gone) == len(come) == 1:
            found[gone[0]] = come[0]
    return found


def _lone_twins(
    old: Side, new: Side, references: Mapping[str, str], identities: tuple[_Identity, _Identity]
) -> dict[str, str]:
    """Return those parts without a partner of which both revisions have one and only one alike."""
    taken = set(references.values())
    lone = (
        [part for name, part in old.netlist.parts.items() if name not in references],
        [part for name, part in new.netlist.parts.items() if name not in taken],
    )
    groups = _alike(((old, lone[0]), (new, lone[1])), identities)
    return {one[0]: other[0] for one, other in groups if len(one) == len(other) == 1}


def _alike(
    sides: Sequence[tuple[Side, Iterable[Part]]], identities: tuple[_Identity, _Identity]
) -> Iterable[tuple[list[str], list[str]]]:
    """Return groups of parts that look alike, by their references in the old and the new revision."""
    groups: dict[object, tuple[list[str], list[str]]] = defaultdict(lambda: ([], []))
    for index, (side, parts) in enumerate(sides):
        for part in parts:
            look = _look(side, part, identities[index])
            if look is not None:
                groups[look][index].append(part.reference)
    return groups.values()


def _look(side: Side, part: Part, identity: _Identity) -> object | None:
    """Return kind, worth and nets of a part; None where one of its nets is in one revision only."""
    nets = [identity(net) for net in side.nets_of(part) if not side.is_open(net)]
    told = [net for net in nets if net is not None]
    if not told or len(told) < len(nets):
        return None
    return side.kind(part), worth(side, part), tuple(sorted(told))


def _is_shorter(
    old: Side, new: Side, references: Mapping[str, str], chain: Sequence[str], twins: Mapping[str, str]
) -> bool:
    """Tell whether a chain of new numbers says less than the changes that it would explain."""
    plain, anew = 0, len(chain)
    for reference in chain:
        part = old.netlist.parts[reference]
        partner = references.get(reference)
        plain += _apart(old, part, new, new.netlist.parts[partner]) if partner else 1 + len(part.pins)
    first, last = chain[0], twins[chain[-1]]
    if last != first:  # no ring: something comes at its beginning and something goes at its end
        came = new.netlist.parts.get(references.get(first, ""))
        anew += 1 + len(came.pins) if came is not None else 0
        went = old.netlist.parts.get(last)
        there = new.netlist.parts[last]
        plain += _apart(old, went, new, there) if went is not None else 1 + len(there.pins)
        anew += 1 + len(went.pins) if went is not None else 0
    return anew < plain


def _apart(old: Side, one: Part, new: Side, other: Part) -> int:
    """Return how many properties and pins tell two parts apart, nets by their names."""
    keys = Counter(old.key(net) for net in old.nets_of(one) if net)
    there = Counter(new.key(net) for net in new.nets_of(other) if net)
    pins = max((keys - there).total(), (there - keys).total())
    return pins + (old.kind(one) != new.kind(other)) + (worth(old, one) != worth(new, other))


# ----------------------------------------------------------------------------------- fewest changes


def _changes(old: Side, new: Side, reading: Matching) -> int:
    """Return how much a reading leaves to tell."""
    paired = {reading.references[pair.old.reference] for pair in reading.pairs}
    lone = [
        *(part for part in old.netlist.parts.values() if part.reference not in reading.references),
        *(part for part in new.netlist.parts.values() if part.reference not in paired),
    ]
    told = sum(1 + len(part.pins) for part in lone)
    for pair in reading.pairs:
        told += pair.old.reference.casefold() != pair.new.reference.casefold()
        told += old.kind(pair.old) != new.kind(pair.new)
        told += worth(old, pair.old) != worth(new, pair.new)
        told += _moved(old, new, pair, reading.nets)
    nets = reading.nets
    told += sum(old.key(one) != new.key(other) for one, other in nets.forward.items())
    return told + len(old.netlist.nets) + len(new.netlist.nets) - 2 * len(nets.forward)


def _moved(old: Side, new: Side, pair: PartPair, nets: NetMatching) -> int:
    """Return how many pins of a part are on another net."""
    here, there = old.nets_of(pair.old), new.nets_of(pair.new)
    if pair.pins.certain:
        return sum(not nets.same(here[one], there[other]) for one, other in pair.pins.certain)
    return max(map(len, nets.apart(here, there)))
