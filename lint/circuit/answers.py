"""From a grown network to an estimate: solve, prove the assumptions about diodes, analyse the worst case."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace
from math import isfinite

import numpy as np

from .. import needs
from ..estimate import Estimate, Method, Unsolved
from .growth import Growth
from .linear import Array
from .monte_carlo import monte_carlo, statement
from .network import Condition, Free, Network, Sample
from .states import MOST_JUNCTIONS, Junction, PiecewiseLinear, Probe, State
from .worst_case import Analysis, analyse

# The name under which the direction of the solution is read beside the probes.
_DIRECTION = "direction"

# No controller's pin stands in a network as large as this; a netlist that has one shall not stop a review.
_MOST_ELEMENTS = 250


def estimate(
    growth: Growth,
    probes: Mapping[str, tuple[Probe, str]],
    free: Sequence[Free] = (),
    conditions: Sequence[Condition] = (),
) -> dict[str, Estimate] | Unsolved:
    """Solve what has grown and return the estimate of every probe, or why there is none.

    probes:     name to (what to read from a solution, its unit)
    free, conditions: the closed loops, as in `solver.Network`
    A sample whose closed loop has no solution counts as infinite: the loop runs away there.
    """
    obstacle = _obstacle(growth)
    if obstacle is not None:
        return obstacle
    network = replace(growth.network(), free=tuple(free), conditions=tuple(conditions))
    adrift = network.floating() & network.needed()
    if adrift and not growth.diodes:
        nets = tuple(sorted(adrift))
        return Unsolved(f"no direct-current path to net {', '.join(nets)}", nets=nets)
    evaluation = _Evaluation(
        network, growth.junctions(), {name: probe for name, (probe, _) in probes.items()}
    )
    units = {name: unit for name, (_, unit) in probes.items()}
    analyses = analyse(list(growth.parameters.values()), evaluation, units)
    trouble = _trouble(growth, analyses, evaluation)
    if trouble is not None:
        return trouble
    decided = _decided(growth, analyses, evaluation, units)
    return {name: _estimate(growth, decided[name], evaluation) for name in probes}


def _decided(
    growth: Growth, analyses: Mapping[str, Analysis], evaluation: _Evaluation, units: Mapping[str, str]
) -> Mapping[str, Analysis]:
    """Return the analyses with the spread of the method that is to decide."""
    if growth.circuit.conditions.method is Method.EXTREME:
        return analyses
    if growth.circuit.conditions.method is Method.RSS:
        return {name: replace(found, spread=found.statistical) for name, found in analyses.items()}
    drawn = monte_carlo(list(growth.parameters.values()), evaluation, units)
    growth.assume(statement())
    return {
        name: replace(found, spread=drawn[name], statistical=drawn[name]) for name, found in analyses.items()
    }


def _obstacle(growth: Growth) -> Unsolved | None:
    if growth.valueless:
        return Unsolved(
            "; ".join(growth.valueless.values()),
            parts=tuple(growth.valueless),
            needs=tuple(f"a value for {reference}" for reference in growth.valueless),
        )
    if len(growth.diodes) > MOST_JUNCTIONS:
        names = tuple(diode.part for diode in growth.diodes)
        return Unsolved(f"too many diodes on one network: {', '.join(names)}", parts=names)
    if len(growth.elements) > _MOST_ELEMENTS:
        nets = tuple(growth.nets)[:1]
        return Unsolved(
            f"the network round {nets[0]} has {len(growth.elements)} parts, too many to solve", nets=nets
        )
    if not growth.blocked:
        return None
    nets = dict.fromkeys(blocked.net for blocked in growth.blocked)
    reasons = dict.fromkeys(f"net {blocked.net}: {blocked.reason}" for blocked in growth.blocked)
    return Unsolved(
        reason="no potential can be computed for " + "; ".join(reasons),
        parts=tuple(dict.fromkeys(blocked.part for blocked in growth.blocked)),
        nets=tuple(nets),
        needs=tuple(needs.rail(net) for net in nets),
    )


class _Evaluation:
    """Evaluates the probes for the worst-case analysis, and keeps in mind what was met on the way."""

    def __init__(self, network: Network, junctions: Sequence[Junction], probes: Mapping[str, Probe]) -> None:
        self._network = PiecewiseLinear(network, junctions)
        self._probes: dict[str, Probe] = {**probes, _DIRECTION: lambda solution: solution.direction}
        self.states: dict[str, dict[State, None]] = {junction.part: {} for junction in junctions}
        self.unsettled = False
        self.upwards = self.downwards = False
        self.closed = bool(network.conditions)

    def __call__(self, sample: Sample, size: int) -> Mapping[str, Array]:
        answers = self._network.read(self._probes, sample, size)
        direction = answers.values.pop(_DIRECTION)
        self.upwards = self.upwards or bool((direction > 0).any())
        self.downwards = self.downwards or bool((direction < 0).any())
        for part, met in answers.states.items():
            self.states[part].update(dict.fromkeys(met))
        if self.states and any(np.isnan(column).any() for column in answers.values.values()):
            self.unsettled = True
        # A closed loop without a solution runs away: whatever it settles counts as infinite there.
        return {name: np.where(np.isnan(column), np.inf, column) for name, column in answers.values.items()}


def _trouble(growth: Growth, analyses: Mapping[str, Analysis], evaluation: _Evaluation) -> Unsolved | None:
    parts, nets = tuple(growth.parts), tuple(growth.nets)
    if evaluation.unsettled:
        names = ", ".join(evaluation.states)
        return Unsolved(f"no state of {names} fits the network in every corner", parts=parts, nets=nets)
    if evaluation.upwards and evaluation.downwards:
        reason = "the feedback changes its sign within the tolerances, so that nothing bounds the loop"
        return Unsolved(reason, parts, nets)
    for name, analysis in analyses.items():
        if not evaluation.closed and not isfinite(analysis.spread.nominal):
            return Unsolved("the sources and shorts on the network contradict each other", parts, nets)
        if not analysis.monotonic:
            reason = f"{name} is not monotonic in its parameters: its corners do not bound it"
            return Unsolved(reason, parts=parts, nets=nets)
    return None


def _estimate(growth: Growth, analysis: Analysis, evaluation: _Evaluation) -> Estimate:
    assumptions = [*growth.assumptions]
    for part, states in evaluation.states.items():
        assumptions.append(
            f"{part} {' or '.join(state.value for state in states)}, as the solution bears out"
        )
    assumptions += [f"{part} taken as off" for part in growth.switches]
    return Estimate(
        spread=analysis.spread,
        statistical=analysis.statistical,
        contributions=analysis.contributions,
        parts=tuple(growth.parts),
        nets=tuple(growth.nets),
        assumptions=tuple(assumptions),
    )
