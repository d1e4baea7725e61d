"""Whether direct current can flow at all: from a net to a supply or to ground, through whatever conducts."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from enum import Enum

from ...grammar.netlist import Part
from .graph import Circuit, Connection
from .transistors import Transistor

_CONDUCTING = frozenset(
    {"resistor", "trimmer", "inductor", "transformer", "diode", "fuse", "jumper", "thermistor", "relay"}
)
_INSULATING = frozenset({"capacitor", "test point", "coupling"})


class Path(Enum):
    """Whether there is a path."""

    YES = "yes"
    NO = "no"
    UNKNOWN = "unknown"  # a part is met of which nothing is known


def path(
    circuit: Circuit,
    transistors: dict[str, Transistor],
    start: str,
    arrives: Callable[[str], bool],
    without: str,
    ends: Callable[[str], bool],
) -> Path:
    """Tell whether current can flow from `start` to a net at which it arrives.

    without: the part that the current comes from; ends: nets beyond which the search does not go
    """
    waiting, seen, unknown = [start], {start}, False
    while waiting:
        net = waiting.pop()
        if net != start and arrives(net):
            return Path.YES
        if net != start and ends(net):
            continue
        for connection in circuit.connections(net):
            if connection.part.reference == without or circuit.kind(connection.part) in _INSULATING:
                continue
            onward = _onward(circuit, transistors, connection)
            unknown = unknown or onward is None
            new = [other for other in onward or () if other not in seen]
            seen.update(new)
            waiting += new
    return Path.UNKNOWN if unknown else Path.NO


def _onward(circuit: Circuit, transistors: dict[str, Transistor], connection: Connection) -> list[str] | None:
    """Return the nets that a part conducts to from one of its pins, None where that is not known."""
    part, net = connection.part, connection.pin.net
    if circuit.kind(part) in _CONDUCTING:
        return circuit.other_nets(part, net)
    transistor = transistors.get(part.reference)
    return None if transistor is None else list(_through(transistor, part, net))


def _through(transistor: Transistor, part: Part, net: str) -> Iterator[str]:
    """Yield the nets that a transistor conducts to; an insulated gate conducts to none."""
    if net in transistor.mains or transistor.field_effect is False:
        nets = transistor.mains if transistor.field_effect else tuple(pin.net for pin in part.pins)
        yield from (other for other in nets if other and other != net)
