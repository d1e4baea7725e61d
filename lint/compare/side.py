"""One revision as the comparison asks it: parts, nets, what they are called and what they are worth."""

from __future__ import annotations

from collections import Counter
from functools import cached_property

from ...grammar.netlist import Part
from ..circuit.controllers import Controller
from ..design import Design

_GROUND = frozenset({"0", "gnd", "gnd!"})


class Side:
    """One of the two revisions."""

    def __init__(self, design: Design) -> None:
        self.design = design
        self.netlist = design.netlist
        self.reader = design.circuit.reader
        self.controllers: dict[str, Controller] = {one.reference: one for one in design.controllers}

    def kind(self, part: Part) -> str:
        """Return the kind of a part, such as "resistor"."""
        return self.reader.kind(part)

    def nets_of(self, part: Part) -> tuple[str, ...]:
        """Return the net of each pin, empty for an open one."""
        return self._connected[part.reference]

    def is_open(self, net: str) -> bool:
        """Tell whether a pin on a net is open: on none, or alone on its own, as a list must have it."""
        return not net or len(self.netlist.nets[net].pins) < 2

    def key(self, net: str) -> str:
        """Return a net's name as names are compared: letter case, a leading slash and `0` for `GND` apart.

        Where two nets of the revision would read alike, each keeps its own spelling.
        """
        return self._keys[net]

    @cached_property
    def by_key(self) -> dict[str, str]:
        """Return the net of each key."""
        return {key: net for net, key in self._keys.items()}

    @cached_property
    def _keys(self) -> dict[str, str]:
        folded = {net: _folded(net) for net in self.netlist.nets}
        times = Counter(folded.values())
        # The mark keeps a spelling apart from the folded name of another net.
        return {net: key if times[key] == 1 else f"={net}" for net, key in folded.items()}

    @cached_property
    def _connected(self) -> dict[str, tuple[str, ...]]:
        return {
            reference: tuple(pin.net for pin in part.pins) for reference, part in self.netlist.parts.items()
        }


def _folded(net: str) -> str:
    name = net.removeprefix("/").casefold()
    return "gnd" if name in _GROUND else name or net
