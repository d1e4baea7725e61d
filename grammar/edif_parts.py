"""From the occurrences of cells to parts: reference designator, value, attributes and pins."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping
from typing import NamedTuple

from .edif_ends import PartEnd
from .edif_instances import Reference, property_pairs, reference_of
from .edif_library import Source
from .edif_notes import NoteKeeper
from .edif_places import Places
from .edif_ports import PortBit, is_number
from .netlist import Part, Pin, Place
from .property_names import is_fitted, read_properties

_NOT_ATTRIBUTES = frozenset({"reference", "value", "section", "not fit"})
_NOT_INHERITED = frozenset({"reference", "section"})


class Built(NamedTuple):
    """A part, how the file refers to it, and whether it may be a mere symbol: one pin and no designator."""

    part: Part
    reference: Reference
    is_symbol: bool


class PartBuilder:
    """Makes parts of the occurrences, once the nets have their names.

    net_at: gives the key of the net for a piece of net
    notes:  takes what is odd about the pins
    """

    def __init__(self, places: Places, net_at: Callable[[int], str], notes: NoteKeeper) -> None:
        self._places = places
        self._net_at = net_at
        self._notes = notes
        self._inherited: dict[int, dict[str, str]] = {}

    def build(self, end: PartEnd) -> Built:
        """Return the part for one occurrence."""
        properties = self._properties(end)
        reference = reference_of(end.instance, end.said)
        name = f"{end.path}{reference.text}{end.suffix}"
        place = self._places.at(end.instance.name.offset)
        value = properties.get("value", "")
        pins = self._pins(end, name, place)
        fitted = is_fitted(value, properties)
        part = Part(
            reference=name,
            element="",
            value=value,
            model=_model(end),
            pins=tuple(pins),
            place=place,
            attributes={key: text for key, text in properties.items() if key not in _NOT_ATTRIBUTES},
            pins_known="numbers" if all(pin.number for pin in pins) else "names",
            fitted=fitted,
        )
        if not fitted:
            part.attributes = {**part.attributes, "fit": part.attributes.get("fit", "not fitted")}
        is_symbol = len(pins) <= 1 and not reference.is_stated and not (end.source and end.source.view.prefix)
        return Built(part, reference, is_symbol)

    def _properties(self, end: PartEnd) -> Mapping[str, str]:
        """Return the properties of the instance, and where it is silent those of its cell."""
        own = end.said.properties
        if end.source is None:
            return own
        view, cell = end.source.view, end.source.cell
        if not (view.properties or cell.properties):
            return own
        inherited = self._inherited.get(id(view))
        if inherited is None:
            pairs = property_pairs([*view.properties, *cell.properties], end.source.library.scales)
            inherited = {
                key: text for key, text in read_properties(pairs).items() if key not in _NOT_INHERITED
            }
            self._inherited[id(view)] = inherited
        return {**inherited, **own}

    # --------------------------------------------------------------------------------------------- pins

    def _pins(self, end: PartEnd, name: str, place: Place) -> list[Pin]:
        """Return the pins in the order of the cell's ports, then those that only the nets name."""
        reached = self._reached(end)
        numbers = {_key(end.source, port): number for port, number in end.said.pin_numbers.items()}
        pins: list[Pin] = []
        for bit in _bits(end.source, reached, numbers):
            number = numbers.get(bit.key) or bit.number
            nets = reached.get(bit.key)
            if not nets:
                pins.append(Pin(number, bit.display, "", place))
                continue
            pins += [Pin(number, bit.display, net, self._places.at(at)) for net, at in nets.items()]
            if len(nets) > 1:
                several = " and ".join([*nets][:2])
                message = f"pin {number or bit.display} of {name} is on {len(nets)} nets, {several}"
                self._notes.add("pin-mismatch", message, pins[-1].place, name)
        return pins

    def _reached(self, end: PartEnd) -> dict[str, dict[str, int]]:
        """Return for each port by its key the nets on it, and where each is said first."""
        reached: dict[str, dict[str, int]] = {}
        for port, piece, offset in end.connections:
            reached.setdefault(_key(end.source, port), {}).setdefault(self._net_at(piece), offset)
        return reached


def _model(end: PartEnd) -> str:
    if end.source:
        return end.source.cell.name.display
    return end.instance.cell.cell if end.instance.cell else ""


def _key(source: Source | None, port: str) -> str:
    keys = source.ports.keys(port) if source else ()
    return keys[0] if keys else port


def _bits(
    source: Source | None, reached: Mapping[str, object], numbers: Mapping[str, str]
) -> Iterable[PortBit]:
    """Return the pins of the cell, and behind them those that only the nets or the instance know.

    Where the cell is not defined there are only these; when all are numbers they are put in order.
    """
    known = source.ports.bits if source else []
    keys = {bit.key for bit in known}
    others = [key for key in dict.fromkeys([*reached, *numbers]) if key not in keys]
    if not known and all(is_number(key) for key in others):
        others.sort(key=int)
    return known + [PortBit(key, key, key if is_number(key) else "", False, 0) for key in others]
