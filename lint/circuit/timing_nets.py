"""What hangs on a controller's timing pins: the parts that belong there, where they lead, and the rest."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from ...grammar.netlist import Part
from .controllers import Controller
from .graph import Circuit, Connection
from .potentials import Potential

_RESISTIVE = frozenset({"resistor", "trimmer", "jumper", "fuse"})


@dataclass(frozen=True, slots=True)
class TimingNet:
    """One timing pin's surroundings.

    parts:  reference designators of the timing parts: resistive ones, or capacitors
    ends:   the nets they lead to, in the order in which they were met
    others: what else is on these nets, as a reader would point at it ("Q3", "DTC of U1")
    """

    net: str
    parts: tuple[str, ...]
    ends: tuple[str, ...]
    others: tuple[str, ...]


@dataclass(slots=True)
class TimingNets:
    """Reads the surroundings of the timing pins of one controller."""

    circuit: Circuit
    known: Mapping[str, Potential]
    controllers: Sequence[Controller]
    controller: Controller

    def resistor(self) -> TimingNet:
        """Walk from the timing resistor's pin through resistive parts to nets of known potential."""
        start = self.controller.net("timing resistor") or ""
        parts: dict[str, None] = {}
        ends: dict[str, None] = {}
        others: dict[str, None] = {}
        waiting, walked = [start], {start}
        while waiting:
            net = waiting.pop()
            for connection in self._connections(net):
                if self.circuit.kind(connection.part) not in _RESISTIVE:
                    others.update(dict.fromkeys(self._stranger(connection, "timing resistor")))
                    continue
                parts[connection.part.reference] = None
                for other in self.circuit.other_nets(connection.part, net):
                    if other in self.known:
                        ends[other] = None
                    elif other not in walked:
                        walked.add(other)
                        waiting.append(other)
        return TimingNet(start, tuple(parts), tuple(ends), tuple(others))

    def capacitor(self) -> TimingNet:
        """Look at the capacitors straight on the timing capacitor's pin, and at where they lead."""
        net = self.controller.net("timing capacitor") or ""
        parts: dict[str, None] = {}
        ends: dict[str, None] = {}
        others: dict[str, None] = {}
        for connection in self._connections(net):
            if self.circuit.kind(connection.part) == "capacitor":
                parts[connection.part.reference] = None
                ends.update(dict.fromkeys(self.circuit.other_nets(connection.part, net)))
            else:
                others.update(dict.fromkeys(self._stranger(connection, "timing capacitor")))
        return TimingNet(net, tuple(parts), tuple(ends), tuple(others))

    def _connections(self, net: str) -> list[Connection]:
        return list(self.circuit.connections(net)) if net else []

    def _stranger(self, connection: Connection, role: str) -> tuple[str, ...]:
        """Return how to point at a part that is no timing part; nothing for a pin that belongs on the net.

        Two controllers may share a timing net: the one then runs on the other's oscillator.
        """
        part = connection.part
        controller = self._controller(part)
        if controller is None:
            return () if self.circuit.kind(part) == "test point" else (part.reference,)
        found = controller.role_of(connection.index)
        if found is None or found == role:
            return ()
        return (f"{controller.pins[found].name} of {part.reference}",)

    def _controller(self, part: Part) -> Controller | None:
        return next((c for c in self.controllers if c.reference == part.reference), None)
