"""Physical lines, comments, continuation lines, separators: formats B1."""

from __future__ import annotations

import pytest
from pwmlint.grammar.errors import NetlistError
from pwmlint.grammar.netlist import Netlist, Place
from pwmlint.grammar.spice import read_spice
from pwmlint.grammar.spice_lines import Source


def read(*lines: str) -> Netlist:
    return read_spice("\n".join(("bee-hive scale", *lines)) + "\n", "hive.cir")


def nets(netlist: Netlist, reference: str) -> list[str]:
    return [pin.net for pin in netlist.parts[reference].pins]


@pytest.mark.construct("B1 title: the first line, whatever it holds")
def test_the_first_line_is_the_title_whatever_it_holds() -> None:
    netlist = read_spice("* Cider press, rev C\nR1 a b 1k\n", "press.cir")
    assert netlist.name == "Cider press, rev C"
    assert list(netlist.parts) == ["R1"]


@pytest.mark.construct("B1 title that reads as an element")
def test_a_first_line_that_reads_as_an_element_is_noted() -> None:
    netlist = read_spice("R1 a b 1k\nR2 a b 1k\n", "press.cir")
    assert list(netlist.parts) == ["R2"]
    (note,) = netlist.notes
    assert (note.kind, note.subject, note.place) == ("title-line", "R1", Place("press.cir", 1, 1))


@pytest.mark.construct("B1 title that reads as a card")
def test_a_first_line_that_reads_as_a_card_is_noted() -> None:
    netlist = read_spice('.include "494.lib"\nR2 a b 1k\n', "press.cir")
    assert [note.kind for note in netlist.notes] == ["title-line"]


@pytest.mark.parametrize(
    "title", ["Rev2 of the fan", "Fan1", "Cider press 12 V", "", "* source PRESS", "fan2: the new one"]
)
def test_words_are_no_element(title: str) -> None:
    assert read_spice(f"{title}\nR2 a b 1k\n", "press.cir").notes == []


@pytest.mark.construct("B1 .title card overrides the title line")
def test_a_title_card_gives_the_name() -> None:
    assert read(".title Weather mast", "R1 a b 1k").name == "Weather mast"
    assert read_spice(".title Weather mast\nR1 a b 1k\n", "mast.cir").name == "Weather mast"
    assert read_spice(".title Weather mast\nR1 a b 1k\n", "mast.cir").notes == []


@pytest.mark.construct("B1 title with continuation lines")
def test_a_title_may_be_continued() -> None:
    assert list(read_spice("The mast\n+ and its lamp\nR1 a b 1k\n", "mast.cir").parts) == ["R1"]


@pytest.mark.construct("B1 comment lines: *, # and //")
@pytest.mark.parametrize("comment", ["* R2 a b 1k", "  * R2 a b 1k", "# R2 a b 1k", "// R2 a b 1k"])
def test_comment_lines(comment: str) -> None:
    assert list(read(comment, "R1 a b 1k", comment).parts) == ["R1"]


@pytest.mark.construct("B1 comment to the end of the line: ;, $ and //")
@pytest.mark.parametrize("comment", [" ; 5 % R2", ";R2", "\t$ R2", " $note", ", $ R2", " // R2"])
def test_comments_to_the_end_of_a_line(comment: str) -> None:
    netlist = read("R1 a b 1k" + comment, "R2 b c 2k")
    assert (netlist.parts["R1"].value, len(netlist.parts)) == ("1k", 2)


@pytest.mark.construct("B1 dollar sign in names")
def test_a_dollar_sign_begins_a_name_where_an_exporter_writes_such_names() -> None:
    netlist = read(
        "R_R1  $N_0001 0  1k TC=0,0  ", "C_C1  $N_0001 $G_DPWR 1n ;x", "R_R3 $N_0001 0 3k $ said twice"
    )
    assert nets(netlist, "R1") == ["$N_0001", "0"]
    assert nets(netlist, "C1") == ["$N_0001", "$G_DPWR"]
    assert netlist.parts["R3"].value == "3k"
    assert netlist.parts["R1"].attributes["tc"] == "0,0"


@pytest.mark.construct("B8 dollar sign: comment or name")
def test_a_comment_that_might_be_a_name_is_noted_once() -> None:
    netlist = read("R1 a b 1k ; $x", "* $y", "R2 a b 1k $z", "R3 a b 1k $w", "R4 a b 1k $ w")
    assert [(note.kind, note.place.line, note.place.column) for note in netlist.notes] == [
        ("assumption", 4, 11)
    ]


@pytest.mark.construct("B1 quotes and braces protect comment characters")
def test_quotes_and_braces_protect_comment_characters() -> None:
    netlist = read(
        'C1 a b 1u mfg="hive; sons" ; real comment', "B1 x 0 V={a;b} ; comment", "B2 y 0 V='a $ b'"
    )
    assert netlist.parts["C1"].attributes == {"mfg": "hive; sons"}
    assert netlist.parts["B1"].attributes["expression"] == "V={a;b}"
    assert netlist.parts["B2"].attributes["expression"] == "V='a $ b'"


def test_a_brace_that_stays_open_on_its_line_protects_nothing() -> None:
    netlist = read(".param x={1 + ; first", "+ 2}", "R1 a b {x}")
    assert netlist.parts["R1"].value == "3"


@pytest.mark.construct("B1 continuation")
def test_continuation_lines_join() -> None:
    netlist = read("U1 a b", "+c d", "  + e f", "+494")
    assert nets(netlist, "U1") == ["a", "b", "c", "d", "e", "f"]
    assert netlist.parts["U1"].model == "494"


@pytest.mark.construct("B1 continuation with comments between")
def test_comments_and_blank_lines_may_stand_between() -> None:
    netlist = read(
        "R1 a ; upper",
        "* the lower end:",
        "",
        "   ",
        "# here",
        "+ b",
        "* and its value",
        "+ 4k7",
        "R2 b c 1k",
    )
    assert nets(netlist, "R1") == ["a", "b"]
    assert netlist.parts["R1"].value == "4k7"
    places = [pin.place for pin in netlist.parts["R1"].pins]
    assert places == [Place("hive.cir", 2, 4), Place("hive.cir", 7, 3)]
    assert netlist.parts["R2"].place == Place("hive.cir", 10, 1)


@pytest.mark.construct("B1 continuation without a blank after the plus sign")
def test_the_plus_sign_separates() -> None:
    netlist = read("V1 in 0", "+PULSE 0 10 1u", "D1 a k", "+DX area=2")
    assert netlist.parts["V1"].attributes["waveform"] == "PULSE 0 10 1u"
    assert netlist.parts["D1"].model == "DX"


@pytest.mark.construct("B1 continuation by a double backslash")
def test_a_double_backslash_continues() -> None:
    netlist = read("R1 a b \\\\", "  4k7", "R2 a b 1k")
    assert netlist.parts["R1"].value == "4k7"
    assert netlist.parts["R2"].place.line == 4


@pytest.mark.construct("B1 expressions over several lines")
def test_a_brace_may_close_on_a_later_line() -> None:
    netlist = read(".PARAM Q=2 G=", "+ {10**(Q", "+ +1)}", "R1 a b {G}")
    assert netlist.parts["R1"].value == "1000"


@pytest.mark.construct("B1 .end stops the list")
def test_nothing_behind_the_end_card_is_read() -> None:
    assert list(read("R1 a b 1k", ".END", "R2 a b {broken").parts) == ["R1"]


@pytest.mark.construct("B1 .end missing, last line without a line end")
def test_the_end_card_may_be_missing() -> None:
    assert list(read_spice("mast\nR1 a b 1k", "mast.cir").parts) == ["R1"]


@pytest.mark.construct("B1 letter case of nodes, names and keywords")
def test_letter_case_is_ignored_and_the_first_spelling_kept() -> None:
    netlist = read(
        "r1 Vout fb 1k", "R2 FB gnd 1k", "XB VOUT sheet", ".SUBCKT Sheet A", "R3 a 0 1k", ".Ends SHEET"
    )
    assert list(netlist.nets) == ["Vout", "fb", "gnd"]
    assert netlist.nets["Vout"].pins == [("r1", 0), ("B/R3", 0)]
    assert [(note.kind, note.subject) for note in netlist.notes if note.kind == "name-collision"] == [
        ("name-collision", "fb"),
        ("name-collision", "Vout"),
    ]


@pytest.mark.construct("B1 separators: blank, tab, comma, parentheses, equals sign")
@pytest.mark.parametrize(
    "line", ["R1 (a b) 10k", "R1,a,b,10k", "R1\ta\tb\t10k\t", "R1 a,b R=10k", "R1 a b R = 10k", "R1(a,b) 10k"]
)
def test_separators(line: str) -> None:
    netlist = read(line)
    assert nets(netlist, "R1") == ["a", "b"]
    assert netlist.parts["R1"].value == "10k"


@pytest.mark.construct("B1 characters of names")
@pytest.mark.parametrize(
    "name",
    [
        "/vout",
        "Net-_R1-Pad2_",
        "Net-(C1-Pad1)",
        "+5V",
        "V+",
        "in1'",
        "N$1",
        "a.b",
        "[3]",
        "<7>",
        "x#",
        "~CS",
        "a^b",
        "%q",
        "@w",
        "\\RST\\",
        "a-b/c!",
    ],
)
def test_names_may_hold_nearly_any_character(name: str) -> None:
    assert nets(read(f"R1 {name} 0 1k", f"C1 {name} 0 1n"), "C1") == [name, "0"]


def test_control_characters_stay_in_names() -> None:
    netlist = read("R1 a\x1b[31m b 1k")
    assert nets(netlist, "R1") == ["a\x1b[31m", "b"]


@pytest.mark.construct("B1 line ends: CR, CRLF, mixed")
def test_line_ends() -> None:
    netlist = read_spice("mast\r\nR1 a b 1k\rR2 a b\r\n+ 2k\n", "mast.cir")
    assert [part.place.line for part in netlist.parts.values()] == [2, 3]
    assert netlist.parts["R2"].value == "2k"


def test_a_plus_sign_that_continues_nothing_is_an_error() -> None:
    with pytest.raises(NetlistError, match="continues nothing") as caught:
        read_spice("* mast\n+ R1 a b 1k\nR2 a b 1k\n", "mast.cir")
    assert caught.value.place == Place("mast.cir", 2, 1)


def test_a_line_that_begins_with_no_letter_is_an_error() -> None:
    with pytest.raises(NetlistError, match="neither an element nor a card"):
        read("1R a b 1k")
    with pytest.raises(NetlistError, match="neither an element nor a card"):
        read("(((")
    with pytest.raises(NetlistError, match="neither an element nor a card"):
        read("R1=5")


def test_the_cleaned_text_is_as_long_as_the_text() -> None:
    text = "t\nR1 a b ; c\n* x\n\n+ 1k\nR2 a \\\\\n b 1\n.end"
    source = Source(text, "x", titled=True)
    assert len(source.clean) == len(text) + 1
    assert source.clean.count("\n") + source.clean.count("\r") == text.count("\n") + 1
