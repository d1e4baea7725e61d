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
from .growth import GROUND, Growth
from .linear import Array
from .network import CurrentSource, Resistor
from .potentials import Potential
from .solver import Solution

# A resistance is read as the voltage that this current makes across it; any value does for a linear network.
_TEST_CURRENT = 1e-3


def time_constant(
    circuit: Circuit, known: Mapping[str, Potential], controllers: Sequence[Controller], capacitor: Part
) -> Estimate | Unsolved:
    """Return the time constant (s) of a capacitor: its capacitance times the resistance between its ends.

    Nets of known potential count as stiff, other capacitors as open. That is the first-order picture; a
    second capacitor on the same network makes it an estimate.
    """
    a, b = (pin.net for pin in capacitor.pins)
    growth = _quiet(circuit, known, controllers, a, b)
    capacitance = growth.part_value(capacitor)
    growth.use(capacitor)
    if _is_complete(growth) and growth.network().floating() & {a, b}:
        return Unsolved(f"{capacitor.reference} sees no resistance: one of its ends has no path", nets=(a, b))

    def constant(solution: Solution) -> Array:
        assert capacitance is not None  # a capacitor without a value has stopped `estimate`
        return solution.voltage(a, b) / _TEST_CURRENT * capacitance(solution.sample)

    found = estimate(growth, {"time constant": (constant, "s")})
    return found if isinstance(found, Unsolved) else found["time constant"]


def source_resistance(
    circuit: Circuit,
    known: Mapping[str, Potential],
    controllers: Sequence[Controller],
    net: str,
    unloaded: frozenset[str] = frozenset(),
) -> Estimate | Unsolved:
    """Return the resistance (ohm) that a net is driven from, every source still (Thevenin's).

    unloaded: nets whose connectors are taken as drawing nothing
    """
    growth = _quiet(circuit, known, controllers, net, GROUND, unloaded)
    if _is_complete(growth) and net in growth.network().floating():
        return Unsolved(f"net {net} has no direct-current path", nets=(net,))
    found = estimate(growth, {"resistance": (lambda s: s.voltage(net) / _TEST_CURRENT, "ohm")})
    return found if isinstance(found, Unsolved) else found["resistance"]


def _is_complete(growth: Growth) -> bool:
    """Tell whether the whole network is known: only then a net without a path has none."""
    return not (growth.blocked or growth.valueless)


def _quiet(
    circuit: Circuit,
    known: Mapping[str, Potential],
    controllers: Sequence[Controller],
    a: str,
    b: str,
    unloaded: frozenset[str] = frozenset(),
) -> Growth:
    """Return the resistances round two nets, every source still, with the test current from `b` to `a`."""
    zero = Spread.exact(0.0, "V")
    quiet = {net: replace(potential, spread=zero, assumption="") for net, potential in known.items()}
    growth = Growth(circuit, quiet, controllers, unloaded=unloaded)
    growth.grow(*(net for net in (a, b) if net != GROUND))
    growth.elements = {name: e for name, e in growth.elements.items() if isinstance(e, Resistor)}
    growth.add(CurrentSource("test current", b, a, lambda _: np.full(1, _TEST_CURRENT)))
    return growth
