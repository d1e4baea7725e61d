"""What each kind of part means to direct current: one small function a kind, in the table `MEANINGS`.

A function puts the part into a growing network and lets the growth go on at the part's other ends, or says
why it cannot. `net` is the net from which the part was reached.
"""

from __future__ import annotations

from collections.abc import Callable
from math import isfinite
from typing import TYPE_CHECKING

import numpy as np

from ...grammar.netlist import Part, Pin
from .alternating import fed_by
from .diodes import Diode, diode_nets, is_zener_by_name, zener_voltage
from .linear import Array
from .network import ControlledSource, CurrentSource, Resistor, Sample, Value, VoltageSource
from .transistors import read_transistor
from .worst_case import Parameter, Variation

if TYPE_CHECKING:
    from .growth import Growth

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
        opaque(growth, part, net)
        return
    value = growth.part_value(part)
    if value is not None:
        growth.use(part)
        small = growth.parameters[part.reference].low < _SMALL
        growth.add(Resistor(part.reference, *_ends(part), value, may_be_zero=small))
        growth.follow(part)


def _trimmer(growth: Growth, part: Part, net: str) -> None:
    """Put in a trimmer as two resistances whose sum is its value; the wiper travels end to end.

    With two pins only it is a rheostat: what lies between one end and the wiper.
    """
    value = growth.part_value(part)
    if value is None:
        return
    growth.use(part)
    name = f"{part.reference} travel"
    travel = growth.add_parameter(Parameter(name, 0.0, 0.5, 1.0, Variation.TRAVEL, part.reference))
    if len(part.pins) == 2:
        growth.add(Resistor(part.reference, *_ends(part), _share(value, travel), may_be_zero=True))
        growth.follow(part)
        return
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
        opaque(growth, part, net)
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
        opaque(growth, part, net)
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
    if is_zener_by_name(part) and zener_voltage(part) is None:
        return f"{part.reference} is a zener by its name, and nothing tells its voltage"
    return ""


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


def _source(kind: type[VoltageSource | CurrentSource]) -> Callable[[Growth, Part, str], None]:
    def put_in(growth: Growth, part: Part, net: str) -> None:
        if len(part.pins) != 2:
            opaque(growth, part, net)
            return
        value = growth.part_value(part)
        if value is not None:
            growth.use(part)
            growth.add(kind(part.reference, *_ends(part), value))
            growth.follow(part)

    return put_in


def _controlled_source(growth: Growth, part: Part, net: str) -> None:
    """Put in an E or G source of constant gain; any other is opaque."""
    gain = _constant(part.value)
    if part.element not in ("E", "G") or len(part.pins) != 4 or gain is None:
        opaque(growth, part, net)
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


def _connector(growth: Growth, part: Part, net: str) -> None:
    """Stop at a connector, which may bring anything, but where the caller knows that it only senses."""
    if net in growth.unloaded:
        growth.assume(f"{part.reference} taken as drawing nothing from {net}")
    else:
        opaque(growth, part, net)


def opaque(growth: Growth, part: Part, net: str) -> None:
    """Stop at a part whose current nothing tells."""
    growth.block(net, part, f"{part.reference} ({growth.circuit.kind(part)}) may feed or load it")


MEANINGS: dict[str, Callable[[Growth, Part, str], None]] = {
    "resistor": _resistor,
    "trimmer": _trimmer,
    "capacitor": _capacitor,
    "coupling": _open,
    "test point": _open,
    "connector": _connector,
    "inductor": _short,
    "fuse": _short,
    "jumper": _short,
    "diode": _diode,
    "transistor": _switch,
    "switch": _switch,
    "voltage source": _source(VoltageSource),
    "battery": _source(VoltageSource),
    "current source": _source(CurrentSource),
    "controlled source": _controlled_source,
}
