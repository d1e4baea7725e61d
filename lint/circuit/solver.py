"""Solves a network by modified nodal analysis, many samples at once.

All samples go through one elimination, planned for the form of the network. The few that it does not suit
(shorts in parallel, rails shorted, a loop that nothing settles, values many decades apart) go through a
general solver.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from .elimination import Elimination
from .equations import Equations
from .linear import Array, Stack, orientation
from .network import ControlledSource, CurrentSource, Element, Form, Network, Resistor, Sample

# More full matrices are solved piece by piece: as many coefficients as a processor's fast memory holds.
_MOST_AT_ONCE = 60_000

# What is ready of the forms met before, by form; a review has some thirty of them.
_PREPARED: dict[Form, tuple[Equations, Elimination | None]] = {}
_MOST_PREPARED = 100


@dataclass(slots=True)
class Solution:
    """Voltages and currents of one network, arrays of shape (samples,). Where no solution exists: NaN.

    direction: a sign, 1 or -1, that turns where the answers run away to infinity; 0 where they are undecided.
               In a closed loop of resistances it is the direction in which the free quantities move what
               the conditions compare.
    """

    network: Network
    sample: Sample
    size: int
    direction: Array
    _potentials: Mapping[str, Array]
    _currents: Mapping[str, Array]

    @property
    def nets(self) -> set[str]:
        """Return the nets whose potential the solution tells."""
        return set(self._potentials)

    def voltage(self, net: str, reference: str | None = None) -> Array:
        """Return the potential of `net` in volts, over ground or over another net."""
        if reference is None:
            return self._potentials[net]
        return self._potentials[net] - self._potentials[reference]

    def free_current(self, name: str) -> Array:
        """Return the current in amperes that the conditions settled for the FreeCurrent `name`."""
        return self._currents[name]

    def current(self, element: Element) -> Array:
        """Return the current through `element` from its `a` to its `b` terminal, in amperes."""
        if element.name in self._currents:
            return self._currents[element.name]
        if isinstance(element, CurrentSource):
            return np.broadcast_to(element.current(self.sample), (self.size,))
        if isinstance(element, ControlledSource):
            control = self.voltage(element.control_a, element.control_b)
            return control * element.gain(self.sample)
        assert isinstance(element, Resistor)
        volts, ohms = np.broadcast_arrays(self.voltage(element.a, element.b), element.resistance(self.sample))
        beyond = np.where(volts == 0.0, 0.0, np.copysign(np.inf, volts))  # a short from one rail to another
        return np.divide(volts, ohms, out=beyond, where=ohms != 0.0)

    def current_out_of(self, net: str) -> Array:
        """Return the sum of the currents that leave `net` through the network's elements, in amperes."""
        total = np.zeros(self.size)
        for element in self.network.elements:
            if element.a == net and element.b != net:
                total = total + self.current(element)
            elif element.b == net and element.a != net:
                total = total - self.current(element)
        return total


class Solver:
    """A network made ready for any number of samples.

    Raises ValueError where the network is not well posed (a floating net, as many conditions as free
    quantities wanted): the caller must have looked.
    """

    def __init__(self, network: Network) -> None:
        self.network = network
        self._equations, self._elimination = _prepared(network)

    def solve(self, sample: Sample, size: int) -> Solution:
        """Return the solution for every sample.

        sample: parameter name to an array of shape (size,)
        A sample without a solution (rails shorted, a closed loop that nothing settles) gives NaN in every
        answer of that sample.
        """
        equations = self._equations
        entries, right, drives = equations.filled(self.network, sample, size)
        if self._elimination is None:
            answers, directions = np.empty_like(right), np.empty(size)
            sound = np.zeros(size, dtype=np.bool_)
        else:
            answers, directions, sound = self._elimination.solve(entries, right)
        if not sound.all():
            for piece in self._pieces(np.flatnonzero(~sound)):
                answers[:, piece], directions[piece] = self._carefully(entries[:, piece], right[:, piece])
        columns = [*answers, *drives]
        return Solution(
            self.network,
            sample,
            size,
            directions,
            {net: columns[column] for net, column in equations.potentials.items()},
            {name: columns[column] for name, column in equations.currents.items()},
        )

    def _pieces(self, samples: NDArray[np.intp]) -> Iterator[NDArray[np.intp]]:
        step = max(1, _MOST_AT_ONCE // max(1, self._equations.unknowns**2))
        for start in range(0, len(samples), step):
            yield samples[start : start + step]

    def _carefully(self, entries: Array, right: Array) -> tuple[Array, Array]:
        """Return the unknowns and the direction, in each sample, whatever the matrices are like.

        The determinant of all equations is linear in every single resistance or gain. So where it has one
        sign in all corners, it vanishes nowhere between them, and no answer runs away there. That of the
        moves is the same, over the determinant with the loops left open, which never vanishes in a network
        of resistances; and it can be told where shorts in parallel leave the whole one at zero.
        """
        equations = self._equations
        matrix = equations.matrix(entries)
        stack = Stack(matrix)
        # Besides: by how much does everything move with the difference that each condition asks for?
        nudges = np.eye(equations.unknowns)[:, equations.free_from :, None]
        nudges = np.broadcast_to(nudges, (*nudges.shape[:2], right.shape[1]))
        questions = np.concatenate([right[:, None], nudges], axis=1)
        answers, doubtful = stack.solve(questions)
        if doubtful.any():
            found = stack.solve_singular(doubtful, questions[:, :, doubtful], equations.settled)
            answers[:, :, doubtful] = found
        moves = answers[equations.free_from :, 1:]
        turns = np.where(doubtful, 0.0, orientation(matrix)) if equations.active else orientation(moves)
        return answers[:, 0], turns


def solve(network: Network, sample: Sample, size: int) -> Solution:
    """Solve a network for every sample at once: see `Solver`."""
    return Solver(network).solve(sample, size)


def _prepared(network: Network) -> tuple[Equations, Elimination | None]:
    """Return the equations of the network and their elimination, None where that is not to be had.

    More than half of the networks of a review are of a form that was met before: the same corner of the
    circuit is asked for another quantity, in another regime, or with a trimmer held fast.
    """
    form = network.form()
    if form not in _PREPARED:
        if len(_PREPARED) >= _MOST_PREPARED:
            _PREPARED.clear()
        _PREPARED[form] = _prepare(network)
    return _PREPARED[form]


def _prepare(network: Network) -> tuple[Equations, Elimination | None]:
    if len(network.free) != len(network.conditions):
        raise ValueError("a closed loop needs one condition for each free quantity")
    if floating := network.floating():
        raise ValueError(f"floating nets: {', '.join(sorted(floating))}")
    equations = Equations(network)
    # The free quantities come last. What is left for them is the inverse of the moves, of the same sign.
    first = equations.free_from
    tail = 0 if equations.active else first
    try:
        return equations, Elimination(equations.places, equations.fixed, equations.unknowns, first, tail)
    except ValueError:  # singular whatever the values are, or too much of a mesh
        return equations, None
