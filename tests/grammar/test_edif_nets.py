"""Joining pieces of net."""

from __future__ import annotations

import networkx as nx
from hypothesis import given, settings
from hypothesis import strategies as st
from pwmlint.grammar.edif_nets import NetPieces

COUNT = 12
PAIRS = st.lists(st.tuples(st.integers(0, COUNT - 1), st.integers(0, COUNT - 1)), max_size=20)


@settings(deadline=None, max_examples=100)
@given(PAIRS)
def test_sets_are_the_connected_components(pairs: list[tuple[int, int]]) -> None:
    nets = NetPieces()
    pieces = [nets.named("", f"A{i}", 0, i) for i in range(COUNT)]
    graph = nx.Graph(pairs)
    graph.add_nodes_from(range(COUNT))
    for one, other in pairs:
        nets.join(pieces[one], pieces[other])
    for component in nx.connected_components(graph):
        assert {nets.find(pieces[i]) for i in component} == {min(component)}
        assert nets.label(pieces[max(component)]).text == f"A{min(component)}"


def test_the_best_name_wins() -> None:
    nets = NetPieces()
    inner = nets.named("psu/", "VREF", 1, 0)
    numbered = nets.named("", "N00012", 0, 0)
    nets.join(inner, numbered)
    assert nets.label(inner).text == "N00012"
    nets.join(numbered, nets.named("", "SENSE", 0, 0))
    assert nets.label(inner).text == "SENSE"
    nets.join(inner, nets.shared("", "GND", 0))
    assert nets.label(numbered).text == "GND"
    assert nets.shared("", "GND", 5) == nets.shared("", "GND", 0)


def test_bits() -> None:
    nets = NetPieces()
    one = [nets.named("", f"A{i}", 0, 0) for i in range(3)]
    other = [nets.named("", f"B{i}", 0, 0) for i in range(2)]
    assert not nets.join_bits(one, other)
    assert nets.label(other[1]).text == "A1"
    nets.join_all(one)
    assert nets.label(other[1]).text == "A0"
