"""From the occurrences of cells to parts: reference designator, value, attributes and pins."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import NamedTuple

from .edif_ends import Connection, PartEnd
from .edif_instances import Reference, property_pairs, reference_of
from .edif_library import Source
from .edif_places import Places
from .edif_ports import PortBit
from .netlist import Note, Part, Pin, Place
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

    def __init__(self, places: Places, net_at: Callable[[int], str], notes: list[Note]) -> None:
        self._places = places
        self._net_at = net_at
        self._notes = notes
        self._inherited: dict[int, dict[str, str]] = {}

    def build(self, end: PartEnd) -> Built:
        """Return the part for one occurrence."""
        properties = self._properties(end)
        reference = reference_of(end.instance, properties)
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
        own = read_properties(property_pairs(end.instance.properties, end.home.scales))
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
        reached = self._reached(end, name)
        numbers = _numbers(end)
        pins: list[Pin] = []
        for bit in _bits(end, reached, numbers):
            number = numbers.get(bit.key) or bit.number
            for connection in reached.get(bit.key, _UNCONNECTED):
                if connection is None:
                    pins.append(Pin(number, bit.display, "", place))
                else:
                    net = self._net_at(connection.piece)
                    pins.append(Pin(number, bit.display, net, self._places.at(connection.offset)))
        return pins

    def _reached(self, end: PartEnd, name: str) -> dict[str, list[Connection]]:
        """Return what nets reach by key of the port, each net once."""
        reached: dict[str, list[Connection]] = {}
        for connection in end.connections:
            key = _key(end.source, connection.port)
            others = reached.setdefault(key, [])
            nets = {self._net_at(other.piece) for other in others}
            net = self._net_at(connection.piece)
            if net in nets:
                continue
            if nets:
                message = f"pin {key} of {name} is on two nets, {others[0] and self._net_at(others[0].piece)} and {net}"
                self._notes.append(Note("pin-mismatch", message, self._places.at(connection.offset), name))
            others.append(connection)
        return reached


_UNCONNECTED: list[Connection | None] = [None]


def _model(end: PartEnd) -> str:
    if end.source:
        return end.source.cell.name.display
    return end.instance.cell.cell if end.instance.cell else ""


def _key(source: Source | None, port: str) -> str:
    keys = source.ports.keys(port) if source else ()
    return keys[0] if keys else port


def _numbers(end: PartEnd) -> Mapping[str, str]:
    """Return the pin numbers that the instance itself gives, by key of the port."""
    return {_key(end.source, pin.port): pin.number.strip() for pin in end.instance.pin_numbers}


def _bits(end: PartEnd, reached: Mapping[str, list[Connection]], numbers: Mapping[str, str]) -> list[PortBit]:
    """Return the pins of the cell, and behind them those that only the nets or the instance know.

    Where the cell is not defined there are only these; numbers among them are put in order.
    """
    known = end.source.ports.bits if end.source else []
    if end.source and len(reached) <= len(known) and all(end.source.ports.bit(key) for key in reached):
        return known
    keys = {bit.key for bit in known}
    others = [key for key in dict.fromkeys([*reached, *numbers]) if key not in keys]
    if not known and all(key.isdecimal() for key in others):
        others.sort(key=int)
    return known + [PortBit(key, key, key if key.isdecimal() else "", False, 0) for key in others]
