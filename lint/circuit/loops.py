"""Closed loops: the output voltage a controller regulates to, and the current at which it takes over.

An amplifier in control holds its inputs equal, within its offset. So the unknown (output voltage, load
current) is a free quantity of the network, and "inputs equal" is its condition: one linear solve.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from math import inf, isinf

import numpy as np

from .. import needs
from ..estimate import Estimate, Unsolved
from ..quantity import Spread
from .amplifiers import Amplifier, SenseResistor
from .answers import estimate
from .controllers import Controller
from .graph import Circuit
from .growth import Growth
from .network import Condition, FreeCurrent, FreePotential, Resistor
from .potentials import Potential
from .states import Probe
from .trimming import settable, trimmers
from .worst_case import Parameter


@dataclass(frozen=True, slots=True)
class Fault:
    """One resistor that has failed: open, or shorted."""

    part: str
    shorted: bool

    def strike(self, growth: Growth) -> None:
        """Change a grown network as the fault does, and hold all other parts at their nominal values."""
        nominal = {n: replace(p, low=p.nominal, high=p.nominal) for n, p in growth.parameters.items()}
        growth.parameters.update(nominal)
        element = growth.elements.pop(self.part, None)
        if element is not None and self.shorted:
            growth.add(Resistor(self.part, element.a, element.b, lambda _: np.zeros(1), may_be_zero=True))


@dataclass(frozen=True, slots=True)
class FeedbackLoad:
    """What hangs on the feedback pin.

    current: out of the pin into it, in A
    untold:  parts on the net whose current cannot be told, each as a sentence
    """

    current: Estimate
    untold: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Regulation:
    """An output in regulation.

    output:   voltage of the output net, trimmers swept end to end
    inputs:   potential of the amplifier's non-inverting input meanwhile (the other is equal)
    trimmers: what can be set on the bench
    settable: the lowest and the highest voltage (V) to which every unit can be set, whatever its tolerances;
              None without a trimmer, crossed where no voltage is within reach of every unit
    """

    output: Estimate
    inputs: Estimate
    trimmers: tuple[str, ...] = ()
    settable: tuple[float, float] | None = None


@dataclass(frozen=True, slots=True)
class Trip:
    """The current limit taking over.

    current:     the current in the power path at which the amplifier's inputs are equal
    threshold:   the voltage across the sense resistor at that moment
    dissipation: the power in the sense resistor at that moment
    reversed:    the current must flow from the far end of the sense resistor to the near one
    trimmers:    what can be set on the bench
    settable:    the lowest and the highest current (A) to which every unit can be set, as of a Regulation
    """

    current: Estimate
    threshold: Estimate
    dissipation: Estimate
    reversed: bool = False
    trimmers: tuple[str, ...] = ()
    settable: tuple[float, float] | None = None


@dataclass(slots=True)
class Loops:
    """Solves the closed loops of one controller.

    passed: the nets between its amplifiers' inputs and what these sense; a connector there senses as well
    """

    circuit: Circuit
    known: Mapping[str, Potential]
    controller: Controller
    passed: frozenset[str] = frozenset()

    def regulation(self, amplifier: Amplifier, fault: Fault | None = None) -> Regulation | Unsolved:
        """Return the output voltage at which the voltage amplifier's inputs are equal.

        fault: a part of the network that has failed
        """
        output = amplifier.output
        growth = self._grow(amplifier, self._without(output), frozenset({output}))
        if fault is not None:
            fault.strike(growth)
        condition = self._inputs_equal(growth, amplifier)
        probes: dict[str, tuple[Probe, str]] = {
            "output": (lambda s: s.voltage(output), "V"),
            "inputs": (lambda s: s.voltage(amplifier.plus), "V"),
        }
        found = estimate(growth, probes, [FreePotential(output)], [condition])
        if isinstance(found, Unsolved):
            return found
        if isinf(found["output"].spread.nominal):
            return Unsolved(
                f"no voltage on {output} makes the inputs of amplifier {amplifier.number} equal",
                parts=found["output"].parts,
                nets=(output, amplifier.plus, amplifier.minus),
            )
        reach = settable(growth, probes, "output", [FreePotential(output)], [condition])
        return Regulation(found["output"], found["inputs"], trimmers(growth), reach)

    def output_after(self, amplifier: Amplifier, fault: Fault, *, below_ground: bool = False) -> float:
        """Return how far from ground (V) the output goes after a fault, nominal parts otherwise.

        below_ground: the converter makes a negative output
        Where no output makes the inputs equal any more, the loop is lost: away from ground without bound when
        the amplifier then asks for the longest pulse, back to nothing when it asks for none.
        """
        found = self.regulation(amplifier, fault)
        if isinstance(found, Regulation):
            volts = found.output.spread.nominal
            return max(0.0, -volts if below_ground else volts)
        output = amplifier.output
        zero = Potential(output, Spread.exact(0.0, "V"), "regime")
        growth = self._grow(amplifier, {**self.known, output: zero}, frozenset())
        fault.strike(growth)
        plus, minus = amplifier.plus, amplifier.minus
        left = estimate(growth, {"difference": (lambda s: s.voltage(plus, minus), "V")})
        lost_downwards = not isinstance(left, Unsolved) and left["difference"].spread.nominal > 0
        return 0.0 if lost_downwards else inf

    def trip(self, amplifier: Amplifier, output: Potential | None = None) -> Trip | Unsolved:
        """Return the sense current at which the current amplifier's inputs are equal.

        output: the potential to take for the output net, where the network reaches it
        """
        sense = amplifier.sense
        assert sense is not None
        known = dict(self.known)
        if output is not None:
            known[output.net] = output
        growth = self._grow(amplifier, known, frozenset({sense.near, sense.far} - known.keys()))
        growth.grow(sense.far)
        value = growth.part_value(sense.part)
        assert value is not None  # a part without a value is not taken for a sense resistor
        growth.use(sense.part)
        resistor = Resistor(sense.part.reference, sense.near, sense.far, value)
        growth.add(resistor)
        self._add_beside(growth, sense)
        if sense.far not in known:
            return Unsolved(
                f"net {sense.far} has no known potential",
                nets=(sense.far,),
                needs=(needs.rail(sense.far),),
            )
        condition = self._inputs_equal(growth, amplifier)
        free = FreeCurrent("load", sense.far, sense.near)
        found = _trip(growth, resistor, free, condition)
        turned = not isinstance(found, Unsolved) and found["current"].spread.nominal < 0
        if turned:
            # The current flows the other way: sensed below ground, or on the way out of the high side.
            growth.elements[resistor.name] = resistor = replace(resistor, a=sense.far, b=sense.near)
            free = FreeCurrent("load", sense.near, sense.far)
            found = _trip(growth, resistor, free, condition)
        if isinstance(found, Unsolved):
            return found
        if isinf(found["current"].spread.nominal):
            return Unsolved(
                f"no current in {sense.part.reference} makes amplifier {amplifier.number}'s inputs equal",
                parts=found["current"].parts,
                nets=(amplifier.plus, amplifier.minus),
            )
        probes = {"current": _trip_probes(resistor)["current"]}
        reach = settable(growth, probes, "current", [free], [condition])
        figures = (found["current"], found["threshold"], found["dissipation"])
        return Trip(*figures, turned, trimmers(growth), reach)

    def _add_beside(self, growth: Growth, sense: SenseResistor) -> None:
        """Add the resistors in parallel with a sense resistor: the load's current divides among them."""
        for part in self.circuit.between(sense.near, sense.far):
            beside = self.circuit.kind(part) == "resistor" and part.reference not in growth.elements
            value = growth.part_value(part) if beside else None
            if value is not None:
                growth.use(part)
                growth.add(Resistor(part.reference, sense.near, sense.far, value))

    def feedback_load(self) -> FeedbackLoad | Unsolved:
        """Return what hangs on the feedback pin, the pin's voltage anywhere in its control range."""
        net = self.controller.net("feedback")
        if not net:
            return Unsolved(f"the feedback pin of {self.controller.reference} is not mapped")
        growth = Growth(self.circuit, self.known, (self.controller,)).grow(net, from_known=True)
        found = estimate(growth, {"current": (lambda s: s.current_out_of(net), "A")})
        return found if isinstance(found, Unsolved) else FeedbackLoad(found["current"], growth.untold(net))

    def _without(self, net: str) -> dict[str, Potential]:
        return {name: potential for name, potential in self.known.items() if name != net}

    def _grow(self, amplifier: Amplifier, known: Mapping[str, Potential], stops: frozenset[str]) -> Growth:
        growth = Growth(self.circuit, known, (self.controller,), stops, unloaded=self.passed - stops)
        return growth.grow(amplifier.plus, amplifier.minus)

    def _inputs_equal(self, growth: Growth, amplifier: Amplifier) -> Condition:
        offset = self.controller.profile.figure("amplifier.offset").spread()
        name = f"{self.controller.reference} amplifier {amplifier.number} offset"
        value = growth.add_parameter(Parameter(name, offset.minimum, offset.nominal, offset.maximum))
        return Condition(amplifier.plus, amplifier.minus, value)


def _trip(
    growth: Growth, resistor: Resistor, free: FreeCurrent, condition: Condition
) -> dict[str, Estimate] | Unsolved:
    """Return current, threshold and dissipation at the trip point.

    Where the threshold may have either sign the heat first falls and then rises with it, and no corner
    bounds it from below: then it is nothing to the product of the greatest current and threshold.
    """
    probes = _trip_probes(resistor)
    found = estimate(growth, probes, [free], [condition])
    if not isinstance(found, Unsolved):
        return found
    heat = probes.pop("dissipation")
    found = estimate(growth, probes, [free], [condition])
    if isinstance(found, Unsolved):
        return found
    spreads = [found[name].spread for name in probes]
    greatest = [max(abs(spread.minimum), abs(spread.maximum)) for spread in spreads]
    nominal = abs(spreads[0].nominal * spreads[1].nominal)
    bound = Spread(0.0, nominal, greatest[0] * greatest[1], heat[1])
    return {**found, "dissipation": replace(found["current"], spread=bound, statistical=bound)}


def _trip_probes(resistor: Resistor) -> dict[str, tuple[Probe, str]]:
    return {
        "current": (lambda s: s.free_current("load"), "A"),
        "threshold": (lambda s: s.voltage(resistor.a, resistor.b), "V"),
        "dissipation": (lambda s: s.voltage(resistor.a, resistor.b) * s.current(resistor), "W"),
    }
