"""The parser: coarse tokens say the same as the rules, and the compiled lexer the same as the plain one."""

from __future__ import annotations

import re
from importlib import import_module
from importlib.util import find_spec
from pathlib import Path
from typing import Any, cast

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pwmlint.grammar import edif_builder
from pwmlint.grammar.edif import read_edif
from pwmlint.grammar.edif_make import NAMED_FORMS, PLAIN_FORMS
from pwmlint.grammar.netlist import Netlist

FIXTURES = sorted((Path(__file__).parent / "fixtures" / "edif").glob("*.edf"))
GRAMMAR = Path(edif_builder.__file__).with_name("edif.lark").read_text(encoding="utf-8")

names = st.from_regex(r"&?[A-Za-z0-9_]{1,8}", fullmatch=True)
texts = st.text(
    st.characters(codec="ascii", categories=["L", "N", "P", "Zs"], exclude_characters='"%'), max_size=12
)


def keywords(terminal: str) -> set[str]:
    found = re.search(rf"^{terminal}: OPEN /\(\?i:([^)]*)\)", GRAMMAR, re.MULTILINE)
    assert found is not None
    return {word.strip() for word in found[1].split("|")}


def test_every_keyword_has_a_maker() -> None:
    assert keywords("NAMED") == set(NAMED_FORMS)
    assert keywords("PLAIN") == set(PLAIN_FORMS)


@pytest.mark.skipif(
    find_spec("lark_cython") is None, reason="the optional package lark_cython is not installed"
)
@pytest.mark.parametrize("path", FIXTURES, ids=lambda path: path.stem)
def test_compiled_and_plain_parser_agree(path: Path) -> None:
    text = path.read_text(encoding="utf-8")
    choices: list[dict[str, Any]] = [{}, import_module("lark_cython").plugins]
    parsers = [edif_builder.build_parser(plugins) for plugins in choices]
    plain, compiled = [cast(Any, parser).parse(text) for parser in parsers]  # lark types it as a tree
    assert plain == compiled


def test_plain_parser_without_the_optional_package(monkeypatch: pytest.MonkeyPatch) -> None:
    def missing(name: str) -> None:
        raise ImportError(name)

    monkeypatch.setattr(edif_builder, "import_module", missing)
    edif_builder._parser.cache_clear()  # pyright: ignore[reportPrivateUsage]  (the parser is made anew)
    try:
        assert edif_builder.parse("(edif A)").name.identifier == "A"
    finally:
        edif_builder._parser.cache_clear()  # pyright: ignore[reportPrivateUsage]  (and again for the others)


def write(parts: list[tuple[str, str, str, list[str]]], in_instance: str, in_net: str) -> str:
    """Write a netlist with something more in each instance and each net."""
    instances = "".join(
        f'(instance {name} (viewRef V (cellRef R)) {in_instance} (designator "{reference}")'
        f' (property (rename VALUE "Value") (string (stringDisplay "{value}" (display T (origin (pt 1 2))))))'
        f' (portInstance A (designator "1")) (property NOTE (string "{value}")))'
        for name, reference, value, _ in parts
    )
    nets = "".join(
        f"(net {net} (joined (portRef A (instanceRef {name}))) {in_net})"
        for name, _, _, reached in parts
        for net in reached
    )
    return (
        "(edif X (library L (cell R (view V (interface (port A) (port B))))"
        f"(cell T (view V (interface) (contents {instances} {nets})))) (design T (cellRef T)))"
    )


def told(netlist: Netlist) -> object:
    parts = [
        (
            part.reference,
            part.value,
            part.attributes,
            part.fitted,
            [(pin.number, pin.name, pin.net) for pin in part.pins],
        )
        for part in netlist.parts.values()
    ]
    nets = [(net.name, net.pins) for net in netlist.nets.values()]
    return parts, nets, [(note.kind, note.message) for note in netlist.notes]


@settings(deadline=None, max_examples=80)
@given(st.lists(st.tuples(names, names, texts, st.lists(names, max_size=3)), max_size=6))
def test_coarse_tokens_say_the_same_as_the_rules(parts: list[tuple[str, str, str, list[str]]]) -> None:
    """A port in an instance and a second `joined` in a net are what the coarse tokens do not foresee."""
    usual = read_edif(write(parts, "", ""), "x")
    assert told(usual) == told(read_edif(write(parts, "(port X)", "(joined)"), "x"))
