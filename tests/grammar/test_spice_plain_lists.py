"""Plain lists with any prefix, values and marks as people write them, and what stays open: B3, B5, B8."""

from __future__ import annotations

import pytest
from pwmlint.grammar.spice import read_spice

from .spice_line import part, shape


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
