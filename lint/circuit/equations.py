"""The equations of a network: their form, written down once, and filled in for as many samples as are asked.

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

from collections import defaultdict
from collections.abc import Container
from itertools import count
from typing import TypeAlias

import numpy as np

from .linear import Array, Place, grouping
from .network import (
    ControlledSource,
    CurrentSource,
    Element,
    FreeCurrent,
    FreePotential,
    Network,
    Resistor,
    Sample,
    VoltageSource,
)

# What sums up in one place: the numbers of coefficients, and their signs.
Terms: TypeAlias = list[tuple[int, float]]


class Equations:
    """The equations of all networks of one form, which differ in their values alone.

    unknowns:   how many there are; `free_from` is the first that is a free quantity
    potentials: net to the column of its potential
    currents:   element or free current to the column of its current, where that is an unknown
    places:     row and column of each coefficient that may differ from zero
    fixed:      the numbers of those that are 1 or -1 in every sample
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
        # By their numbers in `Network.values`: which are coefficients (by the inverse), which are drives.
        self._coefficients: list[int] = []
        self._inverted: list[int] = []
        self._drives: list[int] = []
        self._terms: defaultdict[Place, Terms] = defaultdict(list)
        for number, net in enumerate(network.known):
            if net in known:
                self.potentials[net] = self._drive(number)
        for number, element in enumerate(network.elements, len(network.known)):
            if not _settles_nothing(element, known):
                self._add(element, number)
        for free in network.free:
            if isinstance(free, FreeCurrent):
                self._flow(free.a, free.b, self.currents[free.name])
        numbers = count(len(network.known) + len(network.elements))
        for row, condition, number in zip(count(self.free_from), network.conditions, numbers, strict=False):
            self._difference(row, condition.a, condition.b)
            self._term(row, self._drive(number), -1.0)
        self._lay_out()

    def _lay_out(self) -> None:
        """Number the places, those that the drives stand at last, and say what sums up in each."""
        places = sorted(self._terms, key=lambda place: place[1] >= self.unknowns)
        self._pattern = np.zeros((len(places), 1 + len(self._coefficients)))
        for position, place in enumerate(places):
            for coefficient, sign in self._terms[place]:
                self._pattern[position, coefficient] += sign
        self.places = [place for place in places if place[1] < self.unknowns]
        self.fixed = [i for i, place in enumerate(self.places) if _is_fixed(self._terms[place])]
        driven = places[len(self.places) :]
        self._inverse = np.array(self._inverted, dtype=np.intp)
        self._driven_by = np.array([column - self.unknowns for _, column in driven], dtype=np.intp)
        # What the drives make is brought over to the right, hence the sign.
        self._on_the_right = -grouping([row for row, _ in driven], self.unknowns)

    def filled(self, network: Network, sample: Sample, size: int) -> tuple[Array, Array, Array]:
        """Return the coefficients at `places`, the right side, and the drives that it is made of.

        network: one of this form
        Shapes (places, size), (unknowns, size), (drives, size): the samples are the last axis, so that each
        operation on them is one run through memory.
        """
        values = network.values()
        coefficients = np.ones((1 + len(self._coefficients), size))
        for row, number in enumerate(self._coefficients, 1):
            coefficients[row] = values[number](sample)
        coefficients[self._inverse] = 1.0 / coefficients.take(self._inverse, axis=0)
        drives = np.empty((len(self._drives), size))
        for row, number in enumerate(self._drives):
            drives[row] = values[number](sample)
        terms = self._pattern @ coefficients
        entries, driven = terms[: len(self.places)], terms[len(self.places) :]
        return entries, self._on_the_right @ (driven * drives.take(self._driven_by, axis=0)), drives

    def matrix(self, entries: Array) -> Array:
        """Return the coefficients at `places` as full matrices, shape (unknowns, unknowns, size)."""
        matrix = np.zeros((self.unknowns, self.unknowns, entries.shape[1]))
        rows, columns = zip(*self.places, strict=True) if self.places else ((), ())
        matrix[list(rows), list(columns)] = entries
        return matrix

    def _add(self, element: Element, number: int) -> None:
        a, b = element.a, element.b
        if element.name in self.currents:
            self._branch(element, number, self.currents[element.name])
        elif isinstance(element, CurrentSource):
            self._flow(a, b, self._drive(number))
        elif isinstance(element, ControlledSource):
            self._conductance(a, b, element.control_a, element.control_b, self._value(number))
        elif isinstance(element, Resistor):
            siemens = self._value(number)
            self._inverted.append(siemens)
            self._conductance(a, b, a, b, siemens)

    def _branch(self, element: Element, number: int, column: int) -> None:
        """Let an unknown current flow through the element; the law of the branch has the same number."""
        self._flow(element.a, element.b, column)
        self._difference(column, element.a, element.b)
        if isinstance(element, Resistor):
            self._term(column, column, -1.0, self._value(number))
        elif isinstance(element, VoltageSource):
            self._term(column, self._drive(number), -1.0)
        elif isinstance(element, ControlledSource):
            gain = self._value(number)
            self._difference(column, element.control_b, element.control_a, gain)

    def _conductance(self, a: str, b: str, control_a: str, control_b: str, siemens: int) -> None:
        """Let the voltage between two nets drive a current out of `a` into `b`."""
        self._flow(a, b, self.potentials[control_a], siemens)
        self._flow(b, a, self.potentials[control_b], siemens)

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
        self._terms[row, column].append((value, sign))

    def _value(self, number: int) -> int:
        self._coefficients.append(number)
        return len(self._coefficients)

    def _drive(self, number: int) -> int:
        self._drives.append(number)
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


def _is_fixed(terms: Terms) -> bool:
    """Tell whether a coefficient is 1 or -1 in every sample."""
    return len(terms) == 1 and terms[0][0] == 0
