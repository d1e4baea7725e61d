"""Growing the network round a pin: through resistive parts until nets of known potential.

What a part means to direct current is one small function a kind, in the table `_MEANINGS`. A part that
linear analysis does not cover is never passed over: it lands in `blocked` (the answer cannot be had), in
`valueless` (its value is missing), in `diodes` (whether they conduct is solved for) or in `switches`
(taken as off, and said so).
"""

from __future__ import annotations

import re
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from math import isfinite

import numpy as np

from ...grammar.netlist import Part, Pin
from ..quantity import Spread, engineering, percent
from .alternating import fed_by
from .controllers import Controller, ControllerPin
from .graph import Circuit, Connection
from .parts import defaults
from .potentials import Potential
from .solver import (
    Array,
    ControlledSource,
    CurrentSource,
    Element,
    Network,
    Resistor,
    Sample,
    Value,
    VoltageSource,
)
from .states import Junction
from .transistors import read_transistor
from .worst_case import Parameter, Variation

GROUND = "\x00ground"  # the name of ground inside a network: no net of a file can have it

# Which figure of the profile flows into a pin, where it is not an amplifier's bias current.
_PIN_CURRENTS = {"dead time": "dead-time.bias-current", "supply": "supply.current"}

# Pins of a controller whose potential the converter's own switching sets.
_SWITCHING_ROLES = ("output 1 collector", "output 1 emitter", "output 2 collector", "output 2 emitter")


@dataclass(frozen=True, slots=True)
class Blocked:
    """A net on which a part sits that linear analysis does not cover."""

    net: str
    part: str
    reason: str


@dataclass(frozen=True, slots=True)
class Diode:
    """A diode on the network: whether it conducts is for the solution to tell."""

    part: str
    anode: str
    cathode: str


@dataclass(slots=True)
class Growth:
    """A network as it grows from its seeds; `network()` hands it to the solver.

    stops: nets at which growth ends although their potential is not known (what the caller replaces by a
           free quantity or drives himself); nothing on them is called an obstacle
    empty_capacitors: capacitors hold no charge yet, and count as shorts
    conducting: transistors and switches that are on, and count as shorts between their main terminals
    """

    circuit: Circuit
    known: Mapping[str, Potential]
    controllers: Sequence[Controller]
    stops: frozenset[str] = frozenset()
    empty_capacitors: bool = False
    conducting: frozenset[str] = frozenset()
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

    def junctions(self) -> tuple[Junction, ...]:
        """Return the diodes on the network as junctions, their drops among the parameters."""
        return tuple(self._junction(diode) for diode in self.diodes)

    def _junction(self, diode: Diode) -> Junction:
        drop = _spread_of("forward-drop")
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
        meaning = _MEANINGS.get(self.circuit.kind(part), _opaque)
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


# Below this a resistance is solved by its current as a short is: its conductance would drown all others.
_SMALL = 1.0


def _ends(part: Part) -> tuple[str, str]:
    """Return the nets of a two-terminal part."""
    first, second = part.pins
    return _terminal(part, first), _terminal(part, second)


def _terminal(part: Part, pin: Pin) -> str:
    """Return a pin's net; an unconnected pin is alone on a net that nothing else is on."""
    return pin.net or f"\x00{part.reference} pin {pin.number}"


def _resistor(growth: Growth, part: Part, net: str) -> None:
    if len(part.pins) != 2:
        _opaque(growth, part, net)
        return
    value = growth.part_value(part)
    if value is not None:
        growth.use(part)
        small = growth.parameters[part.reference].low < _SMALL
        growth.add(Resistor(part.reference, *_ends(part), value, may_be_zero=small))
        growth.follow(part)


def _trimmer(growth: Growth, part: Part, net: str) -> None:
    """Put in a trimmer as two resistances whose sum is its value; the wiper travels end to end."""
    value = growth.part_value(part)
    if value is None:
        return
    growth.use(part)
    name = f"{part.reference} travel"
    travel = growth.add_parameter(Parameter(name, 0.0, 0.5, 1.0, Variation.TRAVEL, part.reference))
    top, wiper, bottom = (_terminal(part, pin) for pin in in_trimmer_order(part))
    growth.add(
        Resistor(f"{part.reference} upper", top, wiper, _share(value, travel, rest=True), may_be_zero=True)
    )
    growth.add(Resistor(f"{part.reference} lower", wiper, bottom, _share(value, travel), may_be_zero=True))
    growth.follow(part)


_WIPER_NAMES = frozenset({"w", "wiper", "s", "slider"})


def in_trimmer_order(part: Part) -> tuple[Pin, Pin, Pin]:
    """Return a trimmer's pins as top, wiper, bottom.

    The wiper is the pin named so, else the one numbered 2, else the middle one as listed (`RV1 top wiper
    bottom 10k`).
    """
    pins = list(part.pins)
    named = [pin for pin in pins if pin.name.casefold() in _WIPER_NAMES]
    numbered = [pin for pin in pins if pin.number == "2"]
    wiper = (named or numbered or pins[1:2])[0]
    pins.remove(wiper)
    return pins[0], wiper, pins[1]


def _share(value: Value, travel: Value, *, rest: bool = False) -> Value:
    def resistance(sample: Sample) -> Array:
        share = travel(sample)
        return value(sample) * (1.0 - share if rest else share)

    return resistance


def _short(growth: Growth, part: Part, net: str) -> None:
    """Take an inductor, fuse or jumper as a short: direct current sees no more than that."""
    if len(part.pins) != 2:
        _opaque(growth, part, net)
        return
    growth.use(part)
    growth.add(Resistor(part.reference, *_ends(part), lambda _: np.zeros(1), may_be_zero=True))
    growth.follow(part)


def _open(growth: Growth, part: Part, net: str) -> None:
    """Take a test point or coupling as open: no direct current flows in it."""


def _capacitor(growth: Growth, part: Part, net: str) -> None:
    """Take a capacitor as open, or as a short while it holds no charge."""
    if growth.empty_capacitors:
        _short(growth, part, net)


def _diode(growth: Growth, part: Part, net: str) -> None:
    if len(part.pins) != 2:
        _opaque(growth, part, net)
        return
    anode, cathode = diode_nets(part)
    diode = Diode(part.reference, anode, cathode)
    if (reason := _untold(growth, part)) != "":
        growth.block(net, part, reason)
    elif diode not in growth.diodes:
        growth.diodes.append(diode)
        growth.use(part)
        growth.follow(part)


def _untold(growth: Growth, part: Part) -> str:
    """Return why a diode cannot be solved for, empty where it can."""
    source = fed_by(growth.circuit, growth.known, growth.controllers, part)
    if source:
        return f"{part.reference} rectifies what {source} couples in"
    if _ZENER_REFERENCE.match(part.reference.rpartition("/")[2]) and zener_voltage(part) is None:
        return f"{part.reference} is a zener by its name, and nothing tells its voltage"
    return ""


# Reference designators that say zener (common practice, no source).
_ZENER_REFERENCE = re.compile(r"(?:ZD|DZ|VZ|Z)\d", re.IGNORECASE)

_VOLTS = r"(\d{1,3})(?:V(\d{1,2})|\.(\d{1,2})V?|V)?"

# A zener says so in words with its voltage (zener 5V1, TVS 16V, DZ12), or is a voltage and a power alone (15V
# 1W). A voltage beside a current is the reverse rating of a rectifier.
_NAMED_ZENER = re.compile(rf"(?<![A-Z])(?:ZENER|TVS|SUPPRESSOR|D?Z)[ _-]?{_VOLTS}(?![0-9A-Z])", re.IGNORECASE)
_BARE_ZENER = re.compile(r"(\d{1,3})(?:V(\d{1,2})|\.(\d{1,2})V|V)(?:[ ,/]*[0-9./]+ ?m?W)?", re.IGNORECASE)


def zener_voltage(part: Part) -> float | None:
    """Return the zener voltage (V) that a diode's value or model states, None where neither does."""
    for text in (part.value.strip(), part.model.strip()):
        match = _NAMED_ZENER.search(text) or _BARE_ZENER.fullmatch(text)
        if match is not None:
            return float(f"{match[1]}.{match[2] or match[3] or '0'}")
    return None


def _spread_of(name: str) -> Spread:
    row = defaults()["junction"][name]
    return Spread(float(row["minimum"]), float(row["typical"]), float(row["maximum"]), "V")


def diode_nets(part: Part) -> tuple[str, str]:
    """Return the anode's and the cathode's net: by pin name where given, else anode first as in a list."""
    first, second = part.pins
    if first.name.casefold() in ("k", "c", "cathode") or second.name.casefold() in ("a", "anode"):
        return second.net, first.net
    return first.net, second.net


def _switch(growth: Growth, part: Part, net: str) -> None:
    """Take a transistor or switch as off, and say so: when it is on, the net is somewhere else.

    Where it shares the net with a winding it is the converter's power switch, and the net's potential is
    the converter's doing.
    """
    if part.reference in growth.conducting:
        _conduct(growth, part)
        return
    neighbours = (growth.circuit.kind(connection.part) for connection in growth.circuit.connections(net))
    if _WINDINGS.isdisjoint(neighbours):
        growth.switches[part.reference] = None
    else:
        growth.block(net, part, f"{part.reference} switches it")


_WINDINGS = frozenset({"inductor", "transformer", "relay"})


def _conduct(growth: Growth, part: Part) -> None:
    """Put in a transistor or switch that is on: next to nothing drops across it."""
    transistor = read_transistor(growth.circuit, growth.known, part)
    ends = transistor.mains if transistor is not None else tuple(pin.net for pin in part.pins[:2])
    growth.use(part)
    growth.add(Resistor(part.reference, ends[0], ends[1], lambda _: np.zeros(1), may_be_zero=True))
    for net in ends:
        growth.enter(net)


def _voltage_source(growth: Growth, part: Part, net: str) -> None:
    if len(part.pins) != 2:
        _opaque(growth, part, net)
        return
    value = growth.part_value(part)
    if value is not None:
        growth.use(part)
        growth.add(VoltageSource(part.reference, *_ends(part), value))
        growth.follow(part)


def _current_source(growth: Growth, part: Part, net: str) -> None:
    if len(part.pins) != 2:
        _opaque(growth, part, net)
        return
    value = growth.part_value(part)
    if value is not None:
        growth.use(part)
        growth.add(CurrentSource(part.reference, *_ends(part), value))
        growth.follow(part)


def _controlled_source(growth: Growth, part: Part, net: str) -> None:
    """Put in an E or G source of constant gain; any other is opaque."""
    gain = _constant(part.value)
    if part.element not in ("E", "G") or len(part.pins) != 4 or gain is None:
        _opaque(growth, part, net)
        return
    growth.use(part)
    a, b, control_a, control_b = (_terminal(part, pin) for pin in part.pins)
    kind = "voltage" if part.element == "E" else "current"
    growth.add(ControlledSource(part.reference, a, b, control_a, control_b, lambda _: np.full(1, gain), kind))
    growth.follow(part)


def _constant(text: str) -> float | None:
    try:
        number = float(text)
    except ValueError:
        return None
    return number if isfinite(number) else None


def _opaque(growth: Growth, part: Part, net: str) -> None:
    growth.block(net, part, f"{part.reference} ({growth.circuit.kind(part)}) may feed or load it")


_MEANINGS: dict[str, Callable[[Growth, Part, str], None]] = {
    "resistor": _resistor,
    "trimmer": _trimmer,
    "capacitor": _capacitor,
    "coupling": _open,
    "test point": _open,
    "inductor": _short,
    "fuse": _short,
    "jumper": _short,
    "diode": _diode,
    "transistor": _switch,
    "switch": _switch,
    "voltage source": _voltage_source,
    "battery": _voltage_source,
    "current source": _current_source,
    "controlled source": _controlled_source,
}
