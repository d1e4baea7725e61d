"""The words of a netlist: places, pins, parts."""

from __future__ import annotations

from pwmlint.grammar.netlist import NOTE_KINDS, Net, Netlist, Note, Part, Pin, Place

PLACE = Place("hive.cir", 3, 7)


def test_a_place_is_printed_as_editors_follow_it() -> None:
    assert str(PLACE) == "hive.cir:3:7"


def test_a_part_needs_no_more_than_what_a_file_says() -> None:
    pins = (Pin("1", "", "vout", PLACE), Pin("2", "", "", PLACE))
    part = Part(reference="R1", element="R", value="4k7", model="", pins=pins, place=PLACE)
    assert (part.attributes, part.pins_known, part.fitted) == ({}, "positions", True)
    assert part.pins[0].net == "vout"


def test_netlists_share_nothing() -> None:
    first, second = Netlist(file="a", format="SPICE list"), Netlist(file="b", format="SPICE list")
    first.nets["vout"] = Net(name="vout", place=PLACE)
    first.nets["vout"].pins.append(("R1", 0))
    first.notes.append(Note(kind="assumption", message="taken as ground", place=PLACE))
    assert (second.nets, second.notes, Net("x", PLACE).pins) == ({}, [], [])
    assert first.notes[0].subject == ""
    assert first.notes[0].kind in NOTE_KINDS
