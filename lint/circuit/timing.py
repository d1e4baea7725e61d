"""The oscillator's timing parts: resistance and capacitance at the controller's pins, and the frequency."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from ...grammar.netlist import Part
from ..estimate import Estimate, Unsolved
from .answers import estimate
from .controllers import Controller
from .graph import Circuit
from .growth import GROUND, Growth
from .linear import Array
from .network import CurrentSource
from .potentials import Potential
from .solver import Solution
from .states import Probe
from .trimming import settable, trimmers
from .worst_case import Parameter

# A resistance is read as the voltage that this current makes across it; any value does for a linear network.
_TEST_CURRENT = 1e-3


@dataclass(frozen=True, slots=True)
class Timing:
    """What the timing parts make, trimmers swept end to end.

    resistance, capacitance, frequency: at the timing pins (ohm, F), and of the oscillator (Hz)
    trimmers: what can be set on the bench
    settable: the lowest and the highest frequency (Hz) to which every unit can be set; None without a
              trimmer, crossed where no frequency is within reach of every unit
    """

    resistance: Estimate
    capacitance: Estimate
    frequency: Estimate
    trimmers: tuple[str, ...] = ()
    settable: tuple[float, float] | None = None


def timing(circuit: Circuit, known: Mapping[str, Potential], controller: Controller) -> Timing | Unsolved:
    """Return what the timing parts of a controller make, over tolerances and trimmers."""
    resistor_net, capacitor_net = controller.net("timing resistor"), controller.net("timing capacitor")
    if not resistor_net or not capacitor_net:
        return Unsolved("the timing pins are not mapped or hang open", nets=())
    if resistor_net in known and known[resistor_net].origin == "reference":
        pin = controller.pins["timing resistor"].name
        return Unsolved(f"{controller.reference}'s oscillator is switched off: {pin} is on the reference")
    capacitors = _to_ground(circuit, known, capacitor_net)
    growth = Growth(circuit, known, (controller,), frozenset({resistor_net})).grow(
        resistor_net, from_known=True
    )
    for part in capacitors:
        growth.part_value(part)
        growth.use(part)
    if not capacitors or not (growth.elements or growth.valueless):
        what = "timing capacitor" if not capacitors else "timing resistor"
        net = capacitor_net if not capacitors else resistor_net
        return Unsolved(f"no {what} from {net} to ground", nets=(net,))
    constant = controller.profile.figure("oscillator.constant").spread()
    growth.add_parameter(
        Parameter("k", constant.minimum, constant.nominal, constant.maximum, label="oscillator constant")
    )
    growth.add(CurrentSource("test current", GROUND, resistor_net, lambda _: np.full(1, _TEST_CURRENT)))

    def resistance(solution: Solution) -> Array:
        return solution.voltage(resistor_net) / _TEST_CURRENT

    def capacitance(solution: Solution) -> Array:
        return np.sum([solution.sample[part.reference] for part in capacitors], axis=0)

    def frequency(solution: Solution) -> Array:
        with np.errstate(divide="ignore"):  # a trimmer may leave no resistance at all: infinitely fast
            return solution.sample["k"] / (resistance(solution) * capacitance(solution))

    if not growth.valueless and growth.network().floating():
        return Unsolved(f"no resistor from {resistor_net} to ground", nets=(resistor_net,))
    probes: dict[str, tuple[Probe, str]] = {
        "resistance": (resistance, "ohm"),
        "capacitance": (capacitance, "F"),
        "frequency": (frequency, "Hz"),
    }
    found = _passive(estimate(growth, probes), growth, resistor_net)
    if isinstance(found, Unsolved):
        return found
    reach = settable(growth, probes, "frequency")
    return Timing(found["resistance"], found["capacitance"], found["frequency"], trimmers(growth), reach)


def _passive(
    found: dict[str, Estimate] | Unsolved, growth: Growth, net: str
) -> dict[str, Estimate] | Unsolved:
    """Return what was found, unless a source on the timing resistor's net makes it no resistance."""
    if isinstance(found, Unsolved):
        return found
    live = [
        other for other in growth.nets if other in growth.known and growth.known[other].origin != "ground"
    ]
    if not live and found["resistance"].spread.nominal >= 0:
        return found
    feeders = ", ".join(live) or "something else"
    return Unsolved(
        f"{feeders} feeds {net}: its current is not set by a resistance", tuple(growth.parts), (net,)
    )


def _to_ground(circuit: Circuit, known: Mapping[str, Potential], net: str) -> list[Part]:
    """Return the capacitors that stand straight between a net and ground."""
    grounds = [name for name, potential in known.items() if potential.origin == "ground"]
    parts = [part for ground in grounds for part in circuit.between(net, ground)]
    return [part for part in parts if circuit.kind(part) == "capacitor"]
