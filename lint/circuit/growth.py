"""Growing the network round a pin: through resistive parts until nets of known potential.

What each kind of part means to direct current stands in `meanings`. A part that linear analysis does not
cover is never passed over: it lands in `blocked` (the answer cannot be had), in `valueless` (its value is
missing), in `diodes` (whether they conduct is solved for) or in `switches` (taken as off, and said so).
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field

import numpy as np

from ...grammar.netlist import Part
from ..quantity import Spread, engineering, percent
from .controllers import Controller, ControllerPin
from .diodes import Diode, forward_drop, zener_voltage
from .graph import Circuit, Connection
from .meanings import MEANINGS, opaque
from .network import ControlledSource, CurrentSource, Element, Network, Resistor, Value
from .parts import defaults
from .potentials import Potential
from .states import Junction
from .worst_case import Parameter

GROUND = "\x00ground"  # the name of ground inside a network: no net of a file can have it

# Which figure of the profile flows into a pin, where it is not an amplifier's bias current.
_PIN_CURRENTS = {"dead time": "dead-time.bias-current", "supply": "supply.current"}

# Pins of a controller whose potential the converter's own switching sets.
_SWITCHING_ROLES = ("output 1 collector", "output 1 emitter", "output 2 collector", "output 2 emitter")


# Parts that draw no direct current.
_IDLE = frozenset({"capacitor", "test point", "coupling"})


@dataclass(frozen=True, slots=True)
class Blocked:
    """A net on which a part sits that linear analysis does not cover."""

    net: str
    part: str
    reason: str


@dataclass(slots=True)
class Growth:
    """A network as it grows from its seeds; `network()` hands it to the solver.

    stops: nets at which growth ends although their potential is not known (what the caller replaces by a
           free quantity or drives himself); nothing on them is called an obstacle
    empty_capacitors: capacitors hold no charge yet, and count as shorts
    unloaded: nets whose connectors are taken as drawing nothing, which is said
    conducting: transistors and switches that are on, and count as shorts between their main terminals
    """

    circuit: Circuit
    known: Mapping[str, Potential]
    controllers: Sequence[Controller]
    stops: frozenset[str] = frozenset()
    empty_capacitors: bool = False
    conducting: frozenset[str] = frozenset()
    unloaded: frozenset[str] = frozenset()
    elements: dict[str, Element] = field(default_factory=dict[str, Element])
    parameters: dict[str, Parameter] = field(default_factory=dict[str, Parameter])
    potentials: dict[str, Value] = field(default_factory=dict[str, Value])
    assumptions: dict[str, None] = field(default_factory=dict[str, None])
    blocked: list[Blocked] = field(default_factory=list[Blocked])
    valueless: dict[str, str] = field(default_factory=dict[str, str])
    diodes: list[Diode] = field(default_factory=list[Diode])
    switches: dict[str, None] = field(default_factory=dict[str, None])
    parts: dict[str, None] = field(default_factory=dict[str, None])
    nets: dict[str, None] = field(default_factory=dict[str, None])
    _waiting: list[str] = field(default_factory=list[str])

    def __post_init__(self) -> None:
        """Put ground in: bias currents return there."""
        self.potentials[GROUND] = lambda sample: np.zeros(1)

    def grow(self, *seeds: str, from_known: bool = False) -> Growth:
        """Grow from `seeds`; a seed of known potential, or a stop, is grown from only when `from_known`."""
        for seed in seeds:
            self.enter(seed, expand=from_known)
        while self._waiting:
            net = self._waiting.pop()
            for connection in self.circuit.connections(net):
                self._take(connection, net)
        return self

    def network(self) -> Network:
        """Return the network grown so far, ready for the solver."""
        return Network(tuple(self.elements.values()), dict(self.potentials))

    def untold(self, net: str) -> tuple[str, ...]:
        """Return what is on the net, draws current, and has no part in the network: each as a sentence."""
        told = {*self.parts, *(controller.reference for controller in self.controllers)}
        parts = {c.part.reference: self.circuit.kind(c.part) for c in self.circuit.connections(net)}
        return tuple(
            f"what {reference} ({kind}) draws from {net} is not known"
            for reference, kind in parts.items()
            if reference not in told and kind not in _IDLE
        )

    def junctions(self) -> tuple[Junction, ...]:
        """Return the diodes on the network as junctions, their drops among the parameters."""
        return tuple(self._junction(diode) for diode in self.diodes)

    def _junction(self, diode: Diode) -> Junction:
        drop = forward_drop()
        name = f"{diode.part} forward drop"
        value = self.add_parameter(Parameter(name, drop.minimum, drop.nominal, drop.maximum))
        return Junction(diode.part, diode.anode, diode.cathode, value, self._breakdown(diode))

    def _breakdown(self, diode: Diode) -> Value | None:
        """Return the zener voltage that the part's value or model states, None for an ordinary diode."""
        part = self.circuit.parts[diode.part]
        volts = zener_voltage(part) if self.circuit.kind(part) == "diode" else None
        if volts is None:
            return None  # the base of a transistor is a junction as well, and its text is not about it
        ratio = float(defaults()["tolerance"]["zener"]["ratio"])
        self.assume(f"{diode.part}: {engineering(volts, 'V')} ±{percent(ratio)} zener assumed")
        name = f"{diode.part} zener voltage"
        return self.add_parameter(Parameter(name, volts * (1 - ratio), volts, volts * (1 + ratio)))

    def add_parameter(self, parameter: Parameter) -> Value:
        """Register something that varies and return how its value is read from a sample."""
        self.parameters.setdefault(parameter.name, parameter)
        name = parameter.name
        return lambda sample: sample[name]

    def assume(self, *sentences: str) -> None:
        """Note what was taken for granted."""
        self.assumptions.update(dict.fromkeys(sentence for sentence in sentences if sentence))

    def enter(self, net: str, *, expand: bool = False) -> None:
        """Take a net into the network, once: known ones end the growth, others go on the waiting list."""
        if not net or (net in self.nets and not expand):
            return
        self.nets[net] = None
        potential = self.known.get(net)
        if potential is not None:
            self.potentials[net] = self.add_parameter(potential.parameter)
            self.assume(potential.assumption)
        if expand or (potential is None and net not in self.stops):
            self._waiting.append(net)

    def _take(self, connection: Connection, net: str) -> None:
        part = connection.part
        for controller in self.controllers:
            if controller.reference == part.reference:
                self._controller_pin(controller, connection, net)
                return
        meaning = MEANINGS.get(self.circuit.kind(part), opaque)
        meaning(self, part, net)

    def _controller_pin(self, controller: Controller, connection: Connection, net: str) -> None:
        role = controller.role_of(connection.index)
        if role is None or role in ("ground", "reference", "feedback"):
            return
        pin = controller.pins[role]
        if role in (*_SWITCHING_ROLES, "timing resistor", "timing capacitor"):
            if net not in self.known:
                self.block(net, part=controller.part, reason=f"{pin.name} of {controller.reference} sets it")
            return
        self._pin_current(controller, pin, net)

    def _pin_current(self, controller: Controller, pin: ControllerPin, net: str) -> None:
        """Let the current that flows into a controller's pin load the net."""
        if pin.role == "output control":
            self._output_control(controller, net)
            return
        figure_name = _PIN_CURRENTS.get(pin.role, "amplifier.bias-current")
        spread = controller.profile.figure(figure_name).spread()
        name = f"{controller.reference} {pin.name} current"
        value = self.add_parameter(Parameter(name, spread.minimum, spread.nominal, spread.maximum))
        self.add(CurrentSource(name, net, GROUND, value))

    def _output_control(self, controller: Controller, net: str) -> None:
        """Let the output-control pin load the net: its current is told at the reference, and follows it."""
        current = controller.profile.figure("output-control.current").spread()
        reference = self._reference(controller)
        name = f"{controller.reference} {controller.pins['output control'].name} current"
        ends = (
            current.minimum / reference.maximum,
            current.nominal / reference.nominal,
            current.maximum / reference.maximum,
        )
        value = self.add_parameter(Parameter(name, *ends))
        self.add(ControlledSource(name, net, GROUND, net, GROUND, value, "current"))

    def _reference(self, controller: Controller) -> Spread:
        """Return the reference's voltage: as the board has it, else as it is published."""
        potential = self.known.get(controller.net("reference") or "")
        if potential is not None and potential.origin == "reference" and potential.spread.maximum > 0:
            return potential.spread  # without a supply it is none, and the pin draws as published
        return controller.profile.figure("reference.voltage").spread()

    def block(self, net: str, part: Part, reason: str) -> None:
        """Note that a part keeps a net's potential from being computed."""
        blocked = Blocked(net, part.reference, reason)
        if net not in self.known and net not in self.stops and blocked not in self.blocked:
            self.blocked.append(blocked)

    def add(self, element: Element) -> None:
        """Put an element in, once; a resistor with both ends on one net changes nothing and stays out."""
        if not isinstance(element, Resistor) or element.a != element.b:
            self.elements.setdefault(element.name, element)

    def use(self, part: Part) -> None:
        """Note that a part takes part in the answer."""
        self.parts[part.reference] = None

    def follow(self, part: Part) -> None:
        """Go on with every net that the part is on."""
        for pin in part.pins:
            self.enter(pin.net)

    def part_value(self, part: Part) -> Value | None:
        """Return the part's value as something that varies; one without goes to `valueless`."""
        value = self.circuit.value(part)
        if value is None:
            self.valueless[part.reference] = self.circuit.reader.value_problem(part)
            return None
        self.assume(*value.assumptions)
        s = value.spread
        return self.add_parameter(
            Parameter(part.reference, s.minimum, s.nominal, s.maximum, random=value.random)
        )
