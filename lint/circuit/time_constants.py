"""First-order time: how fast a capacitor follows, by the resistance that it sees."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace

import numpy as np

from ...grammar.netlist import Part
from ..estimate import Estimate, Unsolved
from ..quantity import Spread
from .answers import estimate
from .controllers import Controller
from .graph import Circuit
from .growth import Growth
from .potentials import Potential
from .solver import Array, CurrentSource, Resistor, Solution

# A resistance is read as the voltage that this current makes across it; any value does for a linear network.
_TEST_CURRENT = 1e-3


def time_constant(
    circuit: Circuit, known: Mapping[str, Potential], controllers: Sequence[Controller], capacitor: Part
) -> Estimate | Unsolved:
    """Return the time constant (s) of a capacitor: its capacitance times the resistance between its ends.

    Nets of known potential count as stiff, other capacitors as open. That is the first-order picture; a
    second capacitor on the same network makes it an estimate.
    """
    quiet = {
        net: replace(potential, spread=Spread.exact(0.0, "V"), assumption="")
        for net, potential in known.items()
    }
    a, b = (pin.net for pin in capacitor.pins)
    growth = Growth(circuit, quiet, controllers).grow(a, b)
    growth.elements = {name: e for name, e in growth.elements.items() if isinstance(e, Resistor)}
    capacitance = growth.part_value(capacitor)
    growth.use(capacitor)
    growth.add(CurrentSource("test current", b, a, lambda _: np.full(1, _TEST_CURRENT)))
    adrift = growth.network().floating() & {a, b}
    if adrift:
        net = adrift.pop()
        return Unsolved(
            f"no resistance joins {net} to a known potential: {capacitor.reference} sees none", nets=(net,)
        )

    def constant(solution: Solution) -> Array:
        assert capacitance is not None  # a capacitor without a value has stopped `estimate`
        return solution.voltage(a, b) / _TEST_CURRENT * capacitance(solution.sample)

    found = estimate(growth, {"time constant": (constant, "s")})
    return found if isinstance(found, Unsolved) else found["time constant"]
