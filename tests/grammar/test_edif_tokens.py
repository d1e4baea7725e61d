"""Tokens, strings and names of EDIF 2 0 0 as board exporters write them: A1, A2, A4."""

from __future__ import annotations

import pytest
from pwmlint.grammar.edif import read_edif

from .edif_board import DRIVER, R, board, kinds, only, pins, read

construct = pytest.mark.construct


@construct("A1 blanks are optional next to parentheses and quotes")
def test_blanks() -> None:
    netlist = read(
        f'( instance R1{R}( property\tVALUE(string"10k")))(net A( joined( portRef &1( instanceRef R1))))'
    )
    assert netlist.parts["R1"].value == "10k"
    assert pins(netlist) == {"A": ["R1.1"]}


@construct("A1 keywords in any case")
def test_keywords_in_any_case() -> None:
    text = board(
        f'(INSTANCE R1 {R} (Property Value (STRING "1k"))) (NET A (JOINED (PORTREF &1 (INSTANCEREF R1))))'
    )
    text = (
        text.replace("edifVersion", "EDIFVersion")
        .replace("keywordMap", "keywordmap")
        .replace("(library", "(Library")
    )
    netlist = read_edif(text, "orchard.edf")
    assert pins(netlist) == {"A": ["R1.1"]}
    assert netlist.parts["R1"].value == "1k"


@construct("A1 & marks an identifier and is no part of it")
def test_ampersand() -> None:
    netlist = read(
        f"(instance &R1 {R}) (net &GND (joined (portRef 1 (instanceRef R1)) (portRef &2 (instanceRef &R1))))"
    )
    assert pins(netlist) == {"GND": ["R1.1", "R1.2"]}


@construct("A1 names that equal keywords")
def test_names_that_equal_keywords() -> None:
    netlist = read(
        f"(instance net {R}) (instance joined {R}) (instance (rename e portRef) {R})".replace(
            "(rename e portRef)", '(rename e "instance")'
        )
        + "(net string (joined (portRef &1 (instanceRef net)) (portRef &1 (instanceRef joined)) "
        "(portRef &2 (instanceRef e))))" + '(net (rename and "AND")(joined (portRef &2 (instanceRef net))))'
    )
    assert pins(netlist) == {"string": ["net.1", "joined.1", "instance.2"], "AND": ["net.2"]}


@construct("A1 mixed-case files with CR LF")
def test_carriage_returns() -> None:
    text = board(
        f'(instance R1 {R} (property VALUE (string "4\n70")))\n(net A (joined (portRef &2 (instanceRef R1))))'
    )
    netlist = read_edif(text.replace("\n", "\r\n"), "orchard.edf")
    assert netlist.parts["R1"].value == "470"
    assert netlist.nets["A"].place.line == text[: text.index("(net A")].count("\n") + 1


@construct("A1 lines that end with CR alone")
def test_carriage_returns_alone() -> None:
    text = board(f"(instance R1 {R})\n(net A (joined (portRef &2 (instanceRef R1))))")
    netlist = read_edif(text.replace("\n", "\r"), "orchard.edf")
    assert netlist.nets["A"].place.line == text[: text.index("(net A")].count("\n") + 1


@construct("A1 integers of any size and comments")
def test_big_integers() -> None:
    netlist = read(f'(comment "a (" ") b") (instance R1 {R} (property SERIAL (integer 2397562737123456789)))')
    assert netlist.parts["R1"].attributes["serial"] == "2397562737123456789"


@construct("A1 names that differ by case only are reported, not merged")
def test_case_collision() -> None:
    netlist = read(
        f"(instance R1 {R}) (net m_data_0 (joined (portRef &1 (instanceRef R1))))"
        "(net m_DATA_0 (joined)) (net OTHER (joined (portRef &2 (instanceRef r1))))"
    )
    assert pins(netlist) == {"m_data_0": ["R1.1"], "m_DATA_0": [], "OTHER": ["R1.2"]}
    assert kinds(netlist) == ["name-collision"]


@construct("A1 exact spelling goes before folded case")
def test_exact_spelling_first() -> None:
    netlist = read(
        f"(instance r1 {R}) (instance R1 {R}) (net A (joined (portRef &1 (instanceRef R1))))"
        "(net B (joined (portRef &1 (instanceRef r1))))"
    )
    assert pins(netlist) == {"A": ["R1.1"], "B": ["r1.1"]}
    assert kinds(netlist) == ["name-collision"]


@construct("A1 cells that differ by case only")
def test_cells_that_differ_by_case() -> None:
    small = "(cell r (cellType GENERIC) (view V (viewType NETLIST) (interface (port A))))"
    large = "(cell R (cellType GENERIC) (view V (viewType NETLIST) (interface (port B))))"
    netlist = read("(instance X (viewRef V (cellRef r)))", more=small + large)
    assert [pin.name for pin in netlist.parts["X"].pins] == ["A"]
    assert kinds(netlist) == ["name-collision"]


@construct("A2 no backslash escape")
def test_backslashes() -> None:
    netlist = read(
        f'(instance R1 {R} (property VALUE (string "C:\\"))) (net (rename RES "R\\E\\S\\") (joined))'
    )
    assert netlist.parts["R1"].value == "C:\\"
    assert list(netlist.nets) == ["R\\E\\S\\"]


@construct("A2 string broken at column 80")
def test_broken_strings() -> None:
    netlist = read(
        f'(instance X1 {R} (designator "C8\n0") (property VALUE (string "10\n0n"))) (net '
        '(rename N "+\n5V") (joined))'
    )
    assert only(netlist.parts.values()).reference == "C80"
    assert netlist.parts["C80"].value == "100n"
    assert list(netlist.nets) == ["+5V"]


@construct("A2 % escapes, also cut by a line break")
def test_percent_escapes() -> None:
    netlist = read(
        f'(instance R1 {R} (property VALUE (string "10K,1%3\n7%")) (property NOTE (string "a%13 10%b%034%")))'
    )
    assert netlist.parts["R1"].value == "10K,1%"
    assert netlist.parts["R1"].attributes["note"] == 'a\r\nb"'


@construct("A2 a lone % stands for itself")
def test_lone_percent() -> None:
    netlist = read(f'(instance R1 {R} (property VALUE (string "10k 1% %a% 5%")))')
    assert netlist.parts["R1"].value == "10k 1% %a% 5%"


@construct("A2 long strings with parentheses")
def test_long_strings() -> None:
    text = "see (sheet) " * 200
    netlist = read(f'(instance R1 {R} (property NOTE (string "{text}")))')
    assert netlist.parts["R1"].attributes["note"] == text.strip()


@construct("A4 rename with a blank string: the identifier counts")
@pytest.mark.parametrize("blank", ['""', '"  "', '"\n"', '(stringDisplay "" (display X))'])
def test_blank_rename(blank: str) -> None:
    netlist = read(
        f'(instance (rename R1 {blank}) {R} (property VALUE (string "1k")))'
        f"(net (rename SENSE {blank}) (joined (portRef &1 (instanceRef R1))))"
    )
    assert list(netlist.parts) == ["R1"]
    assert [pin.net for pin in netlist.parts["R1"].pins] == ["SENSE", ""]


@construct("A4 rename with a stringDisplay, identifier as a name")
def test_renames() -> None:
    netlist = read(
        f'(instance (rename (name &_R1 (display X)) (stringDisplay "R 1" (display X))) {R})'
        '(net (rename (name &_3_3V (display X)) "+3.3V") (joined (portRef &1 (instanceRef &_R1))))'
    )
    assert pins(netlist) == {"+3.3V": ["R 1.1"]}


@construct("A4 rename strings need not be unique")
def test_equal_renames() -> None:
    netlist = read(
        f'(instance R1 {R}) (net (rename N1 "OUT") (joined (portRef &1 (instanceRef R1))))'
        '(net (rename N2 "OUT") (joined (portRef &2 (instanceRef R1))))'
    )
    assert pins(netlist) == {"OUT": ["R1.1"], "OUT#2": ["R1.2"]}
    assert kinds(netlist) == ["name-collision"]


@construct("A4 names of bus bits")
@pytest.mark.parametrize(
    ("display", "first"),
    [("a(7:0)", "a(7)"), ("a[7:0]", "a[7]"), ("B[3..0]", "B[3..0][0]"), ("a<0:7>", "a<0>"), ("a", "a[0]")],
)
def test_bus_bits(display: str, first: str) -> None:
    netlist = read(
        f'(instance U1 {DRIVER}) (net (array (rename N "{display}") 8) (joined (portRef D (instanceRef U1))))'
    )
    assert next(iter(netlist.nets)) == first
