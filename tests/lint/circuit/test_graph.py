"""The circuit as a graph: who is connected to what."""

from __future__ import annotations

from collections.abc import Callable

import networkx as nx
import pytest
from pwmlint.grammar import Netlist, Part, Place
from pwmlint.grammar.netlist import Net
from pwmlint.lint.circuit.graph import Circuit
from pwmlint.lint.design import Design

DesignOf = Callable[..., Design]

MAST = """
R1 VANE READING 10k
R2 READING 0 10k
C1 READING 0 100n
R3 READING AMP 1k
R4 AMP AMP 1k
"""


@pytest.fixture
def circuit(design_of: DesignOf) -> Circuit:
    return design_of(MAST).circuit


class TestGraph:
    def test_every_pin_is_an_edge(self, circuit: Circuit):
        graph = circuit.graph
        assert graph.number_of_edges() == 10
        assert nx.is_bipartite(graph)
        assert set(graph.neighbors(("net", "READING"))) == {
            ("part", name) for name in ("R1", "R2", "C1", "R3")
        }

    def test_two_pins_on_one_net_are_two_edges(self, circuit: Circuit):
        assert set(circuit.graph[("part", "R4")][("net", "AMP")]) == {0, 1}

    def test_connections_in_the_order_of_the_file(self, circuit: Circuit):
        assert [(c.part.reference, c.index) for c in circuit.connections("READING")] == [
            ("R1", 1),
            ("R2", 0),
            ("C1", 0),
            ("R3", 0),
        ]
        assert next(circuit.connections("VANE")).pin.net == "VANE"

    def test_other_nets(self, circuit: Circuit):
        assert circuit.other_nets(circuit.parts["R3"], "READING") == ["AMP"]
        assert circuit.other_nets(circuit.parts["R4"], "AMP") == []

    def test_between(self, circuit: Circuit):
        assert [part.reference for part in circuit.between("READING", "0")] == ["R2", "C1"]
        assert circuit.between("VANE", "0") == []

    def test_kind_and_value(self, circuit: Circuit):
        assert circuit.kind(circuit.parts["C1"]) == "capacitor"
        value = circuit.value(circuit.parts["R3"])
        assert value is not None
        assert value.spread.nominal == 1e3


GROUNDS = ["0", "GND", "agnd", "DGND", "PGND", "GNDA", "GND!", "psu/GND", "VSS", "0V", "ground"]


class TestGround:
    @pytest.mark.parametrize("net", GROUNDS)
    def test_by_its_name(self, net: str):
        assert Circuit(_netlist(net)).is_ground(net)

    @pytest.mark.parametrize("net", ["GNDX", "GND1", "BIG_GND", "VGND", "00", "EARTH", "GND/x"])
    def test_others_are_not(self, net: str):
        assert not Circuit(_netlist(net)).is_ground(net)


def test_a_part_that_is_not_fitted_is_left_out(design_of: DesignOf):
    netlist = design_of(MAST).netlist
    netlist.parts["R2"].fitted = False
    circuit = Circuit(netlist)
    assert "R2" not in circuit.parts
    assert [part.reference for part in circuit.between("READING", "0")] == ["C1"]
    assert ("part", "R2") not in circuit.graph


def _netlist(net: str) -> Netlist:
    place = Place("mast.edf", 1, 1)
    return Netlist("mast.edf", "EDIF 2 0 0", nets={net: Net(net, place)}, parts=dict[str, Part]())
