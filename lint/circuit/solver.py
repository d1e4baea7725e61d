"""Solves a network by modified nodal analysis, many samples at once.

Most samples of a worst case differ in nothing but what drives the network: a reference, an offset, a supply.
So each matrix that occurs is solved once, for every drive by itself, and superposition makes the samples of
these answers.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from .equations import Equations
from .linear import Array, Stack, orientation
from .network import ControlledSource, CurrentSource, Element, Network, Resistor, Sample

# Larger stacks are solved piece by piece: as many coefficients as the fast memory of a processor holds.
_MOST_AT_ONCE = 60_000


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
        if len(network.free) != len(network.conditions):
            raise ValueError("a closed loop needs one condition for each free quantity")
        if floating := network.floating():
            raise ValueError(f"floating nets: {', '.join(sorted(floating))}")
        self.network = network
        self._equations = Equations(network)

    def solve(self, sample: Sample, size: int) -> Solution:
        """Return the solution for every sample.

        sample: parameter name to an array of shape (size,)
        A sample without a solution (rails shorted, a closed loop that nothing settles) gives NaN in every
        answer of that sample.
        """
        equations = self._equations
        values, drives = equations.values(sample, size), equations.drives(sample, size)
        step = max(1, _MOST_AT_ONCE // max(1, equations.unknowns * (equations.unknowns + len(drives))))
        pieces = [
            self._solved(values[:, i : i + step], drives[:, i : i + step]) for i in range(0, size, step)
        ]
        answers, directions = (np.concatenate(arrays, axis=-1) for arrays in zip(*pieces, strict=True))
        columns = [*answers, *drives]
        return Solution(
            self.network,
            sample,
            size,
            directions,
            {net: columns[column] for net, column in equations.potentials.items()},
            {name: columns[column] for name, column in equations.currents.items()},
        )

    def _solved(self, values: Array, drives: Array) -> tuple[Array, Array]:
        """Return the unknowns and the direction, in each sample.

        The determinant of all equations is linear in every single resistance or gain. So where it has one
        sign in all corners, it vanishes nowhere between them, and no answer runs away there. That of the
        moves is the same, over the determinant with the loops left open, which never vanishes in a network
        of resistances; and it can be told where shorts in parallel leave the whole one at zero.
        """
        equations = self._equations
        systems, system = _distinct(values)
        matrix, right = equations.filled(values[:, systems])
        if len(systems) == len(system):  # no two alike: superposition would only ask more
            right, drives = _summed(right, drives), np.ones_like(drives[:1])
        stack = Stack(matrix)
        # Besides: by how much does everything move with the difference that each condition asks for?
        nudges = np.eye(equations.unknowns)[:, equations.free_from :, None]
        answers, doubtful = stack.solve(_beside(right, nudges))
        each, moves = answers[:, : len(drives)], answers[equations.free_from :, len(drives) :]
        unknowns = _summed(each.take(system, axis=2), drives)[:, 0]
        if doubtful.any():
            samples = np.flatnonzero(doubtful[system])
            asked = _beside(_summed(right.take(system[samples], axis=2), drives[:, samples]), nudges)
            found = stack.solve_singular(system[samples], asked, equations.settled)
            unknowns[:, samples] = found[:, 0]
            moves[:, :, system[samples]] = found[equations.free_from :, 1:]
        turns = np.where(doubtful, 0.0, orientation(matrix)) if equations.active else orientation(moves)
        return unknowns, turns[system]


def solve(network: Network, sample: Sample, size: int) -> Solution:
    """Solve a network for every sample at once: see `Solver`."""
    return Solver(network).solve(sample, size)


def _distinct(values: Array) -> tuple[NDArray[np.intp], NDArray[np.intp]]:
    """Return one sample of each kind, and of which kind each sample is; all, where hardly two are alike."""
    rows = np.ascontiguousarray(values.T)
    as_bytes = rows.view(np.dtype((np.void, rows.itemsize * rows.shape[1])))[:, 0]
    _, first, kinds = np.unique(as_bytes, return_index=True, return_inverse=True)
    if 2 * len(first) > len(rows):
        first = kinds = np.arange(len(rows))
    return first, kinds


def _summed(each: Array, drives: Array) -> Array:
    """Return the sum over the drives, shape (unknowns, 1, samples)."""
    return np.einsum("ids,ds->is", each, drives)[:, None]


def _beside(right: Array, nudges: Array) -> Array:
    return np.concatenate([right, np.broadcast_to(nudges, (*nudges.shape[:2], right.shape[2]))], axis=1)
