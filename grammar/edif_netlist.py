"""The last step of reading EDIF: nets get their names, parts their pins, and both go into the Netlist."""

from __future__ import annotations

import re
from collections.abc import Iterable

from .edif_hierarchy import FlatCircuit
from .edif_notes import NoteKeeper
from .edif_parts import Built, PartBuilder
from .edif_places import Places
from .edif_sections import merge_sections
from .netlist import Net, Netlist, Place

_REWRITTEN_POINT = re.compile(r"[0-9]_[0-9]")


def write_netlist(flat: FlatCircuit, places: Places, netlist: Netlist, notes: NoteKeeper) -> None:
    """Fill `netlist` with the parts and nets of the flat circuit."""
    keys = _name_nets(flat, places, netlist, notes)
    find = flat.nets.find
    builder = PartBuilder(places, lambda piece: keys[find(piece)], notes)
    built: list[Built] = []
    flat.parts.reverse()
    while flat.parts:  # one goes as the other comes: both together take much memory
        built.append(builder.build(flat.parts.pop()))
    _add_parts(built, netlist, notes)
    for part in netlist.parts.values():
        for i, pin in enumerate(part.pins):
            if pin.net:
                netlist.nets[pin.net].pins.append((part.reference, i))


def _name_nets(flat: FlatCircuit, places: Places, netlist: Netlist, notes: NoteKeeper) -> dict[int, str]:
    """Add the nets that are drawn or reach a part, and return their keys by their first piece."""
    find = flat.nets.find
    roots = {find(piece) for piece in flat.drawn}
    roots.update(find(connection.piece) for part in flat.parts for connection in part.connections)
    unique = _UniqueNames()
    keys: dict[int, str] = {}
    for root in sorted(roots):
        label = flat.nets.label(root)
        key = keys[root] = unique.of(label.text)
        netlist.nets[key] = Net(label.text, places.at(label.offset))
        if key != label.text:
            message = f"two nets bear the name {label.text}; the second is kept as {key}"
            notes.add("name-collision", message, label.offset, key)
    _note_collisions(((key, net.place) for key, net in netlist.nets.items()), "nets", notes)
    return keys


def _add_parts(built: list[Built], netlist: Netlist, notes: NoteKeeper) -> None:
    """Add the parts: sections of one package as one, doubles under a name of their own, symbols not at all.

    What has one pin and no reference designator, where other parts have one, is a symbol.
    """
    has_references = any(entry.reference.is_stated for entry in built)
    groups: dict[str, list[Built]] = {}
    for entry in built:
        if not (has_references and entry.is_symbol):
            groups.setdefault(entry.part.reference, []).append(entry)
    unique = _UniqueNames()
    for reference, entries in groups.items():
        for part in merge_sections(entries, notes):
            part.reference = unique.of(reference)
            netlist.parts[part.reference] = part
            if part.reference != reference:
                message = f"the reference designator {reference} is written twice; this part is kept as "
                message += part.reference
                notes.add("duplicate-reference", message, part.place, part.reference)
    _note_parts(netlist, notes)


def _note_parts(netlist: Netlist, notes: NoteKeeper) -> None:
    for part in netlist.parts.values():
        if not part.fitted:
            message = f"{part.reference} is marked as not fitted, and left out of the circuit"
            notes.add("not-fitted", message, part.place, part.reference)
        if _REWRITTEN_POINT.search(part.value):
            message = (
                f"the value {part.value} of {part.reference} may hold _ where the exporter found a point"
            )
            notes.add("value-ambiguous", message, part.place, part.reference)
    references = ((part.reference, part.place) for part in netlist.parts.values())
    _note_collisions(references, "parts", notes)


def _note_collisions(names: Iterable[tuple[str, Place]], what: str, notes: NoteKeeper) -> None:
    """Note each name that differs from an earlier one by letter case only."""
    first: dict[str, str] = {}
    for name, place in names:
        earlier = first.setdefault(name.casefold(), name)
        if earlier != name:
            message = f"the {what} {earlier} and {name} differ by letter case only; both are kept"
            notes.add("name-collision", message, place, name)


class _UniqueNames:
    """Hands out each name once: the second `R1` is `R1#2`."""

    def __init__(self) -> None:
        self._taken: set[str] = set()
        self._counts: dict[str, int] = {}

    def of(self, name: str) -> str:
        """Return the name, or it with a number behind where it is taken."""
        unique = name
        while unique in self._taken:
            self._counts[name] = self._counts.get(name, 1) + 1
            unique = f"{name}#{self._counts[name]}"
        self._taken.add(unique)
        return unique
