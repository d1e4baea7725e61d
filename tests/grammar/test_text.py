"""Encodings that netlists are met in: formats B1."""

from __future__ import annotations

import pytest
from pwmlint.grammar.errors import NetlistError
from pwmlint.grammar.text import decode

TEXT = "Pumpe für 10 µF\nC1 a b 10µ\nM§Q1 d g s x\n"


@pytest.mark.construct("B1 encoding: UTF-8, UTF-16, Windows-1252, byte order marks")
@pytest.mark.parametrize("encoding", ["utf-8", "utf-8-sig", "utf-16", "utf-16-le", "utf-16-be", "cp1252"])
def test_encodings(encoding: str) -> None:
    assert decode(TEXT.encode(encoding), "pump.cir") == TEXT


def test_a_greek_mu_and_an_ohm_sign_in_utf8() -> None:
    assert decode("10μ 5Ω".encode(), "pump.cir") == "10μ 5Ω"


def test_bytes_that_windows_1252_leaves_out_are_replaced() -> None:
    assert decode(b"a \x81 b \xb5", "pump.cir") == "a \ufffd b µ"


def test_line_ends_become_one() -> None:
    assert decode(b"a\r\nb\rc\n", "pump.cir") == "a\nb\nc\n"


@pytest.mark.parametrize("data", [b"", b"a", b"ab", b"abc"])
def test_short_files(data: bytes) -> None:
    assert decode(data, "pump.cir") == data.decode()


def test_a_nul_character_is_a_binary_file() -> None:
    with pytest.raises(NetlistError, match="binary") as caught:
        decode(b"first line\nab\x00\xff\xfe", "pump.cir")
    assert tuple(caught.value.place) == ("pump.cir", 2, 3)


@pytest.mark.parametrize("data", [b"\xef\xbb\xbfa\xff", b"\xff\xfea", b"\xfe\xff\xd8\x00"])
def test_a_mark_that_the_bytes_belie_is_an_error(data: bytes) -> None:
    with pytest.raises(NetlistError, match="marked as"):
        decode(data, "pump.cir")
