"""What each error amplifier is for: which net it senses, through which resistors."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, field

from ...grammar.netlist import Part
from .compensation import compensation
from .controllers import Controller
from .graph import Circuit
from .potentials import Potential

_RESISTIVE = frozenset({"resistor", "trimmer", "jumper", "fuse"})

# Parts that make a net part of the power path: its potential is the converter's doing.
_POWER = frozenset({"inductor", "transformer", "diode", "transistor", "relay"})

# Those that no amplifier's input has for itself, as it may have a clamp or a connector.
_WINDINGS = frozenset({"inductor", "transformer"})

# Parts that may set an input's potential by themselves: an opto-coupler, another amplifier, a zener.
_DRIVING = frozenset({"integrated circuit", "other", "diode", "transistor", "switch", "relay", "connector"})

# Parts that make a voltage of what a rectifier delivers, or take it off the board.
_SMOOTHING = frozenset({"capacitor", "inductor", "connector", "battery"})


@dataclass(frozen=True, slots=True)
class SenseResistor:
    """A resistor that turns a current into the voltage an amplifier compares.

    near: its net towards the power path; far: the other one (ground, or the output when on the high side)
    """

    part: Part
    near: str
    far: str


@dataclass(frozen=True, slots=True)
class Reach:
    """What resistors alone join to a net.

    nets:     the nets passed through
    ends:     the nets of known potential, or of the power path, where the walk ended; a net with a
              connector is an end and is passed as well
    parts:    the resistive parts passed
    """

    nets: tuple[str, ...]
    ends: tuple[str, ...]
    parts: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Amplifier:
    """One error amplifier and its use: "voltage", "current", "signal", "unused" or "unmapped".

    outputs:   of a voltage amplifier, the nets that may be the output it senses; output: the one it is
    driven_by: of one that follows a signal, the parts or nets that set its inputs by other means than
               resistors from an output
    """

    number: int
    plus: str
    minus: str
    use: str
    output: str = ""
    outputs: tuple[str, ...] = ()
    sense: SenseResistor | None = None
    sensed_by: str = ""
    driven_by: tuple[str, ...] = ()


@dataclass(slots=True)
class AmplifierReader:
    """Reads the uses of a controller's error amplifiers off the circuit.

    output: the output net that the brief declares for the controller, or empty
    """

    circuit: Circuit
    known: Mapping[str, Potential]
    controller: Controller
    output: str = ""
    _reaches: dict[str, Reach] = field(default_factory=dict[str, Reach])

    def amplifiers(self) -> tuple[Amplifier, ...]:
        """Return the controller's error amplifiers in the order of their numbers."""
        return tuple(self._amplifier(number) for number in (1, 2))

    def _amplifier(self, number: int) -> Amplifier:
        plus = self.controller.net(f"amplifier {number} in+") or ""
        minus = self.controller.net(f"amplifier {number} in-") or ""
        if not plus or not minus:
            return Amplifier(number, plus, minus, "unmapped")
        sense = self._sense(plus, minus)
        if sense is not None:
            return Amplifier(number, plus, minus, "current", sense=sense)
        for net, sensed_by in ((plus, "in+"), (minus, "in-")):
            outputs = self._outputs(net)
            if outputs:
                output = outputs[0] if len(outputs) == 1 else ""
                return Amplifier(number, plus, minus, "voltage", output, outputs, sensed_by=sensed_by)
        drivers: tuple[str, ...] = ()
        if not self._is_ground(plus):  # with in+ at ground it is off, whatever is at in-
            drivers = tuple(dict.fromkeys((*self._drivers(plus, minus), *self._drivers(minus, minus))))
        return Amplifier(number, plus, minus, "signal" if drivers else "unused", driven_by=drivers)

    def _drivers(self, net: str, inverting: str) -> Iterator[str]:
        """Yield the parts that may drive an input, and the nets beyond its resistors that do.

        A rail counts only on an amplifier with a feedback path: one without may be tied off to it.
        """
        feedback, supply = self.controller.net("feedback"), self.controller.net("supply")
        reach = self.reach(net)
        for passed in reach.nets:
            parts = (connection.part for connection in self.circuit.connections(passed))
            if passed != feedback:
                yield from (p.reference for p in parts if self._is_driving(p))
        regulates = bool(feedback) and compensation(self.circuit, self.known, feedback, inverting) is not None
        for end in reach.ends:
            rail = end in self.known and self.known[end].origin not in ("ground", "reference")
            if (regulates and rail) or (end not in self.known and end not in (feedback, supply)):
                yield end

    def _is_driving(self, part: Part) -> bool:
        return self.circuit.kind(part) in _DRIVING and part.reference != self.controller.reference

    def reach(self, net: str) -> Reach:
        """Walk from `net` through resistive parts to where the potential is known or set by power parts."""
        if net not in self._reaches:
            self._reaches[net] = self._walk(net)
        return self._reaches[net]

    def _walk(self, start: str) -> Reach:
        nets: dict[str, None] = {}
        ends: dict[str, None] = {}
        parts: dict[str, None] = {}
        waiting = [start]
        while waiting:
            net = waiting.pop()
            if net in nets or (net in ends and not self._is_terminal(net)):
                continue
            if net in self.known or self._is_power(net, start):
                ends[net] = None
                continue
            if net != start and self._is_terminal(net):
                ends[net] = None  # an output, or the far end of a sense line: its resistors tell
            nets[net] = None
            for part in self._resistive(net):
                parts[part.reference] = None
                waiting.extend(self.circuit.other_nets(part, net))
        return Reach(tuple(nets), tuple(ends), tuple(parts))

    def _resistive(self, net: str) -> list[Part]:
        """Return the resistive parts on a net, current-sense resistors left out."""
        parts = (connection.part for connection in self.circuit.connections(net))
        return [p for p in parts if self.circuit.kind(p) in _RESISTIVE and not self._is_sense(p)]

    def _is_sense(self, part: Part) -> bool:
        value = self.circuit.value(part)
        limit = self.controller.profile.practices["sense-resistor"].maximum
        return (
            self.circuit.kind(part) == "resistor"
            and value is not None
            and limit is not None
            and 0 < value.spread.nominal <= limit
        )

    def _is_power(self, net: str, start: str) -> bool:
        """Tell whether a net is part of the power path; an input's own net only where it is the output."""
        power = _WINDINGS if net == start else _POWER
        return not power.isdisjoint(self._kinds(net)) or net == self.output

    def _is_terminal(self, net: str) -> bool:
        """Tell whether a connector is on a net of unknown potential."""
        return net not in self.known and any(
            self.circuit.kind(connection.part) == "connector" for connection in self.circuit.connections(net)
        )

    def _sense(self, plus: str, minus: str) -> SenseResistor | None:
        """Return the sense resistor whose ends the two inputs look at, or one that stands on ground."""
        nets = [net for start in (plus, minus) for net in (*self.reach(start).nets, *self.reach(start).ends)]
        for net in dict.fromkeys(nets):
            if self._is_ground(net):
                continue
            for connection in self.circuit.connections(net):
                if not self._is_sense(connection.part):
                    continue
                far = self.circuit.other_nets(connection.part, net)
                if far and (self._is_ground(far[0]) or far[0] in nets):
                    return self._oriented(connection.part, net, far[0])
        return None

    def _oriented(self, part: Part, one: str, other: str) -> SenseResistor:
        """Put the end of known potential, or the declared output, on the far side."""
        if one in self.known or one == self.output:
            return SenseResistor(part, other, one)
        return SenseResistor(part, one, other)

    def _outputs(self, net: str) -> tuple[str, ...]:
        """Return the nets that may be the converter's output, among those that a net's resistors reach."""
        ends = self.reach(net).ends
        if self.output:
            return (self.output,) if self.output in ends else ()
        supply = self.controller.net("supply")
        rails = [
            n for n in ends if n in self.known and self.known[n].origin in ("brief", "name") and n != supply
        ]
        unknown = [n for n in ends if n not in self.known and n != supply and not self._switching(n)]
        driven = [n for n in unknown if not self._pulses(n)]
        converted = [n for n in driven if self._is_power(n, "")]
        return tuple(rails or converted or driven)

    def _pulses(self, net: str) -> bool:
        """Tell whether a winding is rectified onto a net without a capacitor: a current signal."""
        parts = [connection.part for connection in self.circuit.connections(net)]
        diodes = [part for part in parts if self.circuit.kind(part) == "diode"]
        sources = {other for diode in diodes for other in self.circuit.other_nets(diode, net)}
        wound = any("transformer" in self._kinds(source) for source in sources)
        return wound and self._kinds(net).isdisjoint(_SMOOTHING)

    def _kinds(self, net: str) -> set[str]:
        return {self.circuit.kind(connection.part) for connection in self.circuit.connections(net)}

    def _switching(self, net: str) -> bool:
        roles = ("output 1 collector", "output 1 emitter", "output 2 collector", "output 2 emitter")
        return net in [self.controller.net(role) for role in roles]

    def _is_ground(self, net: str) -> bool:
        return net in self.known and self.known[net].origin == "ground"


def amplifier_for(amplifiers: Sequence[Amplifier], use: str) -> Amplifier | None:
    """Return the first amplifier of the given use, or None."""
    return next((amplifier for amplifier in amplifiers if amplifier.use == use), None)
