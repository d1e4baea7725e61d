"""The circuit as a graph: parts and nets are its nodes, every pin is an edge."""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING, TypeAlias

from ...grammar.netlist import Netlist, Part, Pin
from ..parts_list import PartsList
from .conditions import STANDARD_CONDITIONS, Conditions
from .parts import PartReader, PartValue

if TYPE_CHECKING:
    import networkx as nx

Node: TypeAlias = tuple[str, str]  # ("part", reference) or ("net", name)

# Net names that stand for ground in the lists and on the schematics of the trade.
_GROUND = re.compile(r"(?:.*/)?(?:0|0V|[ADPS]?GND[ADPS]?!?|GROUND|VSS)", re.IGNORECASE)


@dataclass(frozen=True, slots=True)
class Connection:
    """One pin of one part, seen from a net: `index` counts the part's pins from 0."""

    part: Part
    index: int

    @property
    def pin(self) -> Pin:
        """Return the pin itself."""
        return self.part.pins[self.index]


class Circuit:
    """A netlist as a circuit: who is connected to what, and what each part is worth.

    Parts that are not fitted are left out; the netlist's notes say which. `conditions` are what every
    part is judged under.
    """

    def __init__(
        self,
        netlist: Netlist,
        parts_list: PartsList | None = None,
        conditions: Conditions = STANDARD_CONDITIONS,
    ) -> None:
        self.netlist = netlist
        self.conditions = conditions
        self.parts = {name: part for name, part in netlist.parts.items() if part.fitted}
        self._reader = PartReader(netlist, parts_list, conditions)

    @cached_property
    def graph(self) -> nx.MultiGraph[Node]:
        """Return the bipartite graph; the key of an edge is the index of the pin in its part."""
        import networkx as nx  # here, for it takes longer to load than a board takes to review

        graph: nx.MultiGraph[Node] = nx.MultiGraph()
        graph.add_nodes_from(("net", name) for name in self.netlist.nets)
        graph.add_nodes_from(("part", name) for name in self.parts)
        for name, part in self.parts.items():
            for index, pin in enumerate(part.pins):
                if pin.net:
                    graph.add_edge(("part", name), ("net", pin.net), index)
        return graph

    @cached_property
    def grounds(self) -> frozenset[str]:
        """Return the nets that are ground by their name."""
        return frozenset(name for name in self.netlist.nets if _GROUND.fullmatch(name))

    @cached_property
    def coupled(self) -> frozenset[str]:
        """Return the inductors that `K` lines couple, casefolded: they are windings of a transformer."""
        lines = (part.attributes.get("couples", "") for part in self.parts.values())
        return frozenset(name for line in lines for name in line.casefold().split())

    def connections(self, net: str) -> Iterator[Connection]:
        """Yield every pin on a net, in the order of the file."""
        for reference, index in self.netlist.nets[net].pins:
            if reference in self.parts:
                yield Connection(self.parts[reference], index)

    def other_nets(self, part: Part, net: str) -> list[str]:
        """Return the nets that the part's pins join to `net`, itself left out."""
        return list(dict.fromkeys(pin.net for pin in part.pins if pin.net and pin.net != net))

    def between(self, one: str, other: str) -> list[Part]:
        """Return the two-terminal parts that stand straight between two nets."""
        return [
            connection.part
            for connection in self.connections(one)
            if len(connection.part.pins) == 2 and connection.part.pins[1 - connection.index].net == other
        ]

    def kind(self, part: Part) -> str:
        """Return the kind of a part, such as "resistor"."""
        return self._reader.kind(part)

    def value(self, part: Part) -> PartValue | None:
        """Return the value of a part with its tolerance, or None where it has none that can be read."""
        return self._reader.value(part)

    @property
    def reader(self) -> PartReader:
        """Return the reader of ratings and attributes."""
        return self._reader

    def is_ground(self, net: str) -> bool:
        """Tell whether a net is ground by its name."""
        return net in self.grounds
