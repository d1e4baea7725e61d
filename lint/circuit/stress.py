"""What resistors and capacitors stand: the voltage across each, and the power in a resistor.

Every network is solved once, over the ranges of the potentials that bound it. A part between two networks
sees the difference of two answers that are taken for independent, which bounds it.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass, field, replace

import numpy as np

from ...grammar.netlist import Part
from ..estimate import Estimate, Unsolved
from ..quantity import Spread, engineering
from .answers import estimate
from .controllers import Controller
from .graph import Circuit
from .growth import Growth
from .linear import Array
from .network import Resistor
from .potentials import Potential
from .states import Probe

# Beyond so many networks on the rails of a large board the rest is left unsolved, and named.
_MOST_NETWORKS = 200

# In V and A: less is the rounding of a zero.
_NOTHING = 1e-12

_RESISTORS = frozenset({"resistor", "trimmer"})


@dataclass(frozen=True, slots=True)
class Stress:
    """What one part stands.

    voltage: of its first net over its second (V)
    power:   in a resistor (W); in a trimmer, what its whole track would take at the greatest current that
             any piece of it carries, for a track stands no more current in a piece than in the whole
    pulsed:  it stands this only while an output of the controller conducts
    """

    part: Part
    voltage: Estimate
    power: Estimate | None = None
    pulsed: bool = False


@dataclass(slots=True)
class Stresses:
    """What the parts stand by reference, and why the others' stress is not known."""

    of: dict[str, Stress] = field(default_factory=dict[str, Stress])
    unsolved: dict[str, Unsolved] = field(default_factory=dict[str, Unsolved])


def stresses(
    circuit: Circuit,
    known: Mapping[str, Potential],
    controllers: Sequence[Controller],
    conducting: Iterable[Growth] = (),
) -> Stresses:
    """Return what the parts round the controllers and between nets of known potential stand.

    known:      potentials with the ranges over which the converter moves them
    conducting: the networks round the controllers' outputs while these conduct
    """
    reader = _StressReader(circuit, known, controllers)
    found = reader.read()
    for growth in conducting:
        reader.read_pulsed(growth)
    return Stresses(dict(sorted(found.of.items(), key=lambda item: item[1].part.place)), found.unsolved)


@dataclass(slots=True)
class _StressReader:
    circuit: Circuit
    known: Mapping[str, Potential]
    controllers: Sequence[Controller]
    _found: Stresses = field(default_factory=Stresses)
    _voltages: dict[str, Estimate | Unsolved] = field(default_factory=dict[str, Estimate | Unsolved])

    def read(self) -> Stresses:
        for number, growth in enumerate(self._networks()):
            if number < _MOST_NETWORKS:
                self._solve(growth)
            else:
                self._leave(growth, Unsolved(f"more than {_MOST_NETWORKS} networks"))
        for part in self._parts_on(net for net in self.known if not self._is_ground(net)):
            self._between_known(part)
        for part in self._parts_on(self._voltages):
            self._between_networks(part)
        return self._found

    # ------------------------------------------------------------------------------------ which networks

    def _networks(self) -> Iterator[Growth]:
        """Yield the networks at the controllers' pins and behind the resistors of the rails."""
        seen: set[str] = set()
        for net in self._seeds():
            if net not in seen and net not in self.known:
                growth = Growth(self.circuit, self.known, self.controllers).grow(net)
                seen |= growth.nets.keys()
                yield growth

    def _seeds(self) -> Iterator[str]:
        for controller in self.controllers:
            yield from (pin.net for pin in controller.pins.values() if pin.net)
        for net, potential in self.known.items():
            # A rail that only its name tells may belong to any corner of a large board.
            if potential.origin not in ("ground", "name"):
                for part in self._parts_on([net]):
                    if self.circuit.kind(part) in _RESISTORS:
                        yield from self.circuit.other_nets(part, net)

    def _parts_on(self, nets: Iterable[str]) -> list[Part]:
        found: dict[str, Part] = {}
        for net in nets:
            for connection in self.circuit.connections(net):
                found.setdefault(connection.part.reference, connection.part)
        return list(found.values())

    def _is_ground(self, net: str) -> bool:
        return net in self.known and self.known[net].origin == "ground"

    # ------------------------------------------------------------------------------------ one network

    def _solve(self, growth: Growth) -> None:
        """Solve a network for the voltage of its nets, and for what its resistors and capacitors stand."""
        network = growth.network()
        solved = (set(network.nets()) | growth.potentials.keys()) - network.floating()
        probes = _resistor_probes(growth, solved)
        for net in self._own_nets(growth):
            if net in solved:
                probes[f"at {net}"] = (_potential(net), "V")
            else:
                self._voltages[net] = Unsolved(f"net {net} has no direct-current path", nets=(net,))
        for part in self._parts_on(self._own_nets(growth)):
            if self._is_capacitor(part) and solved.issuperset(_nets(part)):
                probes[f"across {part.reference}"] = (_across(*_nets(part)), "V")
        answer = estimate(growth, probes)
        if isinstance(answer, Unsolved):
            self._leave(growth, answer)
            return
        self._voltages |= {net: answer[f"at {net}"] for net in self._own_nets(growth) if net in solved}
        self._keep(growth, answer)

    def read_pulsed(self, growth: Growth) -> None:
        """Add the resistors that carry current while an output conducts; a bound, for the mean is less."""
        solved = set(growth.network().nets()) - growth.network().floating()
        answer = estimate(growth, _resistor_probes(growth, solved))
        if isinstance(answer, Unsolved):
            return
        for reference in growth.parts:
            before = self._found.of.get(reference)
            if f"through {reference}" not in answer or (before is not None and not before.pulsed):
                continue
            voltage, current = answer[f"across {reference}"], answer[f"through {reference}"]
            power = _product(voltage, current)
            # One without direct current carries the charge of a gate: its heat is not told by this.
            worse = (
                before is None or before.power is None or power.spread.maximum > before.power.spread.maximum
            )
            if power.spread.maximum > 0 and worse:
                self._found.of[reference] = Stress(self.circuit.parts[reference], voltage, power, pulsed=True)
                self._found.unsolved.pop(reference, None)

    def _own_nets(self, growth: Growth) -> list[str]:
        return [net for net in growth.nets if net not in self.known]

    def _is_capacitor(self, part: Part) -> bool:
        return self.circuit.kind(part) == "capacitor" and len(part.pins) == 2

    def _keep(self, growth: Growth, answer: Mapping[str, Estimate]) -> None:
        for reference in growth.parts:
            part = self.circuit.parts[reference]
            if self.circuit.kind(part) == "trimmer":
                self._keep_trimmer(part, answer)
            elif f"through {reference}" in answer:
                voltage, current = answer[f"across {reference}"], answer[f"through {reference}"]
                self._found.of[reference] = Stress(part, voltage, _product(voltage, current))
        for name, found in answer.items():
            reference = name.removeprefix("across ")
            part = self.circuit.parts.get(reference)
            if part is not None and self.circuit.kind(part) == "capacitor":
                self._found.of[reference] = Stress(part, found)

    def _keep_trimmer(self, part: Part, answer: Mapping[str, Estimate]) -> None:
        names = (f"through {part.reference} {piece}" for piece in ("upper", "lower"))
        currents = [answer[name] for name in names if name in answer]
        resistance = self.circuit.value(part)
        if currents and resistance is not None:
            worst = max(currents, key=lambda current: _size(current.spread).maximum)
            across = replace(
                worst,
                spread=_times(worst.spread, resistance.spread, "V"),
                statistical=_times(worst.statistical, resistance.spread, "V"),
            )
            self._found.of[part.reference] = Stress(part, across, _product(across, worst))

    def _leave(self, growth: Growth, why: Unsolved) -> None:
        """Note that a network is not solved."""
        nets = self._own_nets(growth)
        self._voltages |= dict.fromkeys(nets, why)
        for part in self._parts_on(nets):
            if self.circuit.kind(part) in _RESISTORS:
                self._found.unsolved[part.reference] = why

    # ------------------------------------------------------------------------------------ between networks

    def _between_known(self, part: Part) -> None:
        """Take a part with both ends on nets of known potential; another is asked of its network."""
        if len(part.pins) != 2 or not all(net in self.known for net in _nets(part)):
            return
        kind, value = self.circuit.kind(part), self.circuit.value(part)
        voltage = _difference(*(self._known(net) for net in _nets(part)))
        if kind == "capacitor":
            self._found.of[part.reference] = Stress(part, voltage)
        elif kind == "resistor" and value is not None and value.spread.minimum > 0:
            self._found.of[part.reference] = Stress(part, voltage, _over(voltage, value.spread))

    def _known(self, net: str) -> Estimate:
        potential = self.known[net]
        assumptions = (potential.assumption,) if potential.assumption else ()
        return Estimate(potential.spread, potential.spread, nets=(net,), assumptions=assumptions)

    def _between_networks(self, part: Part) -> None:
        """Take a capacitor whose ends are on two networks, or on one and on a rail apart from it."""
        if part.reference in self._found.of or not self._is_capacitor(part):
            return
        ends = [self._anywhere(net) for net in _nets(part)]
        obstacles = [end for end in ends if isinstance(end, Unsolved)]
        if obstacles:
            self._found.unsolved[part.reference] = obstacles[0]
            return
        first, second = (end for end in ends if isinstance(end, Estimate))
        self._found.of[part.reference] = Stress(part, _difference(first, second))

    def _anywhere(self, net: str) -> Estimate | Unsolved:
        if net in self.known:
            return self._known(net)
        return self._voltages.get(net, Unsolved(f"net {net} has no known potential", nets=(net,)))


def _nets(part: Part) -> tuple[str, str]:
    first, second = part.pins
    return first.net, second.net


def _resistor_probes(growth: Growth, solved: set[str]) -> dict[str, tuple[Probe, str]]:
    """Return the probes for voltage and current of the resistors that stand between solved nets."""
    probes: dict[str, tuple[Probe, str]] = {}
    for element in growth.elements.values():
        if isinstance(element, Resistor) and solved.issuperset((element.a, element.b)):
            probes[f"across {element.name}"] = (_across(element.a, element.b), "V")
            probes[f"through {element.name}"] = (_through(element), "A")
    return probes


def _potential(net: str) -> Probe:
    return lambda solution: solution.voltage(net)


def _across(first: str, second: str) -> Probe:
    return lambda solution: _without_rounding(solution.voltage(first, second))


def _through(resistor: Resistor) -> Probe:
    return lambda solution: _without_rounding(solution.current(resistor))


def _without_rounding(values: Array) -> Array:
    """Return the values, a nothing as nothing: in a resistor that leads nowhere there is only rounding."""
    return np.where(np.abs(values) < _NOTHING, 0.0, values)


def _size(spread: Spread) -> Spread:
    """Return what a quantity measures whatever its sign."""
    ends = sorted((abs(spread.minimum), abs(spread.maximum)))
    least = 0.0 if spread.minimum <= 0 <= spread.maximum else ends[0]
    return Spread(least, abs(spread.nominal), ends[1], spread.unit)


def _times(one: Spread, other: Spread, unit: str) -> Spread:
    a, b = _size(one), _size(other)
    return Spread(a.minimum * b.minimum, a.nominal * b.nominal, a.maximum * b.maximum, unit)


def _product(voltage: Estimate, current: Estimate) -> Estimate:
    """Return the power of a voltage and a current that grow together: it bounds that of any unit."""
    most = (_size(voltage.spread).maximum, _size(current.spread).maximum)
    return replace(
        voltage,
        spread=_times(voltage.spread, current.spread, "W"),
        statistical=_times(voltage.statistical, current.statistical, "W"),
        formula=f"{engineering(most[0], 'V')} × {engineering(most[1], 'A')}",
    )


def _over(voltage: Estimate, resistance: Spread) -> Estimate:
    """Return the power of a voltage over a resistance."""

    def power(spread: Spread) -> Spread:
        v = _size(spread)
        ends = (v.minimum**2 / resistance.maximum, v.nominal**2 / resistance.nominal)
        return Spread(*ends, v.maximum**2 / resistance.minimum, "W")

    most = _size(voltage.spread).maximum
    return replace(
        voltage,
        spread=power(voltage.spread),
        statistical=power(voltage.statistical),
        formula=f"({engineering(most, 'V')})² / {engineering(resistance.minimum, 'ohm')}",
    )


def _difference(first: Estimate, second: Estimate) -> Estimate:
    """Return by how much one stands above the other, the two taken for independent."""

    def less(one: Spread, other: Spread) -> Spread:
        return Spread(
            one.minimum - other.maximum, one.nominal - other.nominal, one.maximum - other.minimum, "V"
        )

    return Estimate(
        spread=less(first.spread, second.spread),
        statistical=less(first.statistical, second.statistical),
        contributions=first.contributions or second.contributions,
        parts=tuple(dict.fromkeys((*first.parts, *second.parts))),
        nets=tuple(dict.fromkeys((*first.nets, *second.nets))),
        assumptions=tuple(dict.fromkeys((*first.assumptions, *second.assumptions))),
    )
