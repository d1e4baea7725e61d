"""Every element letter with its nodes, value and model: B3."""

from __future__ import annotations

import pytest
from pwmlint.grammar.errors import NetlistError
from pwmlint.grammar.netlist import Place
from pwmlint.grammar.spice import read_spice

from .spice_line import part, shape


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
