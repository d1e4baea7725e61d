"""The equations of a network, written down once and filled in for as many samples as are asked.

Published method: C.-W. Ho, A. Ruehli, P. Brennan, "The modified nodal approach to network analysis",
IEEE Transactions on Circuits and Systems, CAS-22, no. 6, June 1975, pp. 504-509.

A row is an equation whose terms sum to zero: Kirchhoff's current law of a net, the law of a branch, a closed
loop's condition. A column is what the terms are multiplied by: first the unknowns (potentials of nets,
currents of branches, free quantities), then the drives (known potentials, what the sources give, by how
much the two nets of a condition shall differ).

Two things are added to the textbook form. A net of known potential has no equation of its own, for it is a
drive. And a free quantity is one more unknown with its condition as one more equation: a closed loop is one
linear solve for any network, not for a recognised shape of two resistors.
"""

from __future__ import annotations

from collections.abc import Container, Sequence

import numpy as np
from numpy.typing import NDArray

from .linear import Array
from .network import (
    ControlledSource,
    CurrentSource,
    Element,
    FreeCurrent,
    FreePotential,
    Network,
    Resistor,
    Sample,
    Value,
    VoltageSource,
)


class Equations:
    """The equations of one network.

    unknowns:   how many there are; `free_from` is the first that is a free quantity
    potentials: net to the column of its potential
    currents:   element or free current to the column of its current, where that is an unknown
    active:     a controlled source may feed back on itself
    settled:    for each unknown, whether a solution must settle it: only how a current divides between
                shorts in parallel may stay open
    """

    def __init__(self, network: Network) -> None:
        free_nets = {free.net for free in network.free if isinstance(free, FreePotential)}
        known = {net: value for net, value in network.known.items() if net not in free_nets}
        nets = [net for net in network.nets() if net not in known and net not in free_nets]
        branches = [element for element in network.elements if _has_branch(element, known)]
        self.free_from = len(nets) + len(branches)
        self.unknowns = self.free_from + len(network.free)
        self.active = any(isinstance(element, ControlledSource) for element in network.elements)
        self.settled = np.ones(self.unknowns, dtype=np.bool_)
        self.settled[len(nets) : self.free_from] = False
        self.potentials = dict(zip(nets, range(len(nets)), strict=True))
        self._rows = dict(self.potentials)
        self.currents = {branch.name: len(nets) + i for i, branch in enumerate(branches)}
        for column, free in enumerate(network.free, self.free_from):
            if isinstance(free, FreePotential):
                self.potentials[free.net] = column
            else:
                self.currents[free.name] = column
        self._values: list[Value] = [lambda _: np.ones(1)]
        self._drives: list[Value] = []
        self._terms: dict[tuple[int, int], list[tuple[int, float]]] = {}
        for net, value in known.items():
            self.potentials[net] = self._drive(value)
        for element in network.elements:
            if not _settles_nothing(element, known):
                self._add(element)
        for free in network.free:
            if isinstance(free, FreeCurrent):
                self._flow(free.a, free.b, self.currents[free.name])
        for row, condition in enumerate(network.conditions, self.free_from):
            self._difference(row, condition.a, condition.b)
            self._term(row, self._drive(condition.difference), -1.0)
        self._cells, self._pattern = self._laid_out()

    def values(self, sample: Sample, size: int) -> Array:
        """Return the coefficients in each sample, shape (coefficients, size)."""
        return _read(self._values, sample, size)

    def drives(self, sample: Sample, size: int) -> Array:
        """Return the drives in each sample, shape (drives, size)."""
        return _read(self._drives, sample, size)

    def filled(self, values: Array) -> tuple[Array, Array]:
        """Return what the coefficients `values` make of the equations: matrix * unknowns = right * drives.

        Shapes (unknowns, unknowns, size) and (unknowns, drives, size): the samples are the last axis, so
        that filling is one run through memory.
        """
        columns = self.unknowns + len(self._drives)
        filled = np.zeros((self.unknowns * columns, values.shape[1]))
        filled[self._cells] = self._pattern @ values
        filled = filled.reshape(self.unknowns, columns, values.shape[1])
        return filled[:, : self.unknowns], -filled[:, self.unknowns :]

    def _laid_out(self) -> tuple[NDArray[np.intp], Array]:
        """Return the places of all terms, and which coefficients with which sign sum up in each."""
        columns = self.unknowns + len(self._drives)
        cells = np.array([row * columns + column for row, column in self._terms], dtype=np.intp)
        pattern = np.zeros((len(cells), len(self._values)))
        for position, terms in enumerate(self._terms.values()):
            for value, sign in terms:
                pattern[position, value] += sign
        return cells, pattern

    def _add(self, element: Element) -> None:
        a, b = element.a, element.b
        if element.name in self.currents:
            self._branch(element, self.currents[element.name])
        elif isinstance(element, CurrentSource):
            self._flow(a, b, self._drive(element.current))
        elif isinstance(element, ControlledSource):
            self._conductance(a, b, element.control_a, element.control_b, element.gain)
        elif isinstance(element, Resistor):
            self._conductance(a, b, a, b, _conductance_of(element))

    def _branch(self, element: Element, column: int) -> None:
        """Let an unknown current flow through the element; the law of the branch has the same number."""
        self._flow(element.a, element.b, column)
        self._difference(column, element.a, element.b)
        if isinstance(element, Resistor):
            self._term(column, column, -1.0, self._value(element.resistance))
        elif isinstance(element, VoltageSource):
            self._term(column, self._drive(element.voltage), -1.0)
        elif isinstance(element, ControlledSource):
            gain = self._value(element.gain)
            self._difference(column, element.control_b, element.control_a, gain)

    def _conductance(self, a: str, b: str, control_a: str, control_b: str, siemens: Value) -> None:
        """Let the voltage between two nets drive a current out of `a` into `b`."""
        value = self._value(siemens)
        self._flow(a, b, self.potentials[control_a], value)
        self._flow(b, a, self.potentials[control_b], value)

    def _flow(self, a: str, b: str, column: int, value: int = 0) -> None:
        """Let `value` times what `column` stands for flow out of net `a` into net `b`."""
        if a in self._rows:
            self._term(self._rows[a], column, 1.0, value)
        if b in self._rows:
            self._term(self._rows[b], column, -1.0, value)

    def _difference(self, row: int, a: str, b: str, value: int = 0) -> None:
        """Add `value` times the voltage between two nets to an equation."""
        self._term(row, self.potentials[a], 1.0, value)
        self._term(row, self.potentials[b], -1.0, value)

    def _term(self, row: int, column: int, sign: float, value: int = 0) -> None:
        """Add a term to an equation; the coefficient 0 is the number one."""
        self._terms.setdefault((row, column), []).append((value, sign))

    def _value(self, value: Value) -> int:
        self._values.append(value)
        return len(self._values) - 1

    def _drive(self, value: Value) -> int:
        self._drives.append(value)
        return self.unknowns + len(self._drives) - 1


def _has_branch(element: Element, known: Container[str]) -> bool:
    """Tell whether the element's current is an unknown of its own (its conductance may be infinite)."""
    if isinstance(element, Resistor):
        return element.may_be_zero and not _settles_nothing(element, known)
    return isinstance(element, VoltageSource) or (
        isinstance(element, ControlledSource) and element.kind == "voltage"
    )


def _settles_nothing(element: Element, known: Container[str]) -> bool:
    """Tell whether a resistor has both ends on one net (a wiper tied to its end), or each on a known one."""
    ends_known = element.a in known and element.b in known
    return isinstance(element, Resistor) and (element.a == element.b or ends_known)


def _conductance_of(resistor: Resistor) -> Value:
    def conductance(sample: Sample) -> Array:
        return 1.0 / resistor.resistance(sample)

    return conductance


def _read(values: Sequence[Value], sample: Sample, size: int) -> Array:
    read = np.empty((len(values), size))
    for row, value in zip(read, values, strict=True):
        row[:] = value(sample)
    return read
