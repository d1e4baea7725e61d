"""What the user is told when an EDIF file cannot be read: the form, the place, what was expected."""

from __future__ import annotations

from pathlib import Path

import pytest
from pwmlint.grammar.edif import read_edif
from pwmlint.grammar.errors import NetlistError

FIXTURE = Path(__file__).parent / "fixtures" / "edif" / "netlist_view.edf"
TEXT = FIXTURE.read_text(encoding="utf-8")


def error(text: str) -> NetlistError:
    with pytest.raises(NetlistError) as caught:
        read_edif(text, "orchard.edf")
    assert str(caught.value).startswith("orchard.edf")
    assert caught.value.remedy
    assert caught.value.expected
    return caught.value


@pytest.mark.parametrize("text", ["", " \r\n\t ", "\x1a"])
def test_empty_text(text: str) -> None:
    assert error(text).message == "the file is empty"


@pytest.mark.parametrize(
    "text", ["* a SPICE list\nR1 a b 1k\n", "(orchard)", "edif", "(edifact x)", "\x7fELF\0\0"]
)
def test_no_edif_at_all(text: str) -> None:
    found = error(text)
    assert found.message == "this is not an EDIF file"
    assert found.place.line == 1


def test_file_cut_off_inside_a_net() -> None:
    found = error(TEXT[: TEXT.index("(instanceRef &R1)")])
    assert found.message == "the file ends inside (portRef &1, opened at line 69"
    assert found.expected == "8 closing parentheses"
    assert found.place.line == 69


def test_missing_parenthesis_is_found_by_the_indentation() -> None:
    found = error(TEXT.replace("(portRef &1 (instanceRef &R1))))", "(portRef &1 (instanceRef &R1)))", 1))
    assert found.message == (
        "the file ends inside (edif &frost_fan, opened at line 1; "
        "by its indentation (net &VREF, opened at line 66 is never closed"
    )
    assert found.place.line == 66


def test_missing_parenthesis_in_a_file_without_indentation() -> None:
    flat = " ".join(TEXT.split())
    found = error(flat[:-1])
    assert found.message == "the file ends inside (edif &frost_fan, opened at line 1"


def test_parenthesis_too_many() -> None:
    found = error(
        TEXT.replace("(portRef &1 (instanceRef &R1))))", "(portRef &1 (instanceRef &R1)))))))))", 1)
    )
    assert found.message == "the netlist is closed at line 69, but the file goes on"
    assert found.place.line == 70


def test_text_behind_the_netlist() -> None:
    assert error(TEXT + "(edif more)").place.line == 82
    assert error(TEXT + "more").message == "the netlist is closed at line 81, but the file goes on"


def test_control_z_at_the_end_is_allowed() -> None:
    assert read_edif(TEXT + "\x1a\0\0", "orchard.edf").parts


def test_damaged_time_stamp() -> None:
    found = error(TEXT.replace("(timeStamp 0 0 0 0 0 0)", "("))
    assert found.message == "a ( without a keyword inside (written, opened at line 6"
    assert found.place.line == 6
    assert found.expected == 'a name, a string in "quotes", a closing parenthesis, a form with a keyword'


def test_net_without_a_name() -> None:
    found = error(TEXT.replace("(net &VREF", "(net"))
    assert found.message == "the form (joined is out of place inside (net, opened at line 66"
    assert found.expected == "a name"


def test_form_closed_too_early() -> None:
    found = error(TEXT.replace("(net &VREF", "(net)"))
    assert found.message == "a ) too early inside (net, opened at line 66"


def test_string_in_place_of_a_name() -> None:
    found = error(TEXT.replace("(net &VREF", '(net "VREF"'))
    assert found.message == "a string is out of place inside (net, opened at line 66"
    assert found.place.column == 16


def test_word_in_place_of_a_string() -> None:
    found = error(TEXT.replace("(net &VREF", "(net (rename &VREF VREF)"))
    assert found.message == "the word 'VREF' is out of place inside (rename &VREF, opened at line 66"
    assert found.expected == 'a string in "quotes"'


def test_string_that_is_never_closed() -> None:
    found = error(TEXT.replace('"10n,50V"', '"10n,50V'))
    assert "never closed" in found.message
    assert found.remedy == 'look for a " too many at line 64, where a string runs on over the next form'


def test_string_that_is_never_closed_at_the_end() -> None:
    found = error(TEXT[: TEXT.rindex("(design")] + '(comment "x')
    assert found.message == "a string inside (comment, opened at line 81 is never closed"
    assert found.remedy == "close the string, or export the netlist again"


def test_other_version() -> None:
    found = error(TEXT.replace("(edifVersion 2 0 0)", "(edifVersion 3 0 0)"))
    assert found.message == "EDIF version 3 0 0 is not read"
    assert found.place.line == 2


def test_higher_keyword_level() -> None:
    found = error(TEXT.replace("(keywordLevel 0)", "(keywordLevel 2)"))
    assert found.message.startswith("keyword level 2 is not read")
    assert found.place.line == 4


def test_library_without_a_circuit() -> None:
    found = error("(edif A (edifVersion 2 0 0) (library L (cell R (cellType GENERIC))))")
    assert found.message.startswith("the file holds no circuit")


def test_cell_that_contains_itself() -> None:
    found = error("(edif A (library L\n(cell T (view V (contents (instance X (viewRef V (cellRef T))))))))")
    assert found.message == "the cell T contains itself"
    assert found.place.line == 2


def test_long_lines_are_cut_in_the_message() -> None:
    text = "(edif A " + "(x 1) " * 100_000 + "(net))"
    assert max(map(len, str(error(text)).splitlines())) < 100
