"""Reads EDIF 2 0 0, netlist views and schematic views alike, at the level of a board.

Other versions, and files that define keywords of their own, are refused. Sources: the grammar of EDIF 2 0 0
as it was published, and what schematic tools write in its name, which the tests show piece by piece.
"""

from __future__ import annotations

from lark import UnexpectedInput

from .collector import collector_paused
from .edif_budget import Budget
from .edif_builder import parse
from .edif_errors import check_beginning, check_dialect, explain
from .edif_forms import Edif
from .edif_hierarchy import FlatCircuit
from .edif_library import Libraries, Source
from .edif_netlist import write_netlist
from .edif_notes import NoteKeeper
from .edif_places import Places
from .errors import NetlistError
from .netlist import Netlist

_PADDING = "\x1a\0"  # old systems mark the end of a text, or fill up its last block


def read_edif(text: str, file: str) -> Netlist:
    """Return the netlist that an EDIF text describes.

    text: the whole file, decoded
    file: its name, for places and messages

    Raises NetlistError where the text is no EDIF 2 0 0, is damaged, or grows beyond all bounds.
    """
    with collector_paused():
        return _read(text if text[-1:] not in _PADDING else text.rstrip(_PADDING), file)


def _read(text: str, file: str) -> Netlist:
    places = Places(text, file)
    check_beginning(text, places)
    try:
        edif = parse(text)
    except UnexpectedInput as error:
        raise explain(error, text, places) from None
    check_dialect(edif, places)
    budget = Budget(places, len(text))
    libraries = Libraries(edif, budget)
    notes = NoteKeeper(places)
    top = _choose_top(edif, libraries, places, notes)
    flat = FlatCircuit(text, libraries, places, budget, notes)
    flat.flatten(top)
    netlist = Netlist(file, "EDIF 2 0 0", _title(edif), files=[file])
    write_netlist(flat, places, netlist, notes)
    for earlier, name, cell in libraries.collisions():
        message = f"the cells {earlier} and {name} differ by letter case only; both are kept"
        notes.add("name-collision", message, cell.name.offset, name)
    netlist.notes = notes.all()
    return netlist


def _title(edif: Edif) -> str:
    return edif.designs[0].name.display if edif.designs else edif.name.display


def _choose_top(edif: Edif, libraries: Libraries, places: Places, notes: NoteKeeper) -> Source:
    """Return the cell that is the whole circuit: of the first design, else the last one with contents."""
    found = [
        (design, source)
        for design in edif.designs
        if design.cell and (source := libraries.find(design.cell, None))
    ]
    filled = [(design, source) for design, source in found if source.view.is_filled()]
    if filled:
        design, source = filled[0]
        if len(edif.designs) > 1:
            message = f"the file holds {len(edif.designs)} designs; {design.name.display} is read"
            notes.add("assumption", message, design.name.offset, design.name.display)
        return source
    last = libraries.last_filled()
    if last is not None:
        name = last.cell.name
        message = f"no design form leads to a circuit; the last cell with contents, {name.display}, is read"
        notes.add("assumption", message, name.offset, name.display)
        return last
    if found:
        return found[0][1]
    raise NetlistError(
        "the file holds no circuit, only a library of cells or nothing at all",
        places.at(edif.name.offset),
        excerpt=places.line_at(edif.name.offset),
        expected="a cell with contents: instances and nets",
        remedy="export the netlist of the schematic, not its library",
    )
