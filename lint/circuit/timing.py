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
from .potentials import Potential
from .solver import Array, CurrentSource, Solution
from .worst_case import Parameter

# A resistance is read as the voltage that this current makes across it; any value does for a linear network.
_TEST_CURRENT = 1e-3


@dataclass(frozen=True, slots=True)
class Timing:
    """The timing resistance (ohm), the timing capacitance (F) and the oscillator's frequency (Hz)."""

    resistance: Estimate
    capacitance: Estimate
    frequency: Estimate


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
    if not capacitors or not growth.elements:
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
        return solution.sample["k"] / (resistance(solution) * capacitance(solution))

    if growth.network().floating():
        return Unsolved(f"no resistor from {resistor_net} to ground", nets=(resistor_net,))
    found = estimate(
        growth,
        {
            "resistance": (resistance, "ohm"),
            "capacitance": (capacitance, "F"),
            "frequency": (frequency, "Hz"),
        },
    )
    if isinstance(found, Unsolved):
        return found
    return Timing(found["resistance"], found["capacitance"], found["frequency"])


def _to_ground(circuit: Circuit, known: Mapping[str, Potential], net: str) -> list[Part]:
    """Return the capacitors that stand straight between a net and ground."""
    grounds = [name for name, potential in known.items() if potential.origin == "ground"]
    parts = [part for ground in grounds for part in circuit.between(net, ground)]
    return [part for part in parts if circuit.kind(part) == "capacitor"]
