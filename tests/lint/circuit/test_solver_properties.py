"""What holds for every network: laws of circuits, and other people's solvers on random ones."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace

import networkx as nx
import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from pwmlint.lint.circuit.linear import Array
from pwmlint.lint.circuit.network import (
    Condition,
    CurrentSource,
    FreePotential,
    Network,
    Resistor,
    Sample,
    Value,
    VoltageSource,
)
from pwmlint.lint.circuit.solver import Solution, solve
from scipy.sparse import coo_matrix
from scipy.sparse.linalg import spsolve  # pyright: ignore[reportUnknownVariableType] - scipy is untyped

from .elements import constant

GROUND = "0"

quick = settings(max_examples=40, deadline=None, suppress_health_check=[HealthCheck.too_slow])


def ohms(low: float = 1.0, high: float = 1e6) -> st.SearchStrategy[float]:
    """Return a strategy of resistances, even over the decades."""
    return st.floats(np.log10(low), np.log10(high)).map(lambda x: float(10**x))


@dataclass(frozen=True, slots=True)
class Drawn:
    """A random network as plain numbers: node 0 is ground, node 1 a supply of 1 V."""

    nodes: int
    edges: tuple[tuple[int, int, float], ...]
    currents: tuple[tuple[int, float], ...]

    def network(self, supply: float = 1.0, current: float = 1.0) -> Network:
        """Return the network with its supply and its currents scaled."""
        edges = enumerate(self.edges)
        resistors = tuple(Resistor(f"R{k}", str(a), str(b), constant(r)) for k, (a, b, r) in edges)
        sources = tuple(
            CurrentSource(f"I{k}", GROUND, str(node), constant(current * amperes))
            for k, (node, amperes) in enumerate(self.currents)
        )
        return Network((*resistors, *sources), {GROUND: constant(0.0), "1": constant(supply)})

    def potentials(self, solution: Solution) -> Array:
        """Return the potentials of all nodes of the first sample."""
        return np.array([solution.voltage(str(node))[0] for node in range(self.nodes)])


@st.composite
def networks(draw: st.DrawFn, least: int = 3, most: int = 12) -> Drawn:
    """Draw a connected network: a random tree, more edges, currents into some nodes."""
    nodes = draw(st.integers(least, most))
    edges = [(draw(st.integers(0, node - 1)), node, draw(ohms())) for node in range(1, nodes)]
    ends = st.integers(0, nodes - 1)
    edges += draw(st.lists(st.tuples(ends, ends, ohms()), max_size=nodes))
    currents = draw(st.lists(st.tuples(st.integers(2, nodes - 1), st.floats(-1e-3, 1e-3)), max_size=4))
    return Drawn(nodes, tuple(edges), tuple(currents))


def random_network(nodes: int, seed: int) -> Drawn:
    """Return a large connected network; hypothesis would draw it number by number."""
    random = np.random.default_rng(seed)
    resistances = 10 ** random.uniform(0, 6, 3 * nodes)
    edges = [(int(random.integers(0, node)), node, float(resistances[node])) for node in range(1, nodes)]
    ends = random.integers(0, nodes, (2 * nodes, 2))
    edges += [(int(a), int(b), float(r)) for (a, b), r in zip(ends, resistances[nodes:], strict=True)]
    currents = [(int(random.integers(2, nodes)), float(random.uniform(-1e-3, 1e-3))) for _ in range(5)]
    return Drawn(nodes, tuple(edges), tuple(currents))


def solved(network: Network, sample: Mapping[str, Array] | None = None, size: int = 1) -> Solution:
    return solve(network, sample or {}, size)


class TestLaws:
    @quick
    @given(networks())
    def test_kirchhoffs_current_law_at_every_free_node(self, drawn: Drawn):
        network = drawn.network()
        solution = solved(network)
        greatest_potential = float(np.abs(drawn.potentials(solution)).max())
        for node in map(str, range(2, drawn.nodes)):
            branches = [e for e in network.elements if node in (e.a, e.b) and e.a != e.b]
            greatest = max(float(np.abs(solution.current(e)[0])) for e in branches)
            # A branch that ends blind carries nothing but rounding: of the others' currents, and of the
            # potentials, which is that of the greatest in the network, over the least resistance, 1 ohm.
            rounding = 1e-12 * _greatest_current(solution) + 1e-15 * greatest_potential
            assert abs(float(solution.current_out_of(node)[0])) <= 1e-9 * greatest + rounding

    @quick
    @given(networks())
    def test_what_leaves_the_supply_and_the_sources_arrives_in_ground(self, drawn: Drawn):
        solution = solved(drawn.network())
        out, into = solution.current_out_of("1")[0], -solution.current_out_of(GROUND)[0]
        through = max(abs(out), abs(into), 1e-12)
        assert abs(out - into) <= 1e-9 * max(through, _greatest_current(solution))

    @quick
    @given(networks(), st.floats(-10, 10), st.floats(-10, 10))
    def test_superposition(self, drawn: Drawn, supply: float, current: float):
        both = drawn.potentials(solved(drawn.network(supply, current)))
        alone = drawn.potentials(solved(drawn.network(supply, 0))) + drawn.potentials(
            solved(drawn.network(0, current))
        )
        assert both == pytest.approx(alone, rel=1e-9, abs=1e-9 * float(np.max(np.abs(both), initial=1e-3)))

    @quick
    @given(networks(), st.floats(1e-3, 1e3))
    def test_scaling_every_source_scales_every_potential(self, drawn: Drawn, factor: float):
        once = drawn.potentials(solved(drawn.network()))
        scaled = drawn.potentials(solved(drawn.network(factor, factor)))
        assert scaled == pytest.approx(
            factor * once, rel=1e-9, abs=1e-9 * factor * float(np.max(np.abs(once)))
        )

    @quick
    @given(networks(), st.floats(1e-2, 1e2))
    def test_scaling_every_resistance_scales_every_current_of_the_supply(self, drawn: Drawn, factor: float):
        wider = replace(drawn, edges=tuple((a, b, factor * r) for a, b, r in drawn.edges))
        once, scaled = solved(drawn.network(1, 0)), solved(wider.network(1, 0))
        # Two solutions, each good to 1e-9: six decades of resistance leave no more.
        assert drawn.potentials(scaled) == pytest.approx(drawn.potentials(once), rel=2e-9, abs=1e-12)
        assert scaled.current_out_of("1") * factor == pytest.approx(
            once.current_out_of("1"), rel=1e-7, abs=1e-18
        )

    @quick
    @given(networks())
    def test_no_node_leaves_the_range_of_the_supplies(self, drawn: Drawn):
        potentials = drawn.potentials(solved(drawn.network(1, 0)))
        # Six decades of resistance leave ten of sixteen digits.
        assert np.all(potentials >= -1e-9)
        assert np.all(potentials <= 1 + 1e-9)

    @quick
    @given(networks(), ohms(), st.floats(0.1, 10))
    def test_a_closed_loop_ends_where_its_condition_holds(
        self, drawn: Drawn, resistance: float, wanted: float
    ):
        # The supply becomes the free quantity that a node behind one more resistor asks for.
        last = str(drawn.nodes - 1)
        sense = Resistor("sense", last, "sense", constant(resistance))
        network = drawn.network()
        loop = replace(
            network,
            elements=(*network.elements, sense),
            known={**network.known, "wanted": constant(wanted)},
            free=(FreePotential("1"),),
            conditions=(Condition("sense", "wanted", constant(0.0)),),
        )
        solution = solved(loop)
        found = float(solution.voltage("1")[0])
        if np.isfinite(found):
            again = solved(drawn.network(found))
            assert float(again.voltage(last)[0]) == pytest.approx(wanted, rel=1e-6)


def _greatest_current(solution: Solution) -> float:
    return max(float(np.abs(solution.current(element)[0])) for element in solution.network.elements)


class TestAgainstOthers:
    @pytest.mark.parametrize("nodes", [10, 50, 120, 200])
    def test_scipy_sparse(self, nodes: int):
        drawn = random_network(nodes, seed=nodes)
        assert drawn.potentials(solved(drawn.network())) == pytest.approx(_by_scipy(drawn), rel=1e-9)

    @quick
    @given(st.integers(20, 200), st.integers(0, 2**32 - 1))
    def test_scipy_sparse_on_any(self, nodes: int, seed: int):
        drawn = random_network(nodes, seed)
        ours, theirs = drawn.potentials(solved(drawn.network())), _by_scipy(drawn)
        assert ours == pytest.approx(theirs, rel=1e-8, abs=1e-9 * float(np.max(np.abs(theirs))))

    @quick
    @given(networks(4, 30))
    def test_resistance_distance(self, drawn: Drawn):
        # 1 A driven into a node of a network of resistors: its potential is the resistance to ground.
        graph: nx.MultiGraph[int] = nx.MultiGraph()
        graph.add_nodes_from(range(drawn.nodes))
        graph.add_weighted_edges_from((a, b, r) for a, b, r in drawn.edges if a != b)
        far = drawn.nodes - 1
        source = CurrentSource("test", GROUND, str(far), constant(1.0))
        alone = Network((*replace(drawn, currents=()).network().elements, source), {GROUND: constant(0.0)})
        expected = nx.resistance_distance(graph, 0, far, weight="weight", invert_weight=True)
        assert isinstance(expected, float)
        # resistance_distance takes a pseudo-inverse, good to half the digits over six decades.
        assert float(solved(alone).voltage(str(far))[0]) == pytest.approx(expected, rel=1e-5)


def _by_scipy(drawn: Drawn) -> Array:
    """Return the potentials by sparse nodal analysis, every node's equation written out."""
    rows: list[tuple[int, int, float]] = [(0, 0, 1.0), (1, 1, 1.0)]
    right = np.zeros(drawn.nodes)
    right[1] = 1.0
    for a, b, r in drawn.edges:
        for here, there in ((a, b), (b, a)):
            if here > 1:
                rows += [(here, here, 1 / r), (here, there, -1 / r)]
    for node, amperes in drawn.currents:
        right[node] += amperes
    i, j, entries = zip(*rows, strict=True)
    matrix = coo_matrix((entries, (i, j)), shape=(drawn.nodes, drawn.nodes)).tocsc()
    return np.asarray(spsolve(matrix, right), dtype=np.float64)


class TestManySamplesAtOnce:
    @quick
    @given(networks(), st.integers(0, 2**32 - 1))
    def test_equals_one_by_one(self, drawn: Drawn, seed: int):
        random = np.random.default_rng(seed)
        size = 7
        sample = {f"R{k}": r * random.uniform(0.9, 1.1, size) for k, (_, _, r) in enumerate(drawn.edges)}
        edges = enumerate(drawn.edges)
        resistors = tuple(Resistor(f"R{k}", str(a), str(b), _reading(f"R{k}")) for k, (a, b, _) in edges)
        varied = replace(drawn.network(), elements=resistors)
        together = solved(varied, sample, size)
        for index in range(size):
            single = solved(varied, {name: column[index : index + 1] for name, column in sample.items()})
            for node in map(str, range(drawn.nodes)):
                expected = single.voltage(node)[0]
                assert float(together.voltage(node)[index]) == pytest.approx(
                    float(expected), rel=1e-9, abs=1e-12
                )

    @quick
    @given(networks(), st.data())
    def test_a_short_equals_one_net(self, drawn: Drawn, data: st.DataObject):
        # Two nodes joined by a source of 0 V, by a short, or by two shorts: the same potentials.
        one, other = data.draw(st.lists(st.integers(2, drawn.nodes - 1), min_size=2, max_size=2))
        network = drawn.network()
        ways = (
            [VoltageSource("V", str(one), str(other), constant(0.0))],
            [Resistor("L1", str(one), str(other), constant(0.0), may_be_zero=True)],
            [Resistor(f"L{k}", str(one), str(other), constant(0.0), may_be_zero=True) for k in (1, 2)],
        )
        first, *rest = (
            drawn.potentials(solved(replace(network, elements=(*network.elements, *way)))) for way in ways
        )
        for found in rest:
            assert found == pytest.approx(first, rel=1e-7, abs=1e-9 * float(np.max(np.abs(first))))


def _reading(name: str) -> Value:
    def read(sample: Sample) -> Array:
        return sample[name]

    return read
