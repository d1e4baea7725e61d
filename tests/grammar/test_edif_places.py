"""Lines and columns of offsets."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pwmlint.grammar.edif_places import Places


@pytest.mark.parametrize("end", ["\n", "\r\n", "\r"])
@settings(deadline=None, max_examples=60)
@given(lengths=st.lists(st.one_of(st.integers(0, 5), st.integers(500, 2500)), max_size=12), data=st.data())
def test_places_are_those_of_the_lines(end: str, lengths: list[int], data: st.DataObject) -> None:
    lines = ["x" * length for length in lengths]
    text = end.join(lines)
    places = Places(text, "a")
    offset = data.draw(st.integers(0, len(text)))
    before = text[:offset].split(end)
    place = places.at(offset)
    assert (place.line, place.column) == (len(before), len(before[-1]) + 1)
    if text[offset : offset + 1] not in ("\r", "\n"):
        assert places.line_at(offset) == (lines[place.line - 1] if lines else "")
