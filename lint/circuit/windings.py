"""Inductors and transformers as what they are to a power stage: windings on nets."""

from __future__ import annotations

from dataclasses import dataclass

from .graph import Circuit


@dataclass(frozen=True, slots=True)
class Winding:
    """An inductor of two nets, or a transformer of several.

    parts: the inductor's or the transformer's reference; of coupled inductors, all of them
    """

    parts: tuple[str, ...]
    nets: tuple[str, ...]
    transformer: bool

    @property
    def name(self) -> str:
        """Return how to point at it."""
        return ", ".join(self.parts)

    def others(self, net: str) -> tuple[str, ...]:
        """Return its nets but one."""
        return tuple(other for other in self.nets if other != net)


def windings(circuit: Circuit) -> tuple[Winding, ...]:
    """Return the inductors and transformers; inductors that a `K` line couples are one transformer."""
    groups = _coupled(circuit)
    found: list[Winding] = []
    for reference, part in circuit.parts.items():
        kind = circuit.kind(part)
        if kind == "inductor" and reference not in {name for group in groups for name in group}:
            found.append(Winding((reference,), _nets(circuit, (reference,)), len(part.pins) > 2))
        elif kind == "transformer":
            found.append(Winding((reference,), _nets(circuit, (reference,)), transformer=True))
    found += [Winding(group, _nets(circuit, group), transformer=True) for group in groups]
    return tuple(winding for winding in found if len(winding.nets) > 1)


def _nets(circuit: Circuit, references: tuple[str, ...]) -> tuple[str, ...]:
    """Return the nets of parts; of a transformer's pin with a capacitor in series, the net beyond it."""
    transformer = len({pin.net for name in references for pin in circuit.parts[name].pins}) > 2
    pins = (pin for reference in references for pin in circuit.parts[reference].pins)
    nets = (_beyond_capacitor(circuit, pin.net) if transformer else pin.net for pin in pins if pin.net)
    return tuple(dict.fromkeys(nets))


def _beyond_capacitor(circuit: Circuit, net: str) -> str:
    """Return the net that a capacitor leads to from a net on which nothing else but one pin is."""
    parts = [connection.part for connection in circuit.connections(net)]
    capacitors = [part for part in parts if circuit.kind(part) == "capacitor"]
    if len(parts) != 2 or len(capacitors) != 1:
        return net
    return next(iter(circuit.other_nets(capacitors[0], net)), net)


def _coupled(circuit: Circuit) -> list[tuple[str, ...]]:
    """Return the groups of inductors that `K` lines join, lines that share an inductor in one group."""
    groups: list[dict[str, None]] = []
    by_name = {name.casefold(): name for name in circuit.parts}
    for part in circuit.parts.values():
        if circuit.kind(part) != "coupling":
            continue
        names = [by_name.get(word.casefold(), "") for word in part.attributes.get("couples", "").split()]
        group = dict.fromkeys(name for name in names if name)
        for other in [other for other in groups if other.keys() & group.keys()]:
            groups.remove(other)
            group = other | group
        if len(group) > 1:
            groups.append(group)
    return [tuple(group) for group in groups]
