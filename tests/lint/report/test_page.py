from __future__ import annotations

from io import StringIO

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pwmlint.lint.report.glyphs import ASCII, BOX, spelt_out
from pwmlint.lint.report.page import Page, wrap
from rich.cells import cell_len
from rich.console import Console


@pytest.mark.parametrize(
    ("text", "width", "lines"),
    [
        ("", 10, [""]),
        ("one two three", 7, ["one two", "three"]),
        ("abcdefghij", 4, ["abcd", "efgh", "ij"]),
        ("x abcdefghij", 4, ["x", "abcd", "efgh", "ij"]),
        # A number keeps its unit, and a range its ends.
        ("it is 12.5 kΩ", 10, ["it is", "12.5 kΩ"]),
        ("is 28 % of", 6, ["is", "28 %", "of"]),
        ("from 5 V .. 6 V", 11, ["from", "5 V .. 6 V"]),
        # Two cells a character.
        ("梨梨梨梨", 4, ["梨梨", "梨梨"]),
    ],
)
def test_wrap(text: str, width: int, lines: list[str]) -> None:
    assert wrap(text, width) == lines


@settings(deadline=None, max_examples=100)
@given(st.text(st.characters(codec="utf-8", exclude_characters="\u00a0")), st.integers(4, 40))
def test_wrapping_loses_nothing_and_fits(text: str, width: int) -> None:
    page = Page(Console(file=StringIO(), width=80), BOX)
    shown = page.say(text)
    lines = wrap(shown, width)
    assert all(cell_len(line) <= width for line in lines)
    assert "".join(lines).replace(" ", "") == shown.replace(" ", "")


def test_spelt_out() -> None:
    assert spelt_out("4.7 kΩ · 10 µF ≤ ∞ °C é") == "4.7 kohm * 10 uF <= inf degC \\xe9"


@pytest.mark.parametrize("glyphs", [BOX, ASCII])
def test_every_glyph_is_one_cell(glyphs: object) -> None:
    fields = ("strong", "light", "inside", "outside", "spread", "nominal", "low", "high", "crossed", "less")
    assert {cell_len(getattr(glyphs, field)) for field in (*fields, "more")} == {1}


def test_a_row_wraps_every_cell_in_its_column() -> None:
    sheet = StringIO()
    page = Page(Console(file=sheet, width=80), BOX)
    page.row([("7", ""), ("ground", ""), ("a long state", "")], [3, 6, 6], indent=2)
    assert sheet.getvalue() == "    7  ground  a long\n               state\n"


def test_a_text_that_floods_the_terminal_is_cut_and_the_rest_counted() -> None:
    page = Page(Console(file=StringIO(), width=80), BOX)
    assert page.say("a" * 4_000) == "a" * 4_000
    assert page.say("a" * 1_004_000) == f"{'a' * 4_000} ... and 1,000,000 characters more"
