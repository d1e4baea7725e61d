"""A network as it is handed to the solver: elements, nets of known potential, and closed loops.

A *free quantity* may take the place of a source: the output voltage, the load current, with one *condition*
each that settles it, such as "the amplifier's inputs are equal". That is the nullor of network theory.

Every value is an array of shape (samples,), in volts, amperes and ohms, or a plain float that all share.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import TypeAlias

from .linear import Array

Sample: TypeAlias = Mapping[str, Array]
Value: TypeAlias = Callable[[Sample], Array]

# What the form of the equations depends on, to be compared and looked up.
Form: TypeAlias = tuple[object, ...]


@dataclass(frozen=True, slots=True)
class Resistor:
    """A resistance between two nets; 0 ohm is allowed (a short, an inductor, the end of a trimmer)."""

    name: str
    a: str
    b: str
    resistance: Value
    may_be_zero: bool = False

    @property
    def value(self) -> Value:
        """Return what it is worth."""
        return self.resistance

    @property
    def form(self) -> Form:
        """Return all but what it is worth."""
        return Resistor, self.name, self.a, self.b, self.may_be_zero


@dataclass(frozen=True, slots=True)
class VoltageSource:
    """Holds `a` above `b` by a voltage."""

    name: str
    a: str
    b: str
    voltage: Value

    @property
    def value(self) -> Value:
        """Return what it is worth."""
        return self.voltage

    @property
    def form(self) -> Form:
        """Return all but what it is worth."""
        return VoltageSource, self.name, self.a, self.b


@dataclass(frozen=True, slots=True)
class CurrentSource:
    """Drives a current out of net `a`, through itself, into net `b`."""

    name: str
    a: str
    b: str
    current: Value

    @property
    def value(self) -> Value:
        """Return what it is worth."""
        return self.current

    @property
    def form(self) -> Form:
        """Return all but what it is worth."""
        return CurrentSource, self.name, self.a, self.b


@dataclass(frozen=True, slots=True)
class ControlledSource:
    """A source of constant gain, steered by the voltage between two nets.

    kind "voltage": holds `a` above `b` by gain times the control (no unit); "current": drives gain times
    the control out of `a` into `b` (siemens).
    """

    name: str
    a: str
    b: str
    control_a: str
    control_b: str
    gain: Value
    kind: str

    @property
    def value(self) -> Value:
        """Return what it is worth."""
        return self.gain

    @property
    def form(self) -> Form:
        """Return all but what it is worth."""
        return ControlledSource, self.name, self.a, self.b, self.control_a, self.control_b, self.kind


Element: TypeAlias = Resistor | VoltageSource | CurrentSource | ControlledSource


@dataclass(frozen=True, slots=True)
class FreePotential:
    """The potential of `net` is what the conditions make it (an output voltage in closed loop)."""

    net: str


@dataclass(frozen=True, slots=True)
class FreeCurrent:
    """A current out of net `a` into net `b` is what the conditions make it (a load current)."""

    name: str
    a: str
    b: str


Free: TypeAlias = FreePotential | FreeCurrent


@dataclass(frozen=True, slots=True)
class Condition:
    """Net `a` stands above net `b` by `difference`."""

    a: str
    b: str
    difference: Value


@dataclass(frozen=True, slots=True)
class Network:
    """A network ready to solve: its elements, the nets whose potential is known, and the closed loops.

    Every net that is neither known nor free needs a conductive path to one that is: see `floating`.
    """

    elements: tuple[Element, ...]
    known: Mapping[str, Value]
    free: tuple[Free, ...] = ()
    conditions: tuple[Condition, ...] = ()

    def values(self) -> list[Value]:
        """Return every value of the network: of known potentials, of elements, of conditions."""
        elements = [element.value for element in self.elements]
        return [*self.known.values(), *elements, *(condition.difference for condition in self.conditions)]

    def form(self) -> Form:
        """Return the network without its values: what stands where, and which potentials are known."""
        conditions = [(condition.a, condition.b) for condition in self.conditions]
        return (*self.known, *[element.form for element in self.elements], *self.free, *conditions)

    def nets(self) -> list[str]:
        """Return every net of the network, in order of appearance."""
        seen: dict[str, None] = {}
        for element in self.elements:
            seen.update(dict.fromkeys(_terminals(element)))
        for condition in self.conditions:
            seen.update(dict.fromkeys((condition.a, condition.b)))
        return list(seen)

    def needed(self) -> set[str]:
        """Return the nets that cannot do without a path: they steer something, or a current is driven in."""
        sources = [e for e in self.elements if isinstance(e, CurrentSource | ControlledSource)]
        nets = {net for source in sources for net in _terminals(source)}
        return nets | {net for condition in self.conditions for net in (condition.a, condition.b)}

    def floating(self) -> set[str]:
        """Return the nets that no conductive path joins to a known or free potential."""
        return set(self.nets()) - self._reached()

    def has_path(self, net: str) -> bool:
        """Tell whether a conductive path joins a net, of this network or not, to a known or free one."""
        return net in self._reached()

    def _reached(self) -> set[str]:
        neighbours: dict[str, set[str]] = {}
        for element in self.elements:
            conducts = isinstance(element, Resistor | VoltageSource) or (
                isinstance(element, ControlledSource) and element.kind == "voltage"
            )
            if conducts:
                neighbours.setdefault(element.a, set()).add(element.b)
                neighbours.setdefault(element.b, set()).add(element.a)
        reached: set[str] = set()
        waiting = [*self.known, *(free.net for free in self.free if isinstance(free, FreePotential))]
        while waiting:
            net = waiting.pop()
            if net not in reached:
                reached.add(net)
                waiting.extend(neighbours.get(net, ()))
        return reached


def _terminals(element: Element) -> tuple[str, ...]:
    if isinstance(element, ControlledSource):
        return (element.a, element.b, element.control_a, element.control_b)
    return (element.a, element.b)
