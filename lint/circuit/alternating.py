"""Where alternating current reaches a diode: there a direct-current analysis would tell a wrong voltage."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from ...grammar.netlist import Part
from .controllers import Controller
from .graph import Circuit
from .potentials import Potential

_WINDINGS = frozenset({"inductor", "transformer"})
_SWITCHING = frozenset({"transistor", "diode", "switch"})
_OUTPUTS = ("output 1 collector", "output 1 emitter", "output 2 collector", "output 2 emitter")


def fed_by(
    circuit: Circuit, known: Mapping[str, Potential], controllers: Sequence[Controller], diode: Part
) -> str:
    """Return the winding or capacitor that brings alternating current to a diode, empty where none does."""
    for pin in diode.pins:
        if not pin.net or pin.net in known:
            continue
        for connection in circuit.connections(pin.net):
            part = connection.part
            if part.reference.casefold() in circuit.coupled:
                return part.reference
            if circuit.kind(part) == "capacitor":
                far = (net for net in circuit.other_nets(part, pin.net) if net not in known)
                if any(_switches(circuit, controllers, net) for net in far):
                    return part.reference
    return ""


def _switches(circuit: Circuit, controllers: Sequence[Controller], net: str) -> bool:
    """Tell whether a net goes up and down with the converter's switches."""
    if any(net == controller.net(role) for controller in controllers for role in _OUTPUTS):
        return True
    parts = [connection.part for connection in circuit.connections(net)]
    if any(part.reference.casefold() in circuit.coupled for part in parts):
        return True
    kinds = {circuit.kind(part) for part in parts}
    return not (_WINDINGS.isdisjoint(kinds) or _SWITCHING.isdisjoint(kinds))
