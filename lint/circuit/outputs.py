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
    """One of a controller's output transistors.

    collector, emitter: their nets, empty for a pin without one
    hanging: which of them hangs open, where the use is "incomplete"
    """

    number: int
    collector: str
    emitter: str
    use: Use
    hanging: str = ""

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
        use = self._use(collector, emitter)
        hanging = ("collector" if self._hangs_open(collector) else "emitter") if use == "incomplete" else ""
        return OutputTransistor(number, collector, emitter, use, hanging)

    def _use(self, collector: str, emitter: str) -> Use:
        opens = [net for net in (collector, emitter) if self._hangs_open(net)]
        stiff = [net for net in (collector, emitter) if self._is_ground(net) or self._is_supply(net)]
        if collector == emitter or len(opens) + len(stiff) == 2:
            shorts = len(stiff) == 2 and collector != emitter
            return "across" if shorts and not all(map(self._is_ground, stiff)) else "unused"
        return "incomplete" if opens else self._loaded(collector, emitter)

    def _loaded(self, collector: str, emitter: str) -> Use:
        """Tell how a transistor with a load works: a stiff net tells, else one behind resistors."""
        if self._is_ground(emitter):
            return "common emitter"
        if self._is_supply(collector):
            return "follower"
        if any(map(self._is_ground, self._behind_resistors(emitter))):
            return "common emitter"
        return "follower" if any(map(self._is_supply, self._behind_resistors(collector))) else "floating"

    def _hangs_open(self, net: str) -> bool:
        """Tell whether nothing is on the net but output pins of this controller and test points."""
        if not net:
            return True
        if self._is_ground(net) or self._is_supply(net):
            return False
        roles = {f"output {number} {end}" for number in (1, 2) for end in ("collector", "emitter")}
        for connection in self.circuit.connections(net):
            own = connection.part.reference == self.controller.reference
            if own and self.controller.role_of(connection.index) in roles:
                continue
            if self.circuit.kind(connection.part) != "test point":
                return False
        return True

    def _is_supply(self, net: str) -> bool:
        known = net in self.known and not self._is_ground(net)
        return bool(net) and (known or net == self.controller.net("supply"))

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
