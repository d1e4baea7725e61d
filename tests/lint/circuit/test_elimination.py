"""The planned elimination: what it answers, and which samples it leaves to a general solver."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pwmlint.lint.circuit.elimination import Elimination
from pwmlint.lint.circuit.linear import Array, Place


def places_of(pattern: Array) -> list[Place]:
    return [(int(row), int(column)) for row, column in np.argwhere(pattern)]


def whole(matrices: Array, right: Array) -> tuple[Array, Array, list[bool]]:
    """Eliminate matrices (unknowns, unknowns, samples) in one stage, and ask for the sign of all."""
    places = places_of(np.abs(matrices).max(axis=2))
    elimination = Elimination(places, (), len(matrices), len(matrices), 0)
    rows, columns = zip(*places, strict=True)
    answers, sign, sound = elimination.solve(matrices[list(rows), list(columns)], right)
    return answers, sign, sound.tolist()


def stacked(*matrices: list[list[float]]) -> Array:
    return np.moveaxis(np.array(matrices), 0, -1)


class TestAnswers:
    @settings(max_examples=100, deadline=None)
    @given(st.integers(1, 8), st.integers(0, 2**32 - 1))
    def test_are_those_of_a_general_solver(self, unknowns: int, seed: int):
        random = np.random.default_rng(seed)
        pattern = random.random((unknowns, unknowns)) < 0.4
        pattern[random.permutation(unknowns), np.arange(unknowns)] = True
        matrices = pattern[:, :, None] * random.uniform(0.5, 2.0, (unknowns, unknowns, 5))
        right = random.uniform(0.5, 2.0, (unknowns, 5))
        answers, sign, sound = whole(matrices, right)
        for sample in np.flatnonzero(sound):
            matrix = matrices[:, :, sample]
            slack = 1e-13 * np.linalg.cond(matrix)
            expected = np.linalg.solve(matrix, right[:, sample])
            assert np.abs(answers[:, sample] - expected).max() <= slack * np.abs(expected).max()
            assert sign[sample] == np.sign(np.linalg.det(matrix))

    def test_one_sample_by_hand(self):
        # x + 2 y = 5 and 3 x + 4 y = 11: x = 1, y = 2, and the determinant is -2
        answers, sign, sound = whole(stacked([[1.0, 2.0], [3.0, 4.0]]), np.array([[5.0], [11.0]]))
        assert answers[:, 0].tolist() == pytest.approx([1.0, 2.0])
        assert (sign.tolist(), sound) == ([-1.0], [True])

    def test_the_sign_of_what_the_first_leave(self):
        # The first equation says x = 1 - y, which leaves (1 - 3) y of the second: minus, though all are plus.
        places = [(0, 0), (0, 1), (1, 0), (1, 1)]
        elimination = Elimination(places, (), 2, 1, 1)
        answers, sign, sound = elimination.solve(np.array([[-1.0], [-1.0], [3.0], [1.0]]), -np.ones((2, 1)))
        assert answers[:, 0].tolist() == [-1.0, 2.0]
        assert (sign.tolist(), sound.tolist()) == ([-1.0], [True])

    def test_nothing_to_solve(self):
        answers, sign, sound = Elimination([], (), 0, 0, 0).solve(np.empty((0, 3)), np.empty((0, 3)))
        assert (answers.shape, sign.tolist(), sound.tolist()) == ((0, 3), [1.0] * 3, [True] * 3)


class TestUnsoundSamples:
    def test_are_told_apart(self):
        regular = [[1.0, 2.0], [3.0, 4.0]]
        singular = [[1.0, 2.0], [3.0, 6.0]]
        rounded = [[0.1, 0.3], [0.1 * 3, 0.9]]  # singular but for rounding
        infinite = [[np.inf, 2.0], [3.0, 4.0]]
        matrices = stacked(regular, singular, rounded, infinite, regular)
        answers, _, sound = whole(matrices, np.array([5.0, 11.0])[:, None] * np.ones(5))
        assert sound == [True, False, False, False, True]
        assert answers[:, 4].tolist() == pytest.approx([1.0, 2.0])

    def test_a_vanishing_pivot(self):
        # Regular, but the order that suits other samples divides by zero here, and by next to nothing there.
        matrices = stacked(*([[x, 1.0], [1.0, 1.0]] for x in (0.5, 0.0, 1e-18)))
        right = np.array([1.0, 2.0])[:, None] * np.ones(3)
        assert whole(matrices, right)[2] == [True, False, False]

    @settings(max_examples=100, deadline=None)
    @given(st.integers(2, 7), st.integers(0, 2**32 - 1))
    def test_nets_without_a_path_to_ground(self, nets: int, seed: int):
        # Every equation of such a network follows from the others, but in rounded numbers.
        random = np.random.default_rng(seed)
        ends = [(int(random.integers(0, net)), net) for net in range(1, nets)]
        ends += [tuple(sorted(random.choice(nets, 2, replace=False).tolist())) for _ in range(nets)]
        matrices = np.zeros((nets, nets, 5))
        for a, b in ends:
            siemens = 10 ** random.uniform(-6, 3, 5)
            matrices[[a, b], [a, b]] += siemens
            matrices[[a, b], [b, a]] -= siemens
        assert whole(matrices, random.uniform(-1, 1, (nets, 5)))[2] == [False] * 5

    def test_an_answer_that_is_vast(self):
        assert whole(stacked([[1e-12, 1.0], [0.0, 1e-12]]), np.ones((2, 1)))[2] == [False]

    def test_a_coefficient_that_cancels_exactly_does_no_harm(self):
        # Taking x out of the second equation takes z out as well.
        matrices = stacked([[1.0, 0.0, 1.0], [1.0, 1.0, 1.0], [0.0, 1.0, 1.0]])
        answers, _, sound = whole(matrices, np.array([[2.0], [3.0], [3.0]]))
        assert sound == [True]
        assert answers[:, 0].tolist() == [0.0, 1.0, 2.0]


class TestPlan:
    def test_no_equation_for_an_unknown(self):
        with pytest.raises(ValueError, match="no equation is left for unknown 1"):
            Elimination([(0, 0), (1, 0)], (), 2, 2, 0)

    def test_the_last_wait_until_the_first_are_done(self):
        # Unknown 0 stands in equation 1 alone, which must wait.
        with pytest.raises(ValueError, match="no equation is left for unknown 0"):
            Elimination([(1, 0), (0, 1)], (), 2, 1, 0)

    def test_equations_that_fill_up_are_left_to_full_matrices(self):
        # A chain of thirty is little work, thirty that all hang together are a third of 30 cubed changes.
        chain = [(i, j) for i in range(30) for j in range(30) if abs(i - j) <= 1]
        Elimination(chain, (), 30, 30, 0)
        mesh = [(i, j) for i in range(30) for j in range(30)]
        with pytest.raises(ValueError, match="the equations fill up"):
            Elimination(mesh, (), 30, 30, 0)
