"""Errors as the user sees them: place, excerpt under a caret, expected, remedy."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pwmlint.grammar.errors import NetlistError, printable
from pwmlint.grammar.netlist import Place


def error(excerpt: str, column: int, expected: str = "", remedy: str = "") -> NetlistError:
    place = Place("hive.cir", 2, column)
    return NetlistError("too few nodes", place, excerpt=excerpt, expected=expected, remedy=remedy)


def test_the_whole_message() -> None:
    text = str(error("R1 a 10k", 4, expected="two nodes and a value", remedy="add what is missing"))
    assert text.split("\n") == [
        "hive.cir:2:4: too few nodes",
        "  | R1 a 10k",
        "  |    ^",
        "  expected: two nodes and a value",
        "  remedy:   add what is missing",
    ]


def test_a_file_as_a_whole_has_no_line() -> None:
    assert str(NetlistError("the file is empty", Place("hive.cir", 0, 0))) == "hive.cir: the file is empty"


def test_further_errors_follow() -> None:
    both = NetlistError("one", Place("a", 1, 1), also=(NetlistError("two", Place("a", 2, 1)),))
    assert str(both) == "a:1:1: one\na:2:1: two"


@pytest.mark.parametrize("column", [1, 40, 500, 1000, 5000])
def test_a_long_line_is_cut_round_the_caret(column: int) -> None:
    _, line, caret = str(error("0123456789" * 100, column)).split("\n")
    assert len(line) <= 4 + 3 + 76
    assert len(caret) <= len(line) + 1
    if column <= 1000:
        assert line[caret.index("^")] == str((column - 1) % 10)


def test_tabs_and_control_characters_do_not_shift_the_caret() -> None:
    _, line, caret = str(error("R1\ta\x1b[31m 10k", 11)).split("\n")
    assert "\x1b" not in line
    assert line[caret.index("^") :] == "10k"


def test_a_column_behind_the_line_is_under_its_end() -> None:
    _, line, caret = str(error("{1 +", 5)).split("\n")
    assert caret.index("^") == len(line)


@settings(deadline=None, max_examples=100)
@given(st.text(max_size=200), st.integers(0, 300))
def test_nothing_printed_steers_a_terminal(excerpt: str, column: int) -> None:
    text = str(NetlistError(excerpt, Place(excerpt, 1, column), excerpt=excerpt, remedy=excerpt))
    assert all(character.isprintable() or character == "\n" for character in text)


def test_escapes_are_readable() -> None:
    assert printable("a\x1b[31m\n\u202e") == "a\\x1b[31m\\n\\u202e"
