"""The nets of a SPICE-style list: names fold case, ground has several, and each level has its own."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from .netlist import Net, Netlist, Place
from .spice_blocks import Definition
from .spice_element import Element
from .spice_names import sheet_name
from .spice_problems import Notes
from .spice_scope import Scope

_GROUND = frozenset({"0", "gnd", "gnd!"})
_GLOBAL_PREFIX = "$g_"  # names that one family of exporters gives to nets of every level


@dataclass(slots=True)
class Level:
    """One level of the hierarchy while it is expanded.

    path:   before the names of its parts and nets: empty, or with a slash at its end
    nets:   node name to net, entered as spelled and casefolded; at first the formal nodes
    chain:  the subcircuits that the level stands in, outermost first
    names:  reference as written to designator, where they differ
    sheets: casefolded reference of each instance that is expanded here
    """

    scope: Scope
    path: str = ""
    nets: dict[str, Net] = field(default_factory=dict[str, Net])
    chain: tuple[Definition, ...] = ()
    names: Mapping[str, str] = field(default_factory=dict[str, str])
    sheets: dict[str, Element] = field(default_factory=dict[str, Element])


class Nets:
    """All nets of a netlist. Those of the deck itself are in its level, those inside instances here."""

    def __init__(self, netlist: Netlist, notes: Notes) -> None:
        self._netlist = netlist
        self._notes = notes
        self._inner: dict[str, Net] = {}  # by casefolded path and name
        self._top: Level | None = None
        self._ground_noted = False

    def of(self, level: Level, element: Element, index: int) -> Net:
        """Return the net of a node of `element`, made where it is new, and enter it at the level."""
        top = self._top = self._top or level
        node = element.nodes[index]
        folded = node.casefold()
        net = level.nets.get(folded)
        if net is None:
            if level is not top and self._is_global(folded, level):
                net = self.of(top, element, index)
            else:
                inside = self._inside(level, node) if level.sheets else None
                net = inside or self._named(level, node, element, index)
            level.nets[folded] = net
        elif level is top and net.name != node:
            self._note_spelling(net, element, index)
        level.nets[node] = net
        return net

    @staticmethod
    def _is_global(folded: str, level: Level) -> bool:
        return folded in _GROUND or folded in level.scope.globals or folded.startswith(_GLOBAL_PREFIX)

    def default(self, level: Level, node: str, element: Element) -> Net:
        """Return the net that an optional node of the instance `element` is on unless connected."""
        return self._named(self._top or level, node, element, None)

    def _named(self, level: Level, node: str, element: Element, index: int | None) -> Net:
        root = level.scope.root(node.casefold())
        if level.path:
            known, key = self._inner, level.path.casefold() + root
        else:
            known, key = level.nets, "0" if root in _GROUND else root
        net = known.get(key)
        if net is None:
            place = element.place if index is None else element.node_place(index)
            net = known[key] = self._made(level.path + node, place)
        elif key == "0" and not self._ground_noted:
            self._ground_noted = True
            message = f"{net.name} and {node} are taken as one net, ground"
            self._notes.add("assumption", message, element.place, net.name)
        return net

    def _made(self, name: str, place: Place) -> Net:
        """Return a new net; a number is added to a name that a net of another level has by chance."""
        nets = self._netlist.nets
        unique, number = name, 1
        while unique in nets:
            number += 1
            unique = f"{name}#{number}"
        net = nets[unique] = Net(unique, place)
        return net

    def _inside(self, level: Level, node: str) -> Net | None:
        """Return the net that a name such as X1.n or X1:n means: the net n inside the instance X1."""
        for mark in ".:":
            head, _, tail = node.partition(mark)
            instance = level.sheets.get(head.casefold()) if tail else None
            if instance is None:
                continue
            definition = level.scope.find(instance.model.casefold())
            formals = [formal.casefold() for formal in definition[0].formals] if definition else []
            if tail.casefold() in formals:
                return self.of(level, instance, formals.index(tail.casefold()))
            sheet = level.names.get(instance.reference) or sheet_name(instance.reference)
            name = f"{level.path}{sheet}/{tail}"
            key = name.casefold()
            if key not in self._inner:
                self._inner[key] = self._made(name, instance.place)
            return self._inner[key]
        return None

    def _note_spelling(self, net: Net, element: Element, index: int) -> None:
        node = element.nodes[index]
        if net.name.casefold() == node.casefold() and node.casefold() not in _GROUND:
            message = f"{net.name} is also spelled {node}: letter case is ignored, they are one net"
            self._notes.add("name-collision", message, element.node_place(index), net.name)
