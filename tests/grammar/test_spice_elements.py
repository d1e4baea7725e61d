"""Every element letter with its nodes, value and model; plain lists with any prefix: B3, B5, B8."""

from __future__ import annotations

import pytest
from pwmlint.grammar.errors import NetlistError
from pwmlint.grammar.netlist import Part, Place
from pwmlint.grammar.spice import read_spice

MODELS = """
.model RMOD R
.model DX D(Is=1e-14)
.model QX NPN(Bf=200)
.model MX NMOS
.model VX VDMOS(Rds=1m)
.model JX NJF
.model ZX NMF
.model SX SW(Ron=1)
.model OX LTRA
"""


def part(line: str, reference: str = "", cards: str = "") -> Part:
    netlist = read_spice(f"irrigation pump\n{line}\n{cards}\n", "pump.cir")
    return netlist.parts[reference] if reference else next(iter(netlist.parts.values()))


def shape(line: str, cards: str = MODELS) -> tuple[str, str, str, str]:
    found = part(line, cards=cards)
    return found.element, " ".join(pin.net for pin in found.pins), found.value, found.model


@pytest.mark.construct("B3 R")
@pytest.mark.parametrize(
    ("line", "expected"),
    [
        ("R1 a b 10k", ("R", "a b", "10k", "")),
        ("R1 a b 4k7", ("R", "a b", "4k7", "")),
        ("R1 a b R=10k", ("R", "a b", "10k", "")),
        ("R1 a b value=10k", ("R", "a b", "10k", "")),
        ("R1 a b RMOD", ("R", "a b", "", "RMOD")),
        ("R1 a b RMOD 10k", ("R", "a b", "10k", "RMOD")),
        ("R1 a b 10k RMOD", ("R", "a b", "10k", "RMOD")),
        ("R1 a b RMOD L=10u W=2u", ("R", "a b", "", "RMOD")),
        ("R1 a b 10k TC=0,0", ("R", "a b", "10k", "")),
        ("R1 a b 100 5%", ("R", "a b", "100 5%", "")),
        ("R1 a b 0.1 5W 1%", ("R", "a b", "0.1 5W 1%", "")),
        ("R1 a b", ("R", "a b", "", "")),
        ("R1 1 2", ("R", "1 2", "", "")),
        ("R1 a b DNP", ("R", "a b", "DNP", "")),
        ("Rsense a b 0R1", ("R", "a b", "0R1", "")),
    ],
)
def test_resistors(line: str, expected: tuple[str, ...]) -> None:
    assert shape(line) == expected


@pytest.mark.construct("B3 R of three nodes: a trimmer")
@pytest.mark.parametrize(
    "line",
    [
        "RV1 top wiper bottom 10k",
        "P1 top wiper bottom 10k",
        "VR1 top wiper bottom 10k",
        "POT1 top wiper bottom 10k",
    ],
)
def test_trimmers(line: str) -> None:
    assert shape(line) == ("R", "top wiper bottom", "10k", "")


def test_trimmers_on_numbered_nets_and_with_ratings() -> None:
    assert shape("RV1 3 2 1 10k") == ("R", "3 2 1", "10k", "")
    assert shape("RV1 3 2 1 10k 10% 0.5W") == ("R", "3 2 1", "10k 10% 0.5W", "")
    netlist = read_spice("pump\nR1 a b c 10k\n", "pump.cir")
    assert len(netlist.parts["R1"].pins) == 3
    assert [note.kind for note in netlist.notes] == ["assumption"]


@pytest.mark.construct("B3 C and L")
@pytest.mark.parametrize(
    ("line", "expected"),
    [
        ("C1 a b 100n", ("C", "a b", "100n", "")),
        ("C1 a b C = 10u IC=0", ("C", "a b", "10u", "")),
        ("C1 a b 0.01uf,16V", ("C", "a b", "0.01uf 16V", "")),
        ("C1 a b 100µ", ("C", "a b", "100µ", "")),
        ("C1 a b Q=1n*x", ("C", "a b", "", "")),
        ("L1 a b 47u IC=0", ("L", "a b", "47u", "")),
        ("L1 a b 47u Rser=10m", ("L", "a b", "47u", "")),
        ("L1 a b 4.7 u", ("L", "a b", "4.7 u", "")),
    ],
)
def test_capacitors_and_inductors(line: str, expected: tuple[str, ...]) -> None:
    assert shape(line) == expected


@pytest.mark.construct("B3 attributes of R, C and L")
def test_attributes_are_kept_with_their_keys_casefolded() -> None:
    found = part('C1 a b 100u Rser=20m V=35 mfg="Hive & Sons" TYPE = "low esr"')
    assert found.attributes == {"rser": "20m", "v": "35", "mfg": "Hive & Sons", "type": "low esr"}
    assert part("R7 out s 0.1 p=5 tol=1 package=2512").attributes == {"p": "5", "tol": "1", "package": "2512"}


@pytest.mark.construct("B3 K couples inductors, or is a relay")
def test_couplings_and_relays() -> None:
    netlist = read_spice(
        "pump\nL1 a b 1m\nL2 c d 1m\nK1 L1 L2 0.99\nK L1 L2 1\nK2 a b c d RELAY\n", "pump.cir"
    )
    coupling = netlist.parts["K1"]
    assert (coupling.element, coupling.value, list(coupling.pins)) == ("K", "0.99", [])
    assert coupling.attributes == {"couples": "L1 L2"}
    assert netlist.parts["K"].value == "1"
    assert (netlist.parts["K2"].element, netlist.parts["K2"].model, len(netlist.parts["K2"].pins)) == (
        "",
        "RELAY",
        4,
    )


@pytest.mark.construct("B3 V and I")
@pytest.mark.parametrize(
    ("line", "value", "waveform"),
    [
        ("V1 in 0 24", "24", ""),
        ("V1 in 0 DC 5", "5", ""),
        ("V1 in 0 dc=5 AC=1", "5", "AC 1"),
        ("V1 in 0 DC 5 AC 1 0", "5", "AC 1 0"),
        ("V1 in 0 5 PULSE(0 5 1u 1n 1n 5u 10u)", "5", "PULSE(0 5 1u 1n 1n 5u 10u)"),
        ("V1 in 0 PULSE (0 5 1u)", "", "PULSE (0 5 1u)"),
        ("V1 in 0 SIN(0,1,1k)", "", "SIN(0,1,1k)"),
        ("V1 in 0 SIN 0 1 1k", "", "SIN 0 1 1k"),
        ("V1 in 0 AC 1 DC 2", "2", "AC 1 DC 2"),
        ("V1 in 0 PWL file=mast.txt", "", "PWL"),
        ("V1 (in 0) 5", "5", ""),
        ("I1 in 0 10m", "10m", ""),
        ("V1 in 0", "", ""),
        ("V1 in 0 EXP(0 1 2)\n+ AC 1", "", "EXP(0 1 2) AC 1"),
    ],
)
def test_sources(line: str, value: str, waveform: str) -> None:
    found = part(line)
    assert [pin.net for pin in found.pins] == ["in", "0"]
    assert (found.value, found.attributes.get("waveform", "")) == (value, waveform)


def test_pairs_behind_a_waveform_are_attributes() -> None:
    found = part("V1 in 0 5 PULSE(0 1) Rser=0.1 tol = 2")
    assert found.attributes == {"rser": "0.1", "tol": "2", "waveform": "PULSE(0 1)"}
    assert part("V1 in 0 PWL file=mast.txt").attributes["file"] == "mast.txt"


@pytest.mark.construct("B3 E and G")
def test_sources_controlled_by_a_voltage() -> None:
    assert shape("E1 o 0 a b 10") == ("E", "o 0 a b", "10", "")
    assert shape("G1 (o 0) (a b) 1m") == ("G", "o 0 a b", "1m", "")


@pytest.mark.construct("B3 E, G, F and H with a law of their own")
@pytest.mark.parametrize(
    ("line", "law"),
    [
        ("E1 o 0 VALUE={V(a)*2}", "VALUE={V(a)*2}"),
        ("E1 o 0 VALUE = { V(a) * 2 }", "VALUE = { V(a) * 2 }"),
        ("E1 o 0 TABLE {V(a)} = (0,0) (1,5)", "TABLE {V(a)} = (0,0) (1,5)"),
        ("G1 o 0 POLY(2) (a,b) (c,d) 0 1 1", "POLY(2) (a,b) (c,d) 0 1 1"),
        ("E1 o 0 LAPLACE {V(a)} {1/(1+s)}", "LAPLACE {V(a)} {1/(1+s)}"),
        ("E1 o 0 vol='v(a)*2'", "vol='v(a)*2'"),
        ("F1 o 0 POLY(1) V1 0 1", "POLY(1) V1 0 1"),
    ],
)
def test_laws_are_kept_as_text(line: str, law: str) -> None:
    found = part(line)
    assert [pin.net for pin in found.pins] == ["o", "0"]
    assert found.attributes == {"expression": law}


@pytest.mark.construct("B3 F and H")
def test_sources_controlled_by_a_current() -> None:
    found = part("F1 o 0 V1 2")
    assert (found.element, found.value, found.attributes) == ("F", "2", {"through": "V1"})
    assert shape("H1 o 0 Vsense 50") == ("H", "o 0", "50", "")


@pytest.mark.construct("B3 B")
def test_behavioural_sources() -> None:
    found = part("B1 o 0 V = V(a) + max(1, 2)\n+ * 3")
    assert (found.element, found.attributes) == ("B", {"expression": "V = V(a) + max(1, 2) * 3"})
    assert part("B1 o 0 I=V(a)/1k tc1=0").element == "B"


@pytest.mark.construct("B3 D")
@pytest.mark.parametrize(
    ("line", "expected"),
    [
        ("D1 a k DX", ("D", "a k", "", "DX")),
        ("D1 a k 1N4148", ("D", "a k", "", "1N4148")),
        ("D1 a k DX 2", ("D", "a k", "", "DX")),
        ("D1 a k DX off", ("D", "a k", "", "DX")),
        ("D1 a c a2 BAV70", ("D", "a c a2", "", "BAV70")),
        ("D1 x y p m BRIDGE6", ("D", "x y p m", "", "BRIDGE6")),
        ("LED1 a k RED", ("D", "a k", "", "RED")),
        ("CR1 a k 1N4007", ("D", "a k", "", "1N4007")),
        ("ZD1 a k BZX84", ("D", "a k", "", "BZX84")),
    ],
)
def test_diodes(line: str, expected: tuple[str, ...]) -> None:
    assert shape(line) == expected


@pytest.mark.construct("B3 Q: three to five nodes")
@pytest.mark.parametrize(
    ("line", "expected"),
    [
        ("Q1 c b e QX", ("Q", "c b e", "", "QX")),
        ("Q1 c b e 2N2222", ("Q", "c b e", "", "2N2222")),
        ("Q1 c b e QX 2", ("Q", "c b e", "", "QX")),
        ("Q1 c b e BC547 2 off", ("Q", "c b e", "", "BC547")),
        ("Q1 c b e s QX", ("Q", "c b e s", "", "QX")),
        ("Q1 c b e s t QX 2", ("Q", "c b e s t", "", "QX")),
        ("Q1 c b e 0 BC547", ("Q", "c b e 0", "", "BC547")),
    ],
)
def test_bipolar_transistors(line: str, expected: tuple[str, ...]) -> None:
    assert shape(line) == expected


@pytest.mark.construct("B3 M: three or four nodes")
@pytest.mark.parametrize(
    ("line", "expected"),
    [
        ("M1 d g s b MX L=1u W=10u", ("M", "d g s b", "", "MX")),
        ("M1 d g s VX", ("M", "d g s", "", "VX")),
        ("M1 d g s BUZ11", ("M", "d g s", "", "BUZ11")),
        ("M1 d g s s BUZ11 m=2", ("M", "d g s s", "", "BUZ11")),
        ("MOV1 a b 275V", ("", "a b", "275V", "")),
    ],
)
def test_field_effect_transistors(line: str, expected: tuple[str, ...]) -> None:
    assert shape(line) == expected


@pytest.mark.construct("B3 J, Z, S, W, T, O")
@pytest.mark.parametrize(
    ("line", "expected"),
    [
        ("J1 d g s JX", ("J", "d g s", "", "JX")),
        ("J1 d g s JX 2", ("J", "d g s", "", "JX")),
        ("J1 a b c d e CONN5", ("", "a b c d e", "", "CONN5")),
        ("J1 a b CONN2", ("", "a b", "", "CONN2")),
        ("Z1 d g s ZX", ("Z", "d g s", "", "ZX")),
        ("Z1 a k BZX55", ("", "a k", "", "BZX55")),
        ("S1 a b c d SX", ("S", "a b c d", "", "SX")),
        ("S1 a b c d SX on", ("S", "a b c d", "", "SX")),
        ("SW1 a b PUSH", ("", "a b", "", "PUSH")),
        ("W1 a b Vsense SX", ("W", "a b", "", "SX")),
        ("T1 a 0 b 0 Z0=50 TD=1n", ("T", "a 0 b 0", "", "")),
        ("T1 p1 p2 s1 s2 s3 ETD39", ("", "p1 p2 s1 s2 s3", "", "ETD39")),
        ("O1 a 0 b 0 OX", ("O", "a 0 b 0", "", "OX")),
        ("OC1 a k e c OPTO4", ("", "a k e c", "", "OPTO4")),
    ],
)
def test_other_letters(line: str, expected: tuple[str, ...]) -> None:
    assert shape(line) == expected


@pytest.mark.construct("B3 U: a part of any number of nodes")
def test_integrated_circuits() -> None:
    assert shape("U1 a b zener") == ("U", "a b", "", "zener")
    assert shape("U1 1 2 3 4 5 6 7 8 9 10 11 12 13 14 15 16 494")[3] == "494"
    assert shape("IC1 in gnd out 7805") == ("U", "in gnd out", "", "7805")
    assert shape("VR1 in gnd out 7805") == ("U", "in gnd out", "", "7805")


@pytest.mark.construct("B3 U of a digital library")
def test_gates_of_a_digital_library() -> None:
    found = part("U1 NAND(2) $G_DPWR $G_DGND in1 in2 out D_00 IO_STD")
    assert found.model == "NAND(2)"
    assert [pin.net for pin in found.pins] == ["$G_DPWR", "$G_DGND", "in1", "in2", "out"]
    assert found.pins[0].place.column == 12


@pytest.mark.construct("B3 A: functions of eight nodes, code models with ports in brackets")
def test_code_models() -> None:
    assert shape("A1 0 N005 0 N011 0 0 N009 0 OR Vhigh=5")[1:] == ("0 N005 0 N011 0 0 N009 0", "", "OR")
    assert shape("A2 [in1 ~in2] out gate") == ("A", "in1 in2 out", "", "gate")
    found = part("A3 %vd(in1 in2) %v out amp")
    assert [pin.net for pin in found.pins] == ["in1", "in2", "out"]
    assert found.pins[0].place.column == 8


@pytest.mark.construct("B3 X: the name is the last positional word")
@pytest.mark.parametrize(
    "line",
    ["X1 a b c pump PARAMS: k=2", "X1 a b c pump k=2", "X1 a b c pump {k=2}", "X1 a b c params: k=2"],
)
def test_instances(line: str) -> None:
    found = part(line)
    assert found.model in ("pump", "c")
    assert found.attributes == {"k": "2"}


@pytest.mark.parametrize(
    ("line", "expected"),
    [
        ("R1 a b q w z", ("", "a b q w", "", "z")),
        ("A1 [=1", ""),
        ("A1 [in] ~ gate", ("A", "in", "", "gate")),
        ("ZD1 a", ""),
        ("DS1 gnd lamp", ("", "gnd lamp", "", "")),
        ("X1 a b {k=1} pump", ("X", "a", "", "b")),
        ("C1 a b c d", ("", "a b c", "", "d")),
    ],
)
def test_odd_lines(line: str, expected: tuple[str, ...] | str) -> None:
    if expected:
        assert shape(line) == expected
    else:
        with pytest.raises(NetlistError):
            part(line)


def test_nothing_behind_params_is_positional() -> None:
    found = part("X1 a b pump PARAMS: k")
    assert ([pin.net for pin in found.pins], found.model) == (["a", "b"], "pump")


@pytest.mark.construct("B3 X with a library file before the name")
def test_a_file_name_before_the_subcircuit_is_no_node() -> None:
    found = part("XU2 d g s ..\\lib\\buz11.spi BUZ11")
    assert ([pin.net for pin in found.pins], found.model) == (["d", "g", "s"], "BUZ11")
    assert found.attributes == {"library": "..\\lib\\buz11.spi"}


@pytest.mark.construct("B3 N, P, Y and any other reference prefix: a plain list")
@pytest.mark.parametrize(
    ("line", "expected"),
    [
        ("N1 a b va_model", ("N", "a b", "", "va_model")),
        ("P1 a b c d CPL", ("P", "a b c d", "", "CPL")),
        ("YPDE a b c", ("Y", "a b", "", "c")),
        ("CN1 a b c d HEADER4", ("", "a b c d", "", "HEADER4")),
        ("CN1 a b HEADER2", ("", "a b", "", "HEADER2")),
        ("F1 in out 2A", ("", "in out", "2A", "")),
        ("FB1 in out 600R", ("", "in out", "600R", "")),
        ("BR1 x y p m BRIDGE6", ("", "x y p m", "", "BRIDGE6")),
        ("BT1 p m 12V", ("", "p m", "12V", "")),
        ("RN1 1 2 3 4 5 10k", ("", "1 2 3 4 5", "10k", "")),
        ("TP1 vout", ("", "vout", "", "")),
        ("MH1 gnd", ("", "gnd", "", "")),
        ("ISO1 a k e c 4N35", ("", "a k e c", "", "4N35")),
        ("EC1 a b 100u", ("", "a b", "100u", "")),
        ("V9 a b c VARISTOR", ("", "a b c", "", "VARISTOR")),
        ("L1 a b c d CHOKE", ("", "a b c d", "", "CHOKE")),
        ("XTAL1 a b HC49", ("X", "a b", "", "HC49")),
        ("ÄX1 a b c", ("Ä", "a b", "", "c")),
    ],
)
def test_plain_lists(line: str, expected: tuple[str, ...]) -> None:
    assert shape(line) == expected


@pytest.mark.construct("B3 a part of two nodes without a model")
@pytest.mark.parametrize(
    "line", ["F1 vin vbat", "JP2 1 2", "FB3 vin 5V", "J4 vin gnd", "BT1 vin gnd", "SW1 a b"]
)
def test_two_words_are_two_nodes(line: str) -> None:
    reference, *nodes = line.split()
    netlist = read_spice(f"t\n{line}\n", "x.cir")
    assert [pin.net for pin in netlist.parts[reference].pins] == nodes
    assert [note.message for note in netlist.notes] == [
        f"{reference}: two words: taken as two nodes, without a model"
    ]


@pytest.mark.construct("B3 a part of one node: test point, hole, heat sink")
@pytest.mark.parametrize("line", ["TP1 vout", "H1 gnd", "HS2 gnd", "MP1 gnd", "MH1 gnd", "FID1 gnd"])
def test_parts_of_one_node(line: str) -> None:
    net = line.split()[1]
    assert shape(line) == ("", net, "", "")
    assert shape(f"{line} BIG") == ("", net, "", "BIG")


@pytest.mark.construct("B3 a value and its unit or a remark, with a blank between")
@pytest.mark.parametrize(
    ("line", "expected", "assumed"),
    [
        ("R1 a b 10 k", ("R", "a b", "10 k", ""), False),
        ("R1 a b 4.7 k 1%", ("R", "a b", "4.7 k 1%", ""), False),
        ("C1 a b 10 uF 25V", ("C", "a b", "10 uF 25V", ""), False),
        ("L1 a b 100 uH", ("L", "a b", "100 uH", ""), False),
        ("R1 a b 100 METAL", ("R", "a b", "100 METAL", ""), True),
        ("RN1 1 2 3 PACK", ("", "1 2 3", "", "PACK"), False),
        ("R1 1 2 3 10k", ("R", "1 2 3", "10k", ""), True),
    ],
)
def test_a_value_apart_from_its_unit(line: str, expected: tuple[str, ...], assumed: bool) -> None:
    assert shape(line, "") == expected
    assert bool(read_spice(f"t\n{line}\n", "x.cir").notes) is assumed


@pytest.mark.construct("B5 a decimal comma")
@pytest.mark.parametrize(
    ("line", "expected"),
    [
        ("R1 a b 4,7k", ("R", "a b", "4,7k", "")),
        ("R1 1 2 4,7 1%", ("R", "1 2", "4,7 1%", "")),
        ("V1 in 0 12,5", ("V", "in 0", "12,5", "")),
        ("R1,1,2,3,10k", ("R", "1 2 3", "10k", "")),
        ("R1 1, 2, 3, 10k", ("R", "1 2 3", "10k", "")),
        ("V1 in 0 12, AC 1", ("V", "in 0", "12", "")),
    ],
)
def test_a_decimal_comma_stays_in_the_value(line: str, expected: tuple[str, ...]) -> None:
    assert shape(line, "") == expected


def test_a_waveform_may_follow_a_decimal_comma() -> None:
    found = part("V1 in 0 12,5 AC 1")
    assert (found.value, found.attributes) == ("12,5", {"waveform": "AC 1"})


@pytest.mark.construct("A6 parts that are not fitted, in a list")
@pytest.mark.parametrize(
    ("line", "value", "model"),
    [
        ("R1 a b 10k DNP", "10k", ""),
        ("R1 a b 10k,1%,dni", "10k 1%", ""),
        ("R1 a b DNP", "DNP", ""),
        ("C1 a b NC", "NC", ""),
        ("C1 a b open", "open", ""),
        ("R1 a b 0R (not fitted)", "0R not fitted", ""),
        ("D1 a k BAT DNF", "", "BAT"),
        ("D1 a k DNP", "", "DNP"),
        ("Q1 c b e QX DNI", "", "QX"),
        ("U1 1 2 3 4 5 6 7 8 393 DNP", "", "393"),
    ],
)
def test_a_part_marked_as_not_fitted(line: str, value: str, model: str) -> None:
    netlist = read_spice(f"t\n{line}\n", "x.cir")
    (found,) = netlist.parts.values()
    assert (found.fitted, found.value, found.model) == (False, value, model)
    assert [(note.kind, note.subject) for note in netlist.notes] == [("not-fitted", found.reference)]


@pytest.mark.parametrize(
    "line", ["C1 a b 100 NF", "R1 a b 10k", "SW1 a b OPEN", "M1 d g s s NM", "D1 a k dnp"]
)
def test_what_only_looks_like_such_a_mark(line: str) -> None:
    netlist = read_spice(f"t\n{line}\n.model dnp d\n.model nm nmos\n", "x.cir")
    assert all(found.fitted for found in netlist.parts.values())


@pytest.mark.construct("B3 V and I")
def test_a_diode_may_go_by_vd_and_a_source_too() -> None:
    assert shape("VD1 a k 1N4148") == ("D", "a k", "", "1N4148")
    assert shape("VD1 d 0 5") == ("V", "d 0", "5", "")
    assert shape("VDD1 d 0 DC 5") == ("V", "d 0", "5", "")


@pytest.mark.construct("B8 number of nodes without a definition is an assumption")
def test_what_the_line_leaves_open_is_noted() -> None:
    notes = read_spice("pump\nQ1 c b e 0 BC547\nD1 a c a2 BAV70\n", "pump.cir").notes
    assert [note.subject for note in notes if note.kind == "assumption"] == ["Q1", "D1"]


@pytest.mark.construct("B8 a word that may be a parameter or a model")
def test_a_bare_word_is_a_model_a_parameter_or_a_value() -> None:
    cards = ".param rload=47\n.model rmod R\n"
    assert part("R1 a b rload", cards=cards).value == "47"
    assert part("R1 a b rload", cards=cards).attributes == {"expression": "rload"}
    assert part("R1 a b rmod", cards=cards).model == "rmod"
    assert part("R1 a b other", cards=cards).value == "other"


@pytest.mark.parametrize(
    "line",
    [
        "R1",
        "R1 a",
        "R1 a 10k",
        "C1 a 1n",
        "D1",
        "D1 a k",
        "D1 a 1N4148",
        "Q1 c b 2N2222",
        "M1 d g BUZ11",
        "V1 a",
        "E1 a",
        "U1 494",
        "U1",
        "K1 L1",
        "X1",
        "B1 a",
        "N1 a",
    ],
)
def test_too_few_nodes(line: str) -> None:
    with pytest.raises(NetlistError, match="too few nodes") as caught:
        part("  " + line)
    assert caught.value.place == Place("pump.cir", 2, 3)
    assert caught.value.expected
    assert caught.value.remedy


@pytest.mark.parametrize(
    ("line", "column", "mark"),
    [("R1 a b {x", 8, "{"), ('R1 a b "x', 8, '"'), ("R1 a b 'x", 8, "'"), ("R1 a b x}", 9, "}")],
)
def test_unbalanced_braces_and_quotes(line: str, column: int, mark: str) -> None:
    with pytest.raises(NetlistError) as caught:
        part(line)
    assert caught.value.place == Place("pump.cir", 2, column)
    assert f"`{mark}`" in caught.value.message


def test_pins_on_continuation_lines_have_exact_places() -> None:
    found = part("U1 (in1\n+  out1) ; first half\n*\n+\tvcc 494")
    assert [pin.place for pin in found.pins] == [
        Place("pump.cir", 2, 5),
        Place("pump.cir", 3, 4),
        Place("pump.cir", 5, 3),
    ]


@pytest.mark.construct("B5 numbers and C marking codes stay as written")
@pytest.mark.parametrize(
    "value",
    [
        "10kOhm",
        "1F",
        "4M7",
        "4k7",
        "1MEG",
        "100mil",
        "2m5",
        "R47",
        "1e-3wwww",
        "47uF",
        "1.5",
        ".5",
        "+3",
        "2meg5",
        "4R7",
    ],
)
def test_values_stay_as_written(value: str) -> None:
    assert part(f"R1 a b {value}").value == value
