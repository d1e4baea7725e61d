"""Subcircuits, references behind exporters' prefixes, controllers: formats B2, B3, B4, B6."""

from __future__ import annotations

import pytest
from pwmlint.grammar.errors import NetlistError
from pwmlint.grammar.netlist import Netlist, Place
from pwmlint.grammar.spice import read_spice


def read(*lines: str, keep: str = "") -> Netlist:
    text = "\n".join(("weather mast", *lines)) + "\n"
    return read_spice(text, "mast.cir", keep=lambda name: bool(keep) and keep in name)


def nets(netlist: Netlist, reference: str) -> list[str]:
    return [pin.net for pin in netlist.parts[reference].pins]


@pytest.mark.construct("B2 .subckt flattened with readable paths")
def test_instances_are_flattened() -> None:
    netlist = read(
        "Xpsu in out filter",
        "X2 out 0 filter",
        ".subckt filter a b",
        "L1 a n 10u",
        "C1 n b 1u",
        ".ends filter",
    )
    assert list(netlist.parts) == ["psu/L1", "psu/C1", "X2/L1", "X2/C1"]
    assert nets(netlist, "psu/L1") == ["in", "psu/n"]
    assert nets(netlist, "X2/C1") == ["X2/n", "0"]
    assert netlist.nets["out"].pins == [("psu/C1", 1), ("X2/L1", 0)]
    assert netlist.parts["psu/L1"].place == Place("mast.cir", 5, 1)


@pytest.mark.construct("B2 .macro and .eom")
def test_a_macro_is_a_subcircuit() -> None:
    assert list(read("X1 a b m", ".macro m a b", "R1 a b 1", ".eom m").parts) == ["X1/R1"]


@pytest.mark.construct("B2 .subckt nested, local in scope")
def test_subcircuits_inside_subcircuits() -> None:
    netlist = read(
        "X1 a outer",
        "X2 a inner",
        ".subckt outer p",
        ".subckt inner q",
        "R1 q 0 {r}",
        ".ends inner",
        "X1 p inner",
        "R2 p 0 2",
        ".param r=7",
        ".ends outer",
    )
    assert netlist.parts["X1/X1/R1"].value == "7"
    assert netlist.parts["X2"].model == "inner"  # not visible outside
    assert [note.kind for note in netlist.notes] == ["missing-library"]


@pytest.mark.construct("B2 .subckt with parameters and defaults")
def test_parameters_of_instances() -> None:
    netlist = read(
        "X1 a s r=2k",
        "X2 a s PARAMS: r={2*base}",
        "X3 a s",
        "X4 a s {r=5}",
        ".param base=100",
        ".subckt s p PARAMS: r=1k c={r/1e12}",
        "R1 p 0 {r}",
        "C1 p 0 {c}",
        ".ends",
    )
    assert [netlist.parts[f"X{n}/R1"].value for n in (1, 2, 3, 4)] == ["2000", "200", "1000", "5"]
    assert netlist.parts["X1/C1"].value == "2e-09"


@pytest.mark.construct("B2 .subckt {k=v} in braces and defaults never asked for")
def test_defaults_in_braces() -> None:
    netlist = read("X1 a s {N=3}", ".subckt s p {FS=100K L=100U N=???}", "R1 p 0 {N}", "L1 p 0 {L}", ".ends")
    assert (netlist.parts["X1/R1"].value, netlist.parts["X1/L1"].value) == ("3", "0.0001")


@pytest.mark.construct("B2 .subckt OPTIONAL: and TEXT:")
def test_optional_nodes_have_defaults() -> None:
    netlist = read(
        "X1 a gate",
        "X2 a vdd gate",
        '.subckt gate p OPTIONAL: DPWR=$G_DPWR DGND=$G_DGND PARAMS: m=1 TEXT: t="x"',
        "R1 p DPWR 1",
        "R2 p DGND 1",
        ".ends",
    )
    assert nets(netlist, "X1/R1") == ["a", "$G_DPWR"]
    assert nets(netlist, "X2/R1") == ["a", "vdd"]
    assert nets(netlist, "X2/R2") == ["a", "$G_DGND"]


@pytest.mark.construct("B2 .subckt with one pin on each continuation line, commented")
def test_a_subcircuit_with_a_line_for_each_pin() -> None:
    netlist = read("X1 a b s", ".subckt s", "+ in ; the input", "+ out ; the output", "R1 in out 1", ".ends")
    assert nets(netlist, "X1/R1") == ["a", "b"]


@pytest.mark.construct("B4 ground: 0 and GND in any letter case are one net")
def test_ground() -> None:
    netlist = read("R1 a GND 1", "R2 a 0 1", "R3 a gnd 1", "R4 a GND! 1")
    assert list(netlist.nets) == ["a", "GND"]
    assert [note.kind for note in netlist.notes] == ["assumption"]
    assert list(read("R1 a 0 1", "R2 a 00 1").nets) == ["a", "0", "00"]


@pytest.mark.construct("B4 GND as a formal node is local")
def test_a_formal_ground_is_what_it_is_connected_to() -> None:
    netlist = read("X1 a vee s", ".subckt s p GND", "R1 p gnd 1", "R2 p 0 1", ".ends")
    assert nets(netlist, "X1/R1") == ["a", "vee"]
    assert nets(netlist, "X1/R2") == ["a", "0"]


@pytest.mark.construct("B4 nodes inside an instance: X1.n and X1:n")
def test_nodes_inside_instances() -> None:
    netlist = read("R1 X1.n 0 1", "R2 x1:P 0 1", "X1 a s", ".subckt s p", "R1 p n 1", ".ends", "R3 V1.5 0 1")
    assert netlist.nets["X1/n"].pins == [("R1", 0), ("X1/R1", 1)]
    assert nets(netlist, "R2") == ["a", "0"]
    assert nets(netlist, "R3") == ["V1.5", "0"]


def test_a_net_of_the_deck_that_is_named_like_a_net_of_a_sheet_is_another() -> None:
    netlist = read("R1 X1/n 0 1", "X1 a s", ".subckt s p", "R1 p n 1", ".ends")
    assert netlist.nets["X1/n"].pins == [("R1", 0)]
    assert netlist.nets["X1/n#2"].pins == [("X1/R1", 1)]


@pytest.mark.construct("B3 references behind exporters' prefixes")
@pytest.mark.parametrize(
    ("line", "reference", "element"),
    [
        ("XU1 a b amp", "U1", "X"),
        ("X_U1A a b amp", "U1A", "X"),
        ("R_R14 a b 1k", "R14", "R"),
        ("r_r14 a b 1k", "r14", "R"),
        ("D_LED1 a b red", "LED1", "D"),
        ("M§Q1 a g s BUZ11", "Q1", "M"),
        ("X§U1 a b amp", "U1", "X"),
        ("X1 a b amp", "X1", "X"),
        ("V_Vclock a 0 5", "V_Vclock", "V"),
        ("R_in1 a b 1k", "R_in1", "R"),
        ("RS_S1 a b 1k", "RS_S1", "R"),
        ("XTAL1 a b HC49", "XTAL1", "X"),
    ],
)
def test_references_are_recovered(line: str, reference: str, element: str) -> None:
    netlist = read(line)
    assert list(netlist.parts) == [reference]
    assert netlist.parts[reference].element == element
    assert netlist.nets["a"].pins == [(reference, 0)]


def test_a_reference_that_another_part_has_is_left() -> None:
    netlist = read("XU1 a b amp", "U1 a b amp", "R_R1 a b 1", "X_R1 a b amp")
    assert list(netlist.parts) == ["XU1", "U1", "R_R1", "X_R1"]
    assert [note.subject for note in netlist.notes if note.kind == "assumption"] == ["XU1", "R_R1", "X_R1"]


def test_couplings_and_controlling_sources_follow_the_recovered_names() -> None:
    netlist = read(
        "X1 a s",
        ".subckt s p",
        "L_L1 p 0 1u",
        "L_L2 n 0 1u",
        "K1 L_L1 L_L2 1",
        "V_V1 p m 0",
        "F1 n 0 V_V1 2",
        ".ends",
    )
    assert netlist.parts["X1/K1"].attributes == {"couples": "X1/L1 X1/L2"}
    assert netlist.parts["X1/F1"].attributes == {"through": "X1/V1"}


def test_a_reference_written_twice_gets_a_number() -> None:
    netlist = read("R1 a b 1", "r1 a b 2", "R1 a b 3", "X1 a s", "X1 b s", ".subckt s p", "R1 p 0 1", ".ends")
    assert list(netlist.parts) == ["R1", "r1#2", "R1#3", "X1/R1", "X1#2/R1"]
    assert [note.kind for note in netlist.notes] == ["duplicate-reference"] * 3


@pytest.mark.construct("B8 several subcircuits of one name: the first holds, and it is noted")
def test_a_subcircuit_defined_twice() -> None:
    netlist = read("X1 a s", ".subckt s p", "R1 p 0 1", ".ends", ".subckt S p", "R1 p 0 2", ".ends")
    assert netlist.parts["X1/R1"].value == "1"
    assert [(note.kind, note.subject) for note in netlist.notes] == [("assumption", "S")]


DATASHEET = "1IN+ 1IN- FB DTC CT RT GND C1 E1 E2 C2 VCC OC REF 2IN- 2IN+"
LIBRARY_ORDERS = {
    "datasheet order by name": (DATASHEET, "names"),
    "datasheet order by number": (" ".join(str(n) for n in range(1, 17)), "numbers"),
    "another order by name": ("IN1 -IN1 IN2 -IN2 FB DTC Vref OCT CT1 ET1 CT2 ET2 Ct Rt GND Vcc", "names"),
    "a third order by name": ("Vcc OCT CT1 ET1 CT2 ET2 GND VREF Rt Ct DTC FB -IN2 IN2 -IN1 IN1", "names"),
    "pin numbers in another order": ("1 2 15 16 3 4 13 14 5 6 9 10 11 8 12 7", "numbers"),
    "numbers with gaps": ("1 2 4 5 8 9 10 11 12 13 14 15 16", "positions"),
    "internal node numbers": ("3 14 15 1 18 4 20 2", "positions"),
}


@pytest.mark.construct("B6 pin order of controllers: formal nodes name the pins")
@pytest.mark.parametrize(("formals", "known"), LIBRARY_ORDERS.values(), ids=list(LIBRARY_ORDERS))
def test_a_controller_stays_a_part_with_its_formal_nodes(formals: str, known: str) -> None:
    count = len(formals.split())
    nodes = " ".join(f"n{index}" for index in range(1, count + 1))
    netlist = read(
        f"XU1 {nodes} XX494", f".subckt XX494 {formals}", "R1 1 nowhere {unread", ".ends", keep="494"
    )
    controller = netlist.parts["U1"]
    assert list(netlist.parts) == ["U1"]
    assert controller.pins_known == known
    assert [pin.name for pin in controller.pins] == formals.split()
    numbers = formals.split() if known == "numbers" else [str(n) for n in range(1, count + 1)]
    assert [pin.number for pin in controller.pins] == numbers
    assert [pin.net for pin in controller.pins] == nodes.split()


@pytest.mark.construct("B6 controller without a definition: positions only")
def test_a_controller_without_a_definition() -> None:
    controller = read("XU1 a b c XX494", keep="494").parts["U1"]
    assert (controller.pins_known, [pin.number for pin in controller.pins]) == ("positions", ["1", "2", "3"])
    assert {pin.name for pin in controller.pins} == {""}


@pytest.mark.construct("B6 controller inside a sheet")
def test_a_controller_inside_a_sheet() -> None:
    netlist = read(
        "Xpsu in drive",
        ".subckt drive p",
        "XU1 p n 0 XX494",
        ".subckt XX494 VCC FB GND",
        ".ends",
        ".ends",
        keep="494",
    )
    assert nets(netlist, "psu/U1") == ["in", "psu/n", "0"]
    assert [pin.name for pin in netlist.parts["psu/U1"].pins] == ["VCC", "FB", "GND"]


def test_a_plain_part_takes_its_pin_names_from_a_subcircuit_at_hand() -> None:
    netlist = read("U1 a b XX494", ".subckt XX494 VCC GND", "R1 VCC GND 1", ".ends")
    assert [pin.name for pin in netlist.parts["U1"].pins] == ["VCC", "GND"]


@pytest.mark.construct("B6 nodes that do not fit the definition")
def test_a_number_of_nodes_that_does_not_fit_is_noted() -> None:
    for keep in ("", "s"):
        netlist = read("X1 a b c s", ".subckt s p q", "R1 p q 1", ".ends", keep=keep)
        assert netlist.parts["X1"].pins_known == "positions"
        assert [(note.kind, note.subject) for note in netlist.notes] == [("pin-mismatch", "X1")]


def test_a_subcircuit_at_no_hand_is_noted_once() -> None:
    netlist = read("X1 a b s", "X2 a b S")
    assert list(netlist.parts) == ["X1", "X2"]
    assert [(note.kind, note.subject) for note in netlist.notes] == [("missing-library", "s")]


def test_a_list_of_subcircuits_alone_is_read_from_the_last() -> None:
    netlist = read(
        ".subckt filter a b",
        "R1 a b {r}",
        ".param r=3",
        ".ends",
        ".subckt mast in",
        "X1 in 0 filter",
        "C1 in 0 1u",
        ".ends",
    )
    assert list(netlist.parts) == ["X1/R1", "C1"]
    assert nets(netlist, "C1") == ["in", "0"]
    assert [(note.kind, note.subject) for note in netlist.notes] == [("assumption", "mast")]


@pytest.mark.parametrize(
    ("lines", "message"),
    [
        (["X1 a s", ".subckt s p", "X1 p s", "R1 p 0 1", ".ends"], "the subcircuit s contains itself"),
        (
            ["X1 a s", ".subckt s p", "X1 p t", ".ends", ".subckt t p", "X1 p s", ".ends"],
            "the subcircuit s contains itself: s -> t -> s",
        ),
    ],
)
def test_recursion_is_an_error(lines: list[str], message: str) -> None:
    with pytest.raises(NetlistError) as caught:
        read(*lines)
    assert caught.value.message == message


def test_an_error_inside_a_subcircuit_is_told_once_for_all_instances() -> None:
    with pytest.raises(NetlistError, match="unknown name r") as caught:
        read("X1 a s", "X2 a s", ".subckt s p", "R1 p 0 {r}", ".ends")
    assert caught.value.also == ()
    assert caught.value.place == Place("mast.cir", 5, 9)


def test_pins_behave_as_a_sequence() -> None:
    pins = read("U1 a b c 494").parts["U1"].pins
    assert len(pins) == 3
    assert pins[0] == pins[-3]
    assert pins[1:] == (pins[1], pins[2])
    assert list(pins) == list(reversed(list(reversed(pins))))
    assert pins == tuple(pins)
    assert pins == read("U1 a b c 494").parts["U1"].pins
    assert hash(pins) == hash(tuple(pins))
    assert repr(pins) == repr(tuple(pins))
    assert pins[0] in pins
