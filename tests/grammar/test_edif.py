"""Reading whole files: the four ways in which board exporters write EDIF."""

from __future__ import annotations

from pathlib import Path

import pytest
from pwmlint.grammar.edif import read_edif
from pwmlint.grammar.netlist import Netlist, Part, Place

FIXTURES = Path(__file__).parent / "fixtures" / "edif"


def read(name: str) -> Netlist:
    with (FIXTURES / name).open(encoding="utf-8", newline="") as file:
        return read_edif(file.read(), name)


def nets_of(part: Part) -> dict[str, str]:
    return {pin.number: pin.net for pin in part.pins}


@pytest.mark.construct("A5 (1) netlist view, values in properties")
def test_netlist_view() -> None:
    netlist = read("netlist_view.edf")
    assert (netlist.format, netlist.name) == ("EDIF 2 0 0", "frost_fan")
    assert list(netlist.parts) == ["U1", "R1", "R2", "C1"]
    assert list(netlist.nets) == ["VREF", "N00012", "N00013", "GND"]
    controller = netlist.parts["U1"]
    assert (controller.model, controller.value, controller.pins_known) == ("494", "494", "numbers")
    assert nets_of(controller) == {"4": "N00012", "5": "N00013", "7": "GND", "12": "", "14": "VREF"}
    resistor = netlist.parts["R1"]
    assert resistor.value == "10k 1%"
    assert resistor.attributes["package"] == "R_0805"
    assert (resistor.attributes["tolerance"], resistor.attributes["power"]) == ("1%", "0.125W")
    assert netlist.nets["GND"].pins == [("U1", 2), ("R2", 1), ("C1", 1)]


@pytest.mark.construct("A1 places")
def test_places_are_those_of_the_text() -> None:
    netlist = read("netlist_view.edf")
    assert netlist.parts["R1"].place == Place("netlist_view.edf", 52, 21)
    assert netlist.parts["R1"].pins[0].place == Place("netlist_view.edf", 69, 15)
    assert netlist.nets["VREF"].place == Place("netlist_view.edf", 66, 16)


@pytest.mark.construct("A5 (2) schematic view with pages")
def test_schematic_view() -> None:
    netlist = read("schematic_view.edf")
    assert netlist.name == "CIDER PRESS"
    assert list(netlist.parts) == ["U1", "R14", "U5"]
    assert set(netlist.nets) == {"GND", "N04503", "+5V", "LEVEL"}
    controller = netlist.parts["U1"]
    assert (controller.model, controller.value) == ("PWM 494", "PWM 494")
    assert [pin.name for pin in controller.pins] == ["DT CTRL", "CT", "GND", "REF"]
    assert nets_of(controller) == {"4": "N04503", "5": "", "7": "GND", "14": "+5V"}
    resistor = netlist.parts["R14"]
    assert resistor.value == "10K,1%"
    assert (resistor.attributes["voltage"], resistor.attributes["tolerance"]) == ("150V", "1%")
    assert nets_of(netlist.parts["U5"]) == {"3": "", "1": "LEVEL", "8": "+5V", "5": "LEVEL", "7": ""}


@pytest.mark.construct("A5 (3) schematic view in another spelling")
def test_other_spelling() -> None:
    netlist = read("other_spelling.edf")
    assert list(netlist.parts) == ["R3", "R4"]
    assert list(netlist.nets) == ["VANE", "O\\U\\T\\"]
    first, second = netlist.parts.values()
    assert (first.value, first.model, first.fitted) == ("2_OHM", "RESH", True)
    assert first.attributes["package"] == "0805"
    assert first.attributes["tolerance"] == "5%"
    assert (second.value, second.fitted) == ("0805-NC", False)
    assert [note.kind for note in netlist.notes] == ["not-fitted"]


@pytest.mark.construct("A5 (4) capitalised keywords, instance identifiers, no design form")
def test_capitalised_keywords() -> None:
    netlist = read("capitalised.edf")
    assert [(part.reference, part.value) for part in netlist.parts.values()] == [
        ("R1", "10k"),
        ("R2", "22k"),
        ("R3", "4700 ohm"),
    ]
    assert netlist.parts["R2"].attributes["tolerance"] == "2%"
    assert netlist.nets["LOAD CELL"].pins == [("R1", 0), ("R2", 0)]
    assert [note.kind for note in netlist.notes] == ["assumption"]
