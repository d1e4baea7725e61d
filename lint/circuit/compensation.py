"""What joins an amplifier's output to its inverting input: the parts, the gain they set, their corners."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from math import pi

from ...grammar.netlist import Part
from .graph import Circuit
from .potentials import Potential

_PASSIVE = frozenset({"resistor", "capacitor", "trimmer"})


@dataclass(frozen=True, slots=True)
class Compensation:
    """A feedback path from an amplifier's output to its inverting input.

    parts:   the resistors and capacitors of the path
    direct:  the path passes direct current, so that the gain at rest is finite
    corners: (resistor, capacitor, corner frequency in Hz) of every resistor and capacitor in series
    """

    parts: tuple[str, ...]
    direct: bool
    corners: tuple[tuple[str, str, float], ...]


def compensation(
    circuit: Circuit, known: Mapping[str, Potential], output: str, inverting: str
) -> Compensation | None:
    """Return the feedback path from net `output` to net `inverting`, None where there is none.

    A path passes through resistors and capacitors and never through a net of known potential.
    """
    forward = _reached(circuit, known, output, inverting)
    backward = _reached(circuit, known, inverting, output)
    if inverting not in forward:
        return None
    nets = forward & backward
    between = [
        part
        for part in _passive_on(circuit, nets)
        if all(pin.net in nets for pin in part.pins) and len({pin.net for pin in part.pins}) > 1
    ]
    resistive = [part for part in between if circuit.kind(part) != "capacitor"]
    direct = inverting in _closure(output, resistive)
    names = tuple(part.reference for part in between)
    return Compensation(names, direct, tuple(_corners(circuit, between, {output, inverting})))


def _reached(circuit: Circuit, known: Mapping[str, Potential], start: str, end: str) -> set[str]:
    """Return the nets that passive parts join to `start`; the walk does not go on beyond `end`."""
    reached: set[str] = set()
    waiting = [start]
    while waiting:
        net = waiting.pop()
        if net in reached or (net in known and net not in (start, end)):
            continue
        reached.add(net)
        if net == end:
            continue
        for connection in circuit.connections(net):
            if circuit.kind(connection.part) in _PASSIVE:
                waiting.extend(circuit.other_nets(connection.part, net))
    return reached


def _passive_on(circuit: Circuit, nets: set[str]) -> list[Part]:
    found = {c.part.reference: c.part for net in sorted(nets) for c in circuit.connections(net)}
    return [part for part in found.values() if circuit.kind(part) in _PASSIVE]


def _closure(start: str, parts: list[Part]) -> set[str]:
    reached = {start}
    grown = True
    while grown:
        grown = False
        for part in parts:
            nets = {pin.net for pin in part.pins}
            if nets & reached and not nets <= reached:
                reached |= nets
                grown = True
    return reached


def _corners(circuit: Circuit, parts: list[Part], ends: set[str]) -> list[tuple[str, str, float]]:
    """Return the corner 1 / (2 pi R C) of each resistor and capacitor that share a net with nothing else."""
    corners: list[tuple[str, str, float]] = []
    for resistor in (part for part in parts if circuit.kind(part) == "resistor"):
        for capacitor in (part for part in parts if circuit.kind(part) == "capacitor"):
            shared = {pin.net for pin in resistor.pins} & {pin.net for pin in capacitor.pins} - ends
            alone = any(len(list(circuit.connections(net))) == 2 for net in shared)
            ohms, farads = circuit.value(resistor), circuit.value(capacitor)
            if not alone or ohms is None or farads is None:
                continue
            constant = ohms.spread.nominal * farads.spread.nominal
            if constant > 0:
                corners.append((resistor.reference, capacitor.reference, 1 / (2 * pi * constant)))
    return corners
