"""Ordinary SPICE-style lists of our orchard, read end to end."""

from __future__ import annotations

import pytest
from pwmlint.grammar.errors import NetlistError
from pwmlint.grammar.netlist import Netlist, Place
from pwmlint.grammar.spice import read_spice

FROST_FAN = """\
Frost fan drive, control board
U1 fb ref comp dt ct rt gnd c1 e1 e2 c2 vcc oc vref in2m in2p 494
R1 vref fb 4k7 ; upper
R2 fb 0 {rb*2}
.param rb=2.35k
C1 ct GND
* the timing capacitor goes on:
+ 10n
RV1 vref dt 0 10k
Q1 c1 b1 0 2N2222
Xpsu vcc vref sheet
.subckt sheet a b
R1 a n 10 tol=1 package=2512
C1 n b 1u
.ends
V1 vcc 0 DC 24 PULSE(0 1 2)
.end
"""


def read(text: str) -> Netlist:
    return read_spice(text, "fan.cir")


def test_an_ordinary_deck_gives_its_parts_nets_and_places() -> None:
    netlist = read(FROST_FAN)
    assert netlist.name == "Frost fan drive, control board"
    assert list(netlist.parts) == ["U1", "R1", "R2", "C1", "RV1", "Q1", "psu/R1", "psu/C1", "V1"]
    controller = netlist.parts["U1"]
    assert (controller.element, controller.model, len(controller.pins)) == ("U", "494", 16)
    assert [pin.number for pin in controller.pins][-1] == "16"
    assert netlist.parts["R1"].value == "4k7"
    assert netlist.parts["R2"].value == "4700"
    assert netlist.parts["R2"].attributes == {"expression": "{rb*2}"}
    assert netlist.parts["psu/R1"].attributes == {"tol": "1", "package": "2512"}
    assert netlist.parts["V1"].value == "24"
    assert [pin.net for pin in netlist.parts["RV1"].pins] == ["vref", "dt", "gnd"]
    assert netlist.nets["psu/n"].pins == [("psu/R1", 1), ("psu/C1", 0)]
    assert netlist.parts["C1"].pins[1].place == Place("fan.cir", 6, 7)


def test_too_few_nodes_is_an_error_under_a_caret() -> None:
    with pytest.raises(NetlistError) as caught:
        read("cider press\nR1 a 10k\n")
    assert caught.value.place == Place("fan.cir", 2, 1)
    assert caught.value.excerpt == "R1 a 10k"
