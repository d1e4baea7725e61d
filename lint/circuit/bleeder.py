"""The resistance that discharges a capacitor once everything is switched off: resistors alone count."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from ...grammar.netlist import Part
from ..quantity import Spread
from .graph import Circuit
from .linear import Array
from .network import Network, Resistor, Sample, Value
from .solver import solve

_FIRST, _SECOND = "\x00first", "\x00second"

# A smaller share of the voltage is rounding.
_NOTHING = 1e-9

# From this resistance (ohm) on a path is no better than the board it stands on (common practice, no source).
_INSULATION = 1e12

# A path of more resistors than this is no bleeder, but a board.
_MOST_RESISTORS = 200


@dataclass(frozen=True, slots=True)
class Bleeder:
    """What joins two nets through resistors.

    resistance: in ohm
    shares:     the resistors that carry current, each with its share (0 to 1) of the voltage
    """

    resistance: Spread
    shares: Mapping[str, float]


def bleeder(circuit: Circuit, first: Sequence[str], second: Sequence[str]) -> Bleeder | None:
    """Return what discharges a capacitor between two nets, each given with what is joined to it, or None."""
    names = dict.fromkeys(first, _FIRST) | dict.fromkeys(second, _SECOND)
    resistors = [
        Resistor(part.reference, *_ends(part, names), _at_each(spread), may_be_zero=spread.minimum < 1.0)
        for part, spread in _met(circuit, first, names)
    ]
    network = Network(tuple(r for r in resistors if r.a != r.b), {_FIRST: _held(1.0), _SECOND: _held(0.0)})
    if not {_FIRST, _SECOND} <= set(network.nets()):
        return None  # a walk from the one that meets the other has joined them
    solution = solve(network, {}, 3)
    across = {r.name: abs(float(solution.voltage(r.a, r.b)[1])) for r in resistors if r.a != r.b}
    shares = {name: share for name, share in across.items() if share > _NOTHING}
    with np.errstate(divide="ignore"):  # no current at all: no path either
        least, nominal, most = (float(ohms) for ohms in 1.0 / solution.current_out_of(_FIRST))
    if not 0 < least <= nominal <= most <= _INSULATION:
        return None  # what is left of a current below rounding tells of no path
    return Bleeder(Spread(least, nominal, most, "ohm"), shares)


def _held(volts: float) -> Value:
    def held(sample: Sample) -> Array:
        return np.full(1, volts)

    return held


def _at_each(spread: Spread) -> Value:
    """Return a resistance at its least, nominal and greatest value: the whole only grows with each part."""
    values = np.array([spread.minimum, spread.nominal, spread.maximum], dtype=np.float64)

    def resistance(sample: Sample) -> Array:
        return values

    return resistance


def _met(circuit: Circuit, start: Sequence[str], names: Mapping[str, str]) -> list[tuple[Part, Spread]]:
    """Return the resistors with a value that a walk meets from `start` on, not beyond the nets in `names`."""
    found: dict[str, tuple[Part, Spread]] = {}
    seen: set[str] = set()
    waiting = list(start)
    while waiting and len(found) < _MOST_RESISTORS:
        net = waiting.pop()
        if net in seen:
            continue
        seen.add(net)
        for connection in circuit.connections(net):
            part = connection.part
            value = circuit.value(part) if circuit.kind(part) == "resistor" and len(part.pins) == 2 else None
            if value is not None and value.spread.minimum >= 0:
                found[part.reference] = (part, value.spread)
                waiting += [n for n in circuit.other_nets(part, net) if n not in names]
    return list(found.values())


def _ends(part: Part, names: Mapping[str, str]) -> tuple[str, str]:
    first, second = (pin.net or f"\x00{part.reference} {pin.number}" for pin in part.pins)
    return names.get(first, first), names.get(second, second)
