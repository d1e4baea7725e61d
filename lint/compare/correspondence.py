"""Which pin of a part is which pin of the same part in the other revision.

Between two files of one format the file's own numbers, names or positions tell. Between formats a pin is
called otherwise: a controller's pins go by their place in the package, those of semiconductors and polarised
parts by what they are, others by equal names. Where nothing tells, or where the ends of a part are alike, the
nets do.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass, replace

from ...grammar.netlist import Part
from ..controllers import plain_name
from ..dielectrics import is_polarised
from .side import Side

_ALIKE = frozenset({"resistor", "capacitor", "inductor", "fuse", "jumper", "thermistor"})

# What the nodes of a SPICE element are, in their order (Berkeley SPICE 3 manual, from memory).
_DIODE, _BIPOLAR, _FIELD_EFFECT, _POLES = ("A", "K"), ("C", "B", "E", "SUB"), ("D", "G", "S", "B"), ("+", "-")
_ELEMENTS = {
    "D": _DIODE,
    "Q": _BIPOLAR,
    "M": _FIELD_EFFECT,
    "J": _FIELD_EFFECT,
    "V": _POLES,
    "I": _POLES,
    "B": _POLES,
}

_DIODE_NAMES = {"a": "A", "anode": "A", "k": "K", "c": "K", "cathode": "K", "kathode": "K"}
_POLE_NAMES = {"+": "+", "p": "+", "pos": "+", "plus": "+", "-": "-", "n": "-", "neg": "-", "minus": "-"}
_TRANSISTOR_NAMES = {
    "c": "C",
    "collector": "C",
    "b": "B",
    "base": "B",
    "bulk": "B",
    "body": "B",
    "e": "E",
    "emitter": "E",
    "d": "D",
    "drain": "D",
    "g": "G",
    "gate": "G",
    "s": "S",
    "source": "S",
    "sub": "SUB",
    "substrate": "SUB",
}
_NAMES = {
    "diode": _DIODE_NAMES,
    "transistor": _TRANSISTOR_NAMES,
    "capacitor": _POLE_NAMES,
    "voltage source": _POLE_NAMES,
    "current source": _POLE_NAMES,
    "battery": _POLE_NAMES,
}


@dataclass(frozen=True, slots=True)
class Correspondence:
    """How the pins of a part correspond, by index.

    certain: pairs of old and new pin; old_left, new_left: the pins without a partner
    alike:   the part has two ends that may be exchanged; there are no pairs then
    likely:  pairs where nothing is certain; the nets decide, and these where they do not
    """

    certain: tuple[tuple[int, int], ...] = ()
    old_left: tuple[int, ...] = ()
    new_left: tuple[int, ...] = ()
    alike: bool = False
    likely: tuple[tuple[int, int], ...] = ()


def correspondence(old: Side, one: Part, new: Side, other: Part) -> Correspondence:
    """Return which pin of `one` is which pin of `other`, the same part in the new revision."""
    roles = _roles(old, one), _roles(new, other)
    if roles[0] and roles[1]:
        return _by_label(*roles)
    same_format = old.netlist.format == new.netlist.format
    if _ends_alike(old, one, new, other, same_format):
        return Correspondence(alike=True)
    if same_format:
        written = _written(one, other)
        if set(written[0]) & set(written[1]):
            return _by_label(*written)
        return _likely(_by_label(range(len(one.pins)), range(len(other.pins))))
    return _across_formats(old, one, new, other)


def pin_name(side: Side, part: Part, index: int) -> str:
    """Return how a reader calls a pin: by the data sheet for a controller, else by its name or number."""
    controller = side.controllers.get(part.reference)
    if controller is not None:
        for pin in controller.pins.values():
            if pin.index == index:
                return pin.name
    if nodes := _nodes(side, part):
        return nodes[index]
    pin = part.pins[index]
    return pin.name or pin.number or str(index + 1)


def _across_formats(old: Side, one: Part, new: Side, other: Part) -> Correspondence:
    told = _terminals(old, one), _terminals(new, other)
    names = _plain(one), _plain(other)
    for labels in (told, names):
        first, second = set(labels[0]), set(labels[1])
        # All labels of the part with fewer pins: a list has the bulk that a symbol leaves out.
        if first and second and (first <= second or second <= first):
            return _by_label(*labels)
    return _likely(_by_label(_numbers(one), _numbers(other)))


def _roles(side: Side, part: Part) -> list[str]:
    """Return the pin of the package for each pin of a controller, empty for any other part."""
    controller = side.controllers.get(part.reference)
    if controller is None:
        return []
    labels = [f"={pin.name or pin.number}" for pin in part.pins]
    for pin in controller.pins.values():
        labels[pin.index] = f"{controller.profile.family} {pin.number}"
    return labels


def _ends_alike(old: Side, one: Part, new: Side, other: Part, same_format: bool) -> bool:
    """Tell whether a part has two ends that may be exchanged without a change to the circuit."""
    pairs = ((old, one), (new, other))
    if any(len(part.pins) != 2 or side.kind(part) not in _ALIKE for side, part in pairs):
        return False
    if all(_terminals(side, part) for side, part in pairs):
        return False  # both say which end is which
    if not same_format:
        return True
    return not any(_is_directed(side, part) for side, part in pairs)


def _is_directed(side: Side, part: Part) -> bool:
    """Tell whether it matters which end of a two-pin part is which: electrolytics, windings with a dot."""
    if side.kind(part) == "inductor":
        return part.reference.casefold() in side.design.circuit.coupled
    words = (side.reader.attribute(part, "dielectric"), part.value, part.model)
    return side.kind(part) == "capacitor" and is_polarised(*words)


def _terminals(side: Side, part: Part) -> list[str]:
    """Return what each pin is, such as "A" and "K" of a diode; empty where that is not told of each."""
    if nodes := _nodes(side, part):
        return nodes
    table = _NAMES.get(side.kind(part), {})
    found = [table.get(plain_name(pin.name), "") for pin in part.pins]
    return found if all(found) and len(set(found)) == len(found) else []


def _nodes(side: Side, part: Part) -> list[str]:
    """Return what the nodes of a SPICE element are by their order; empty for anything else."""
    order = _ELEMENTS.get(part.element, ())
    # In a plain list J1 is a connector, with as many pins as it likes.
    if part.pins_known != "positions" or len(part.pins) > len(order) or side.kind(part) == "connector":
        return []
    return list(order[: len(part.pins)])


def _plain(part: Part) -> list[str]:
    """Return the plain names of all pins; empty where one has none or they are mere numbers."""
    names = [plain_name(pin.name) for pin in part.pins]
    return names if all(names) and not all(name.isdecimal() for name in names) else []


def _numbers(part: Part) -> list[str]:
    return [pin.number for pin in part.pins]


def _written(one: Part, other: Part) -> tuple[list[str], list[str]]:
    """Return the labels of the pins as two files of one format have them, by what both of them tell."""
    if one.pins_known == other.pins_known == "names" or (
        one.pins_known != other.pins_known and all(pin.name for pin in (*one.pins, *other.pins))
    ):
        return [pin.name for pin in one.pins], [pin.name for pin in other.pins]
    return _numbers(one), _numbers(other)


def _likely(found: Correspondence) -> Correspondence:
    return replace(found, certain=(), likely=found.certain)


def _by_label(old: Sequence[object], new: Sequence[object]) -> Correspondence:
    """Pair pins by label; of several with one label the first goes with the first."""
    indices = {label: index for index, label in enumerate(_told_apart(new))}
    pairs: list[tuple[int, int]] = []
    left: list[int] = []
    for index, label in enumerate(_told_apart(old)):
        partner = indices.pop(label, None)
        if partner is None:
            left.append(index)
        else:
            pairs.append((index, partner))
    return Correspondence(certain=tuple(pairs), old_left=tuple(left), new_left=tuple(indices.values()))


def _told_apart(labels: Sequence[object]) -> list[tuple[object, int]]:
    times = Counter[object]()
    found: list[tuple[object, int]] = []
    for label in labels:
        found.append((label, times[label]))
        times[label] += 1
    return found
