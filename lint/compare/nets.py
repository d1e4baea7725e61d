"""Which net of the old revision is which of the new one: told by their pins, and by names where pins fail.

Step by step, each deterministic: nets with exactly the same pins; then, best first, nets that kept their name
and a third of their pins, and nets that kept more than half of their pins, two at least, under another name;
then nets that kept the name alone; at last what a single pin tells. A step that settles one end of a resistor
settles the other. The time is that of sorting the pins.
"""

from __future__ import annotations

from collections import defaultdict, deque
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from heapq import heappop, heappush

from ...grammar.netlist import Part
from .correspondence import Correspondence
from .side import Side

# Shares of the pins of parts that both revisions have, of the net with more of them.
_KEEPS_ITS_NAME = 1 / 3
_RENAMED = 1 / 2
_LEAST_SHARED = 2


@dataclass(frozen=True, slots=True)
class PartPair:
    """A part of both revisions, and which of its pins is which."""

    old: Part
    new: Part
    pins: Correspondence


class NetMatching:
    """The nets while they are being matched; `forward` is old net to new net, `backward` the reverse."""

    def __init__(self, old: Side, new: Side, pairs: Sequence[PartPair]) -> None:
        self.forward: dict[str, str] = {}
        self.backward: dict[str, str] = {}
        self._old, self._new = old, new
        self._order = {net: place for place, net in enumerate(old.netlist.nets)}
        self._new_order = {net: place for place, net in enumerate(new.netlist.nets)}
        # Half votes: a pin whose partner is known has two, an end that may be either has one for each.
        self._votes: dict[tuple[str, str], int] = defaultdict(int)
        self._kept: tuple[dict[str, int], dict[str, int]] = (defaultdict(int), defaultdict(int))
        self._ends: dict[str, list[tuple[Sequence[str], Sequence[str]]]] = defaultdict(list)
        self._least = _LEAST_SHARED
        self._heap: list[tuple[int, float, int, int, str, str]] = []
        self._match(pairs)

    def same(self, old: str, new: str) -> bool:
        """Tell whether a pin on `old` and now on `new` has stayed where it was."""
        if old and self.forward.get(old) == new:
            return True
        return self._old.is_open(old) and self._new.is_open(new)

    def apart(self, here: Sequence[str], there: Sequence[str]) -> tuple[list[int], list[int]]:
        """Return which pins of a part are left when all that stayed on their nets are paired, in any order.

        here, there: the nets of its pins in the old and the new revision
        """
        waiting: dict[str, deque[int]] = defaultdict(deque)
        for index, net in enumerate(there):
            waiting[net].append(index)
        left: list[int] = []
        for index, net in enumerate(here):
            partners = waiting.get(self.forward[net]) if net in self.forward else None
            if partners:
                partners.popleft()
            else:
                left.append(index)
        rest = sorted(index for indices in waiting.values() for index in indices)
        # What hangs open in both revisions is on the same net, whatever that is called.
        idle = [index for index in rest if self._new.is_open(there[index])]
        still = [index for index in left if self._old.is_open(here[index])][: len(idle)]
        idle = idle[: len(still)]
        gone, come = set(still), set(idle)
        return [one for one in left if one not in gone], [one for one in rest if one not in come]

    def _match(self, pairs: Sequence[PartPair]) -> None:
        self._match_exactly(pairs)
        self._count(pairs)
        self._settle()
        for net in self._order:
            namesake = self._new.by_key.get(self._old.key(net))
            if namesake is not None and net not in self.forward and namesake not in self.backward:
                self._take(net, namesake)
        # What is left on both sides would be told as gone and come: a single pin in common says more.
        self._least = 1
        self._settle()

    def _match_exactly(self, pairs: Sequence[PartPair]) -> None:
        """Match nets whose pins are the same; of several alike the namesakes first, then in order."""
        tokens = _tokens(self._old, self._new, pairs)
        groups: dict[tuple[int, ...], tuple[list[str], list[str]]] = {}
        for index, side in enumerate((self._old, self._new)):
            for net in side.netlist.nets:
                found = tokens[index].get(net)
                if found is not None and len(found) == len(side.netlist.nets[net].pins):
                    groups.setdefault(tuple(sorted(found)), ([], []))[index].append(net)
        for one, other in groups.values():
            self._pair_alike(one, other)

    def _pair_alike(self, one: Sequence[str], other: Sequence[str]) -> None:
        by_key = {self._new.key(net): net for net in other}
        for net in one:
            namesake = by_key.get(self._old.key(net))
            if namesake is not None:
                self._enter(net, namesake)
        rest = [net for net in one if net not in self.forward]
        free = [net for net in other if net not in self.backward]
        for net, partner in zip(rest, free, strict=False):
            self._enter(net, partner)

    def _count(self, pairs: Sequence[PartPair]) -> None:
        """Count for each pair of open candidates the pins that speak for it."""
        for pair in pairs:
            old, new = self._old.nets_of(pair.old), self._new.nets_of(pair.new)
            for net in old:
                self._kept[0][net] += 1
            for net in new:
                self._kept[1][net] += 1
            if pair.pins.alike:
                self._count_ends(old, new)
                continue
            for index, partner in pair.pins.certain:
                self._vote(old[index], new[partner], 2)
            if pair.pins.likely:
                self._count_namesakes(old, new)

    def _count_ends(self, old: Sequence[str], new: Sequence[str]) -> None:
        settled = False
        for end in (0, 1):
            partner = self.forward.get(old[end])
            if partner in new:
                self._vote(old[1 - end], new[1 - new.index(partner)], 2)
                settled = True
        if settled:
            return
        for one in old:
            for other in new:
                self._vote(one, other, 1)
        for net in set(old):
            self._ends[net].append((old, new))

    def _count_namesakes(self, old: Sequence[str], new: Sequence[str]) -> None:
        known = set(new)
        for net in old:
            namesake = self._new.by_key.get(self._old.key(net)) if net else None
            if namesake in known:
                self._vote(net, namesake, 2)

    def _vote(self, old: str, new: str, votes: int) -> None:
        if old and new and old not in self.forward and new not in self.backward:
            self._votes[old, new] += votes

    def _push(self, old: str, new: str) -> None:
        """Enter a pair of nets as a candidate, where enough pins speak for it."""
        if not old or not new or old in self.forward or new in self.backward:
            return
        shared = self._votes[old, new] / 2
        share = shared / max(self._kept[0][old], self._kept[1][new], 1)
        namesakes = self._old.key(old) == self._new.key(new)
        if namesakes and share >= _KEEPS_ITS_NAME:
            rank = 0
        elif share > _RENAMED and shared >= self._least:
            rank = 1
        else:
            return
        heappush(self._heap, (rank, -share, self._order[old], self._new_order[new], old, new))

    def _settle(self) -> None:
        for old, new in self._votes:
            self._push(old, new)
        while self._heap:
            *_, old, new = heappop(self._heap)
            if old not in self.forward and new not in self.backward:
                self._take(old, new)

    def _take(self, old: str, new: str) -> None:
        """Match two nets, and let the parts between them and others speak for those."""
        self._enter(old, new)
        for one, other in self._ends.pop(old, ()):
            if new in other:
                ends = one[1 - one.index(old)], other[1 - other.index(new)]
                self._vote(*ends, 1)
                self._push(*ends)

    def _enter(self, old: str, new: str) -> None:
        self.forward[old] = new
        self.backward[new] = old


def _tokens(
    old: Side, new: Side, pairs: Iterable[PartPair]
) -> tuple[dict[str, list[int]], dict[str, list[int]]]:
    """Return, for the nets of each revision, numbers of the pins on them that both revisions have.

    Ends that may be exchanged, and pins of which nothing is certain, share the number of their part.
    """
    found: tuple[dict[str, list[int]], dict[str, list[int]]] = (defaultdict(list), defaultdict(list))
    number = 0
    for pair in pairs:
        nets = old.nets_of(pair.old), new.nets_of(pair.new)
        number += 1
        if pair.pins.alike or pair.pins.likely:
            for side in (0, 1):
                for net in nets[side]:
                    found[side][net].append(number)
        for index, partner in pair.pins.certain:
            number += 1
            found[0][nets[0][index]].append(number)
            found[1][nets[1][partner]].append(number)
    return found
