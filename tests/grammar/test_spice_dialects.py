"""Lists as five kinds of tool write them, each with its habits of naming and of line breaking."""

from __future__ import annotations

import pytest
from pwmlint.grammar.netlist import Netlist
from pwmlint.grammar.spice import read_spice


def nets_of(netlist: Netlist, reference: str) -> list[str]:
    return [pin.net for pin in netlist.parts[reference].pins]


@pytest.mark.construct(
    "B7 numbered nets, prefixed transistors, library paths with backslashes, a trailer card"
)
def test_numbered_nets_and_a_trailer() -> None:
    text = (
        "* C:\\orchard\\frost fan.asc\n"
        "M§Q1 N001 N002 0 0 FAN7\n"
        "R7 N001 N003 4.7k tol=1 pwr=0.25\n"
        "C5 N003 0 10µ Rser=15m\n"
        "XU1 N002 N003 NC_01 494X\n"
        ".lib C:\\orchard\\standard parts.dio\n"
        ".backanno\n"
        ".end\n"
    )
    netlist = read_spice(text, "frost-fan.net")
    assert list(netlist.parts) == ["Q1", "R7", "C5", "U1"]
    assert nets_of(netlist, "Q1") == ["N001", "N002", "0", "0"]
    assert netlist.parts["C5"].value == "10µ"
    assert netlist.parts["R7"].attributes["tol"] == "1"
    assert any(note.kind == "missing-library" for note in netlist.notes)


@pytest.mark.construct(
    "B7 prefixed references, wide blanks, dollar nets, waveforms on lines of their own, no end card"
)
def test_prefixed_references_and_dollar_nets() -> None:
    text = (
        "* source CIDER_PRESS\n"
        "R_R14         N14375 $N_0003  1k TC=0,0 \n"
        "C_C2          $N_0003 0  100n  TC=0,0 \n"
        "V_V1          N14375 0  \n"
        "+PULSE 0 10 0 1u 1u 10u 20u\n"
    )
    netlist = read_spice(text, "cider-press.net")
    assert list(netlist.parts) == ["R14", "C2", "V1"]
    assert nets_of(netlist, "R14") == ["N14375", "$N_0003"]
    assert netlist.parts["R14"].value == "1k"


@pytest.mark.construct("B7 nets named after pads and sheets, tabs, a title card")
def test_nets_named_after_pads() -> None:
    text = ".title schematic of the weather mast\nR1\tNet-_R1-Pad1_ /vout\t10k\t\nC1\t/vout GND\t100n\n.end\n"
    netlist = read_spice(text, "weather-mast.cir")
    assert netlist.name == "schematic of the weather mast"
    assert nets_of(netlist, "R1") == ["Net-_R1-Pad1_", "/vout"]
    assert nets_of(netlist, "C1") == ["/vout", "GND"]


@pytest.mark.construct("B7 digits and signed rails as nets")
def test_digits_and_signed_rails() -> None:
    text = "* written by a schematic tool\nR112 +5V 7 10k\nR113 7 0 10k\nC9 -12V 0 1u\n.end\n"
    netlist = read_spice(text, "bee-hive-scale.cir")
    assert nets_of(netlist, "R112") == ["+5V", "7"]
    assert nets_of(netlist, "C9") == ["-12V", "0"]


@pytest.mark.construct("B7 simulator deck with a title line and a control block")
def test_a_simulator_deck() -> None:
    text = (
        "irrigation pump, start-up\nV1 in 0 24\nR1 in out 1k\nR2 out 0 1k\n"
        ".control\nrun\nplot v(out)\n.endc\n.end\n"
    )
    netlist = read_spice(text, "irrigation-pump.cir")
    assert netlist.name == "irrigation pump, start-up"
    assert list(netlist.parts) == ["V1", "R1", "R2"]


@pytest.mark.construct("B7 parameters in braces behind the pins")
def test_parameters_in_braces() -> None:
    text = (
        "pump\nX1 a b DIVIDER {RT=2k}\n*SYM=DIVIDER\n.subckt DIVIDER 1 2 {RT=1k}\nR1 1 2 {RT}\n.ends\n.end\n"
    )
    netlist = read_spice(text, "irrigation-pump.cir")
    assert netlist.parts["X1/R1"].value == "2000"
