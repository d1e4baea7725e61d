"""Piecewise-linear diodes: which of them conducts, found out sample by sample.

A junction is off (open, its forward voltage below the drop), on (it holds the drop, its current forward) or,
for a zener, in breakdown (it holds the zener voltage, its current backward). In each sample the combination
is kept whose own conditions the solution bears out. With few junctions every one can be tried; what fits one
sample is tried on all others first. For a network of resistances and sources that combination is unique but
on the edges between two.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, replace
from enum import Enum
from itertools import product
from typing import TypeAlias

import numpy as np
from numpy.typing import NDArray

from .linear import Array
from .network import Network, Sample, Value, VoltageSource
from .solver import Solution, Solver

Probe: TypeAlias = Callable[[Solution], Array]
Truth: TypeAlias = NDArray[np.bool_]

MOST_JUNCTIONS = 5

# Rounding of a current or voltage that is zero on the edge between two states.
_EDGE = 1e-12


class State(Enum):
    """What a junction does."""

    OFF = "blocks"
    ON = "conducts"
    BREAKDOWN = "is in breakdown"


States: TypeAlias = tuple[State, ...]


@dataclass(frozen=True, slots=True)
class Junction:
    """A diode on the network.

    drop:      its forward voltage when it conducts, in V
    breakdown: its zener voltage, in V; None for a diode that is not meant to break down
    """

    part: str
    anode: str
    cathode: str
    drop: Value
    breakdown: Value | None = None

    @property
    def states(self) -> tuple[State, ...]:
        """Return the states it can be in, the likeliest first."""
        return (State.OFF, State.ON) if self.breakdown is None else tuple(State)


@dataclass(frozen=True, slots=True)
class Answers:
    """What the probes read in each sample, and in which states the junctions were.

    values: probe to an array of shape (samples,); NaN where no solution exists
    states: junction's part to the states met, in order of appearance
    """

    values: dict[str, Array]
    states: dict[str, tuple[State, ...]]


class PiecewiseLinear:
    """A network with junctions on it, ready for any number of samples."""

    def __init__(self, network: Network, junctions: Sequence[Junction]) -> None:
        self._network = network
        self._junctions = junctions
        self._solvers: dict[States, Solver | None] = {}

    def read(self, probes: Mapping[str, Probe], sample: Sample, size: int) -> Answers:
        """Solve every sample with the junctions in the states that fit, and read the probes.

        From the first sample on that no states fit everything is NaN.
        """
        values = {name: np.full(size, np.nan) for name in probes}
        met: dict[str, dict[State, None]] = {junction.part: {} for junction in self._junctions}
        unsettled = np.arange(size)
        while len(unsettled):
            part = sample if len(unsettled) == size else _at(sample, unsettled)
            states = self._fitting(_at(part, np.arange(1)))
            solution = None if states is None else self._solved_in(states, part, len(unsettled))
            if states is None or solution is None:
                break
            fits = _borne_out(solution, self._junctions, states)
            fits[0] = True  # it was borne out before: on the edge of two states, rounding may turn it round
            for junction, state in zip(self._junctions, states, strict=True):
                met[junction.part][state] = None
            for name, probe in probes.items():
                values[name][unsettled[fits]] = np.broadcast_to(probe(solution), (len(unsettled),))[fits]
            unsettled = unsettled[~fits]
        return Answers(values, {part: tuple(found) for part, found in met.items()})

    def _fitting(self, sample: Sample) -> States | None:
        """Return the states that fit a single sample, None where there are none.

        From all blocking: each solution says which junctions contradict it, and what they want to be. Where
        that leads in a circle, the next combination is tried.
        """
        if not self._junctions:
            return ()
        untried = dict.fromkeys(product(*(junction.states for junction in self._junctions)))
        wanted: States = (State.OFF,) * len(self._junctions)
        while untried:
            states = wanted if wanted in untried else next(iter(untried))
            del untried[states]
            solution = self._solved_in(states, sample, 1)
            if solution is not None:
                wanted = _wanted(solution, self._junctions, states)
                if wanted == states:
                    return states
        return None

    def _solved_in(self, states: States, sample: Sample, size: int) -> Solution | None:
        """Return the solution with the junctions in `states`, None where a net that needs a path floats."""
        if states not in self._solvers:
            self._solvers[states] = self._solver(states)
        solver = self._solvers[states]
        return None if solver is None else solver.solve(sample, size)

    def _solver(self, states: States) -> Solver | None:
        pairs = zip(self._junctions, states, strict=True)
        sources = [_source(junction, state) for junction, state in pairs if state is not State.OFF]
        whole = replace(self._network, elements=(*self._network.elements, *sources))
        floating = whole.floating()
        if floating & whole.needed():
            return None
        kept = tuple(e for e in whole.elements if e.a not in floating and e.b not in floating)
        return Solver(replace(whole, elements=kept))


def _at(sample: Sample, rows: NDArray[np.int_]) -> Sample:
    return {name: column[rows] for name, column in sample.items()}


def _source(junction: Junction, state: State) -> VoltageSource:
    """Return the source that stands for a conducting junction, positive towards the anode."""
    if state is State.ON:
        return VoltageSource(junction.part, junction.anode, junction.cathode, junction.drop)
    assert junction.breakdown is not None
    return VoltageSource(junction.part, junction.cathode, junction.anode, junction.breakdown)


def _borne_out(solution: Solution, junctions: Sequence[Junction], states: States) -> Truth:
    """Tell, sample by sample, whether the solution agrees with the states it was made with."""
    fits: Truth = np.ones(solution.size, dtype=np.bool_)
    for junction, state in zip(junctions, states, strict=True):
        fits &= _agrees(solution, junction, state)
    return fits


def _wanted(solution: Solution, junctions: Sequence[Junction], states: States) -> States:
    """Return the states that the first sample asks for where it contradicts those it was solved with."""
    return tuple(
        state if _agrees(solution, junction, state)[0] else _other(solution, junction, state)
        for junction, state in zip(junctions, states, strict=True)
    )


def _other(solution: Solution, junction: Junction, state: State) -> State:
    if state is not State.OFF:
        return State.OFF
    forward = solution.voltage(junction.anode, junction.cathode)[0] > 0
    return State.ON if forward else State.BREAKDOWN


def _agrees(solution: Solution, junction: Junction, state: State) -> Truth:
    if not {junction.anode, junction.cathode} <= solution.nets:
        return np.full(solution.size, state is State.OFF)  # it hangs on a net without any path: no current
    with np.errstate(invalid="ignore"):
        if state is not State.OFF:
            # Forward current in the on state, and towards the anode in breakdown: out of the source's plus.
            return solution.current(_source(junction, state)) >= -_EDGE
        forward = solution.voltage(junction.anode, junction.cathode)
        fits = forward <= junction.drop(solution.sample) + _EDGE
        if junction.breakdown is not None:
            fits &= -forward <= junction.breakdown(solution.sample) + _EDGE
        return fits
