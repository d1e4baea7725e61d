"""Any text is read or refused with a NetlistError; tests/fuzz/fuzz_edif.py does the same for longer."""

from __future__ import annotations

from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pwmlint.grammar.edif import read_edif
from pwmlint.grammar.edif_make import NAMED_FORMS, PLAIN_FORMS
from pwmlint.grammar.errors import NetlistError

FIXTURES = sorted((Path(__file__).parent / "fixtures" / "edif").glob("*.edf"))
TEXTS = [path.read_text(encoding="utf-8") for path in FIXTURES]

KEYWORDS = [
    *NAMED_FORMS,
    *PLAIN_FORMS,
    "name",
    "rename",
    "array",
    "member",
    "stringDisplay",
    "figure",
    "comment",
]
WORDS = st.sampled_from(
    ["A", "&1", "R1", "0", "2", "-1", "99999999999999999999", "TIE", "RIPPER", "GENERIC", "net"]
)
STRINGS = st.sampled_from(["", "10k,1%", "a(7:0)", "GND", "%37%", "%0%", "DNI", "x\ny"]).map(
    lambda text: f'"{text}"'
)


def form(items: st.SearchStrategy[str]) -> st.SearchStrategy[str]:
    return st.tuples(st.sampled_from(KEYWORDS), st.lists(items, max_size=4)).map(
        lambda parts: f"({parts[0]} {' '.join(parts[1])})"
    )


FORMS = st.recursive(WORDS | STRINGS, form, max_leaves=25)


def is_read_or_refused(text: str) -> None:
    """Check that what is read is whole: parts and nets know one another."""
    try:
        netlist = read_edif(text, "fuzz.edf")
    except NetlistError as error:
        str(error)  # the message is made here, of whatever the file holds
        return
    for reference, part in netlist.parts.items():
        assert part.reference == reference
        assert all(not pin.net or pin.net in netlist.nets for pin in part.pins)
    for name, net in netlist.nets.items():
        for reference, index in net.pins:
            assert netlist.parts[reference].pins[index].net == name


@settings(deadline=None, max_examples=200)
@given(FORMS, FORMS, FORMS)
def test_forms_in_any_order(first: str, second: str, third: str) -> None:
    is_read_or_refused(f"(edif A {first} (library L {second} (cell T (view V (contents {third})))))")


@settings(deadline=None, max_examples=200)
@given(st.sampled_from(TEXTS), st.data())
def test_fixtures_with_changes(text: str, data: st.DataObject) -> None:
    for _ in range(data.draw(st.integers(1, 4))):
        start = data.draw(st.integers(0, len(text)))
        end = start + data.draw(st.integers(0, 40))
        text = text[:start] + data.draw(st.text(max_size=5)) + text[end:]
    is_read_or_refused(text)


@settings(deadline=None, max_examples=100)
@given(st.text(max_size=200))
def test_any_text(text: str) -> None:
    is_read_or_refused(text)
    is_read_or_refused("(edif A " + text)


@pytest.mark.parametrize("text", TEXTS, ids=[path.stem for path in FIXTURES])
def test_every_way_to_cut_off_a_file(text: str) -> None:
    for end in range(0, len(text) - 2, 37):
        with pytest.raises(NetlistError):
            read_edif(text[:end], "fuzz.edf")
