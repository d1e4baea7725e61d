"""Modified nodal analysis of a small linear network, many samples at once.

Published method: C.-W. Ho, A. Ruehli, P. Brennan, "The modified nodal approach to network analysis",
IEEE Transactions on Circuits and Systems, CAS-22, no. 6, June 1975, pp. 504-509.

Two things are added to the textbook form. A net of known potential (ground, the reference, a rail) has no
equation of its own; what it feeds goes to the right-hand side. And a free quantity is an unknown more, with
its condition as an equation more: a closed loop is one linear solve for any network, not for a recognised
shape of two resistors.
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np

from .linear import Array, solve_each
from .network import (
    Condition,
    ControlledSource,
    CurrentSource,
    Element,
    Free,
    FreeCurrent,
    FreePotential,
    Network,
    Resistor,
    Sample,
    VoltageSource,
)


@dataclass(slots=True)
class Solution:
    """Voltages and currents of one network, arrays of shape (samples,). Where no solution exists: NaN.

    loop_direction: in which direction (1 or -1) the free quantities move what the conditions compare; 0 where
                    they do not
    """

    network: Network
    sample: Sample
    size: int
    _potentials: dict[str, Array]
    _branches: dict[str, Array]
    _free: dict[str, Array] = field(default_factory=dict[str, Array])
    loop_direction: Array = field(default_factory=lambda: np.zeros(1))

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
        return self._free[name]

    def current(self, element: Element) -> Array:
        """Return the current through `element` from its `a` to its `b` terminal, in amperes."""
        if element.name in self._branches:
            return self._branches[element.name]
        if isinstance(element, CurrentSource):
            return _array(element.current(self.sample), self.size)
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


def solve(network: Network, sample: Sample, size: int) -> Solution:
    """Solve `network` for every sample at once.

    sample: parameter name to an array of shape (size,)
    Raises ValueError where the network is not well posed (a floating net, as many conditions as free
    quantities wanted): the caller must have looked. A sample without a solution (rails shorted, a
    closed loop that nothing settles) gives NaN in every answer of that sample.
    """
    if len(network.free) != len(network.conditions):
        raise ValueError("a closed loop needs one condition for each free quantity")
    if network.floating():
        raise ValueError(f"floating nets: {', '.join(sorted(network.floating()))}")
    equations = _Equations(network, sample, size)
    for element in network.elements:
        equations.add(element)
    for position, free in enumerate(network.free):
        equations.add_free(position, free)
    for position, condition in enumerate(network.conditions):
        equations.add_condition(position, condition)
    answer = solve_each(equations.matrix, equations.right, equations.settled)
    return equations.solution(answer)


def _array(value: Array | float, size: int) -> Array:
    return np.broadcast_to(np.asarray(value, dtype=np.float64), (size,))


class _Equations:
    """The stacked matrix and right-hand side while they are being stamped.

    Rows: Kirchhoff's current law of each ordinary net, then one equation a branch, then the conditions.
    Columns: the potentials of the ordinary nets, the branch currents, the free quantities.
    The samples are the last axis, so that every stamp is one run through memory.
    """

    def __init__(self, network: Network, sample: Sample, size: int) -> None:
        self.network = network
        self.sample = sample
        self.size = size
        self.known = {net: _array(value(sample), size) for net, value in network.known.items()}
        free_nets = {free.net for free in network.free if isinstance(free, FreePotential)}
        self.known = {net: value for net, value in self.known.items() if net not in free_nets}
        ordinary = [net for net in network.nets() if net not in self.known and net not in free_nets]
        self.rows = {net: index for index, net in enumerate(ordinary)}
        self.columns = dict(self.rows)
        self.branches = [element for element in network.elements if self._has_branch(element)]
        self.branch_index = {b.name: len(ordinary) + i for i, b in enumerate(self.branches)}
        self.first_free = len(ordinary) + len(self.branches)
        for position, free in enumerate(network.free):
            if isinstance(free, FreePotential):
                self.columns[free.net] = self.first_free + position
        count = self.first_free + len(network.free)
        # How a current divides between shorts in parallel may stay open; nothing else may.
        self.settled = np.ones(count, dtype=np.bool_)
        self.settled[len(ordinary) : self.first_free] = False
        self.matrix: Array = np.zeros((count, count, size))
        self.right: Array = np.zeros((count, size))

    def add(self, element: Element) -> None:
        if isinstance(element, CurrentSource):
            self._inject(element.a, element.b, element.current(self.sample))
        elif isinstance(element, ControlledSource) and element.kind == "current":
            self._transconductance(element)
        elif element.name in self.branch_index:
            self._branch(element)
        elif not self._settles_nothing(element):
            assert isinstance(element, Resistor)
            self._conductance(element.a, element.b, 1.0 / element.resistance(self.sample))

    def add_free(self, position: int, free: Free) -> None:
        if isinstance(free, FreeCurrent):
            column = self.first_free + position
            if free.a in self.rows:
                self.matrix[self.rows[free.a], column] += 1.0
            if free.b in self.rows:
                self.matrix[self.rows[free.b], column] -= 1.0

    def add_condition(self, position: int, condition: Condition) -> None:
        row = self.first_free + position
        self._potential(row, condition.a, 1.0)
        self._potential(row, condition.b, -1.0)
        self.right[row] += condition.difference(self.sample)

    def solution(self, answer: Array) -> Solution:
        potentials = {net: answer[column] for net, column in self.columns.items()}
        potentials.update(self.known)
        branches = {name: answer[index] for name, index in self.branch_index.items()}
        free = {
            free.name: answer[self.first_free + position]
            for position, free in enumerate(self.network.free)
            if isinstance(free, FreeCurrent)
        }
        direction = self._loop_direction(answer) if self.network.free else np.ones(1)
        return Solution(self.network, self.sample, self.size, potentials, branches, free, direction)

    def _loop_direction(self, answer: Array) -> Array:
        """Return the sign of the determinant, that of the branches taken out; 0 where there is no answer.

        The determinant is linear in every single resistance or gain. So where it has one sign in all corners
        it is zero nowhere between them, and the closed loop runs away nowhere between them.
        """
        sign, _ = np.linalg.slogdet(np.moveaxis(self.matrix, -1, 0))
        direction = np.asarray(sign, dtype=np.float64) * (-1.0) ** len(self.branches)
        return np.where(np.isnan(answer[self.first_free]), 0.0, direction)

    def _has_branch(self, element: Element) -> bool:
        """Tell whether the element's current is an unknown of its own (its conductance may be infinite)."""
        if isinstance(element, Resistor):
            return element.may_be_zero and not self._settles_nothing(element)
        return isinstance(element, VoltageSource) or (
            isinstance(element, ControlledSource) and element.kind == "voltage"
        )

    def _settles_nothing(self, element: Element) -> bool:
        """Tell whether both ends are on one net (a wiper tied to its end), or each on a known one."""
        return element.a == element.b or {element.a, element.b} <= self.known.keys()

    def _potential(self, row: int, net: str, factor: Array | float) -> None:
        """Add `factor` times the potential of `net` to the left side of equation `row`."""
        if net in self.columns:
            self.matrix[row, self.columns[net]] += factor
        else:
            self.right[row] -= factor * self.known[net]

    def _conductance(self, a: str, b: str, conductance: Array) -> None:
        for here, there in ((a, b), (b, a)):
            if here in self.rows:
                self._potential(self.rows[here], here, conductance)
                self._potential(self.rows[here], there, -conductance)

    def _inject(self, a: str, b: str, current: Array) -> None:
        if a in self.rows:
            self.right[self.rows[a]] -= current
        if b in self.rows:
            self.right[self.rows[b]] += current

    def _transconductance(self, source: ControlledSource) -> None:
        gain = source.gain(self.sample)
        for net, sign in ((source.a, 1.0), (source.b, -1.0)):
            if net in self.rows:
                self._potential(self.rows[net], source.control_a, sign * gain)
                self._potential(self.rows[net], source.control_b, -sign * gain)

    def _branch(self, element: Element) -> None:
        index = self.branch_index[element.name]
        if element.a in self.rows:
            self.matrix[self.rows[element.a], index] += 1.0
        if element.b in self.rows:
            self.matrix[self.rows[element.b], index] -= 1.0
        self._potential(index, element.a, 1.0)
        self._potential(index, element.b, -1.0)
        if isinstance(element, Resistor):
            self.matrix[index, index] -= element.resistance(self.sample)
        elif isinstance(element, VoltageSource):
            self.right[index] += element.voltage(self.sample)
        elif isinstance(element, ControlledSource):
            gain = element.gain(self.sample)
            self._potential(index, element.control_a, -gain)
            self._potential(index, element.control_b, gain)
