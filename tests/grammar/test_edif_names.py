"""Strings, identifiers and numbers of EDIF."""

from __future__ import annotations

from decimal import Decimal

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pwmlint.grammar.edif_names import bit_names, decode, identifier, integer, quantity, scaled

PLAIN = st.text(st.characters(codec="ascii", exclude_characters='%"\r\n'), max_size=40)


@pytest.mark.parametrize(
    ("text", "value"),
    [
        ("10K,1%37%", "10K,1%"),
        ("%34%", '"'),
        ("a%13 10 13 10%b", "a\r\n\r\nb"),
        ("%010%", "\n"),
        ("%37%NET00001", "%NET00001"),
        ("10k 1%", "10k 1%"),
        ("5% 10% x", "5% 10% x"),
        ("%999%", "%999%"),
        ("%0300%", "%0300%"),
        ("%%", "%%"),
        ("%1 \r\n3%", "%1 3%".replace("%1 3%", "\x01\x03")),
        ("Aria\r\nl", "Arial"),
        ("tool A \nVersion", "tool A Version"),
    ],
)
def test_decode(text: str, value: str) -> None:
    assert decode(text) == value


@settings(deadline=None, max_examples=100)
@given(PLAIN, st.data())
def test_decode_undoes_escapes_and_line_breaks(text: str, data: st.DataObject) -> None:
    escaped = "".join(f"%{ord(c)}%" if data.draw(st.booleans()) else c for c in text)
    cut = data.draw(st.integers(0, len(escaped)))
    assert decode(escaped[:cut] + "\r\n" + escaped[cut:]) == text


@settings(deadline=None, max_examples=100)
@given(st.text(max_size=60))
def test_decode_never_fails(text: str) -> None:
    assert "\n" not in decode(text.replace("%", ""))
    decode(text)


def test_identifier() -> None:
    assert [identifier(word) for word in ("&4K7", "R1", "&", "&&X")] == ["4K7", "R1", "&", "&X"]


def test_integer() -> None:
    assert [integer(word) for word in ("2397562737", "-3", "+4", "1.5", "²", "9" * 19)] == [
        2397562737,
        -3,
        4,
        None,
        None,
        None,
    ]


def test_scaled() -> None:
    assert scaled("254", "-7") == Decimal("25.4e-6")
    assert scaled("1", "1000") is None
    assert scaled("x", "1") is None


@pytest.mark.parametrize(
    ("number", "unit", "text"),
    [
        ("4.7E3", "RESISTANCE", "4700 ohm"),
        ("1e-7", "CAPACITANCE", "100e-9 F"),
        ("0.000001", "CAPACITANCE", "0.000001 F"),
        ("1e18", "frequency", "1e18 Hz"),
        ("0", "VOLTAGE", "0 V"),
        ("12", "FLUX", "12"),
    ],
)
def test_quantity(number: str, unit: str, text: str) -> None:
    assert quantity(Decimal(number), unit) == text


@pytest.mark.parametrize(
    ("display", "size", "names"),
    [
        ("a(2:0)", 3, ["a(2)", "a(1)", "a(0)"]),
        ("a[0..2]", 3, ["a[0]", "a[1]", "a[2]"]),
        ("a<1:0>", 3, ["a<1:0>[0]", "a<1:0>[1]", "a<1:0>[2]"]),
        ("a", 2, ["a[0]", "a[1]"]),
        ("a", 0, []),
    ],
)
def test_bit_names(display: str, size: int, names: list[str]) -> None:
    assert bit_names(display, size) == names
