"""What each output transistor of a controller does: which of its ends drives, and which one returns."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Literal, TypeAlias

from .controllers import Controller
from .graph import Circuit
from .potentials import Potential

# common emitter: the emitter returns to ground and the collector drives
# follower:       the collector stands on a supply and the emitter drives
# floating:       both ends have a load
# incomplete:     one end drives and the other hangs open
# across:         both ends stand on stiff nets of different potential: each pulse shorts them
# unused:         open, or tied off
# unmapped:       its pins are not known
Use: TypeAlias = Literal[
    "common emitter", "follower", "floating", "incomplete", "across", "unused", "unmapped"
]

_LIVE = frozenset({"common emitter", "follower", "floating"})

# Parts that leave a net what it is for the transistor on it.
_IDLE = frozenset({"test point", "capacitor"})


@dataclass(frozen=True, slots=True)
class OutputTransistor:
    """One of a controller's output transistors; an empty net is a pin that hangs open."""

    number: int
    collector: str
    emitter: str
    use: Use

    @property
    def live(self) -> bool:
        """Tell whether the transistor drives something."""
        return self.use in _LIVE

    @property
    def drives(self) -> tuple[str, ...]:
        """Return the nets that it drives."""
        nets = {
            "common emitter": (self.collector,),
            "follower": (self.emitter,),
            "floating": (self.collector, self.emitter),
        }
        return nets.get(self.use, ())

    @property
    def pins(self) -> tuple[str, str]:
        """Return the roles of its pins."""
        return (f"output {self.number} collector", f"output {self.number} emitter")


def output_transistors(
    circuit: Circuit, known: Mapping[str, Potential], controller: Controller
) -> tuple[OutputTransistor, OutputTransistor]:
    """Return the two output transistors of a controller and what each is used for."""
    reader = _Reader(circuit, known, controller)
    return reader.transistor(1), reader.transistor(2)


@dataclass(slots=True)
class _Reader:
    circuit: Circuit
    known: Mapping[str, Potential]
    controller: Controller

    def transistor(self, number: int) -> OutputTransistor:
        collector = self.controller.net(f"output {number} collector")
        emitter = self.controller.net(f"output {number} emitter")
        if collector is None or emitter is None:
            return OutputTransistor(number, collector or "", emitter or "", "unmapped")
        return OutputTransistor(number, collector, emitter, self._use(collector, emitter))

    def _use(self, collector: str, emitter: str) -> Use:
        if collector == emitter:
            return "unused"
        opens = [net for net in (collector, emitter) if self._hangs_open(net)]
        stiff = [net for net in (collector, emitter) if net in self.known]
        if opens:
            return "unused" if len(opens) + len(stiff) == 2 else "incomplete"
        if len(stiff) == 2:
            both_ground = self._is_ground(collector) and self._is_ground(emitter)
            return "unused" if both_ground else "across"
        if self._returns(emitter):
            return "common emitter"
        return "follower" if self._feeds(collector) else "floating"

    def _hangs_open(self, net: str) -> bool:
        """Tell whether nothing is on the net but output pins of this controller and test points."""
        if not net:
            return True
        if net in self.known:
            return False
        roles = {f"output {number} {end}" for number in (1, 2) for end in ("collector", "emitter")}
        for connection in self.circuit.connections(net):
            own = connection.part.reference == self.controller.reference
            if own and self.controller.role_of(connection.index) in roles:
                continue
            if self.circuit.kind(connection.part) != "test point":
                return False
        return True

    def _returns(self, net: str) -> bool:
        """Tell whether a net is ground, or on it through nothing but resistors."""
        return self._is_ground(net) or any(self._is_ground(end) for end in self._behind_resistors(net))

    def _feeds(self, net: str) -> bool:
        """Tell whether a net is a supply, or on one through nothing but resistors."""
        ends = (net, *self._behind_resistors(net))
        return any(self._is_supply(end) for end in ends)

    def _is_supply(self, net: str) -> bool:
        known = net in self.known and not self._is_ground(net)
        return known or net == self.controller.net("supply")

    def _behind_resistors(self, net: str) -> tuple[str, ...]:
        """Return the nets behind the resistors of a net on which nothing else hangs; else nothing."""
        ends: list[str] = []
        for connection in self.circuit.connections(net):
            part = connection.part
            if part.reference == self.controller.reference or self.circuit.kind(part) in _IDLE:
                continue
            if self.circuit.kind(part) not in ("resistor", "jumper"):
                return ()
            ends += self.circuit.other_nets(part, net)
        return tuple(ends)

    def _is_ground(self, net: str) -> bool:
        return net in self.known and self.known[net].origin == "ground"
