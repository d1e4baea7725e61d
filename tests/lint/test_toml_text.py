"""Names and texts as TOML: whatever they hold, they come back as they were."""

from __future__ import annotations

import tomllib

import pytest
from hypothesis import example, given
from hypothesis import strategies as st
from pwmlint.lint.toml_text import in_ascii, is_statable, toml_key, toml_text

anything = st.text(st.characters(exclude_categories=["Cs"]), max_size=40)


@pytest.mark.parametrize(
    ("name", "key"),
    [
        ("VOUT", "VOUT"),
        ("psu-1_a", "psu-1_a"),
        ("+12V", '"+12V"'),
        ("psu/U1", '"psu/U1"'),
        ("a.b", '"a.b"'),
        ("", '""'),
        ('a"b\\c', '"a\\"b\\\\c"'),
        ("a\nb\x1b\x7f\x9b", '"a\\u000ab\\u001b\\u007f\\u009b"'),
        ("µ\u202e\U000e0041", '"µ\\u202e\\U000e0041"'),
        ("größe", '"größe"'),
    ],
)
def test_a_key_is_quoted_where_it_must_be(name: str, key: str) -> None:
    assert toml_key(name) == key
    assert tomllib.loads(f"{key} = 1") == {name: 1}


@given(name=anything, text=anything)
@example(name='"""', text="'''\\")
@example(name="\r\n\t", text="# no comment")
def test_every_name_and_text_comes_back(name: str, text: str) -> None:
    line = f"{toml_key(name)}.x = {toml_text(text)}  # {toml_text(text)}"
    assert line.isprintable()
    assert tomllib.loads(line) == {name: {"x": text}}
    plain = in_ascii(line)
    assert plain.isascii()
    assert tomllib.loads(plain) == {name: {"x": text}}


@pytest.mark.parametrize("text", ["\ud800", "a\udfffb"])
def test_half_a_surrogate_pair_cannot_be_stated(text: str) -> None:
    assert not is_statable(text)
    assert is_statable("\ud7ff\ue000\U0001f300")
