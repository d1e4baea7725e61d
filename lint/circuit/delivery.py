"""The way of the load's current from a filter to the output: through what stands in series with it."""

from __future__ import annotations

from collections.abc import Collection, Iterator

from .diodes import diode_nets
from .graph import Circuit


def delivered(circuit: Circuit, start: str, wanted: Collection[str], shunt: float) -> str | None:
    """Return the first of the wanted nets to which the load's current goes on from `start`, or None.

    It passes a second filter's inductor, a fuse, a resistor of up to `shunt` (ohm) and, forwards, a diode:
    one that keeps a battery from feeding back.
    """
    waiting, seen = [start], {start}
    while waiting:
        net = waiting.pop(0)
        if net in wanted:
            return net
        new = [other for other in _onward(circuit, net, shunt) if other not in seen]
        seen.update(new)
        waiting += new
    return None


def _onward(circuit: Circuit, net: str, shunt: float) -> Iterator[str]:
    """Yield the nets to which the current goes on from a net, ground left out."""
    for connection in circuit.connections(net):
        part = connection.part
        kind, others, value = circuit.kind(part), circuit.other_nets(part, net), circuit.value(part)
        if len(part.pins) != 2 or not others or circuit.is_ground(others[0]):
            continue
        small = kind == "resistor" and value is not None and value.spread.nominal <= shunt
        forward = kind == "diode" and diode_nets(part)[0] == net
        if small or forward or kind in ("inductor", "fuse", "jumper"):
            yield others[0]
