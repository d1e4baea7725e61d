"""What joins a primary circuit to a secondary one: the shortest way across, part by part."""

from __future__ import annotations

from collections import deque
from collections.abc import Callable, Collection
from dataclasses import dataclass

from ...grammar.netlist import Part
from ..isolators import is_opto_coupler, is_safety_capacitor
from .graph import Circuit

# Parts through which direct current flows: there is no isolation at all where these join two circuits.
_CONDUCTIVE = frozenset(
    {"resistor", "trimmer", "inductor", "diode", "fuse", "jumper", "transistor", "switch", "thermistor"}
)


@dataclass(frozen=True, slots=True)
class Way:
    """A way from one circuit into another: the nets on it in order, and the part from each to the next."""

    nets: tuple[str, ...]
    parts: tuple[str, ...]
    conductive: bool


def way_across(circuit: Circuit, primary: Collection[str], secondary: Collection[str]) -> Way | None:
    """Return a shortest way from a primary net to a secondary one that no isolating part makes, or None.

    A way of parts that conduct is looked for first; then one of any parts.
    """
    found = _shortest(circuit, primary, secondary, lambda part: circuit.kind(part) in _CONDUCTIVE)
    if found is not None:
        return Way(*found, conductive=True)
    found = _shortest(circuit, primary, secondary, lambda part: not isolates(circuit, part))
    return Way(*found, conductive=False) if found is not None else None


def _shortest(
    circuit: Circuit, start: Collection[str], goal: Collection[str], passes: Callable[[Part], bool]
) -> tuple[tuple[str, ...], tuple[str, ...]] | None:
    """Return the nets and the parts of a shortest way through parts that `passes` lets through."""
    came_from: dict[str, tuple[str, str]] = {}
    waiting = deque(start)
    seen = set(start)
    walked: set[str] = set()
    while waiting:
        net = waiting.popleft()
        if net in goal:
            return _retraced(net, came_from)
        for connection in circuit.connections(net):
            part = connection.part
            if part.reference in walked or not passes(part):
                continue
            walked.add(part.reference)
            for other in circuit.other_nets(part, net):
                if other not in seen:
                    seen.add(other)
                    came_from[other] = (net, part.reference)
                    waiting.append(other)
    return None


def _retraced(end: str, came_from: dict[str, tuple[str, str]]) -> tuple[tuple[str, ...], tuple[str, ...]]:
    nets, parts = [end], list[str]()
    while nets[-1] in came_from:
        net, part = came_from[nets[-1]]
        nets.append(net)
        parts.append(part)
    return tuple(reversed(nets)), tuple(reversed(parts))


def isolates(circuit: Circuit, part: Part) -> bool:
    """Tell whether a part may stand between the circuits: transformer, opto-coupler, capacitor of class Y."""
    kind = circuit.kind(part)
    if kind in ("transformer", "coupling"):
        return True
    texts = (part.model, part.value, part.attributes.get("part number", ""))
    if kind == "capacitor":
        return is_safety_capacitor(*texts, circuit.reader.attribute(part, "dielectric"))
    return kind in ("integrated circuit", "other") and is_opto_coupler(part.reference, *texts)
