"""From a grown network to an estimate: solve, prove the assumptions about diodes, analyse the worst case."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import replace
from typing import TypeAlias

import numpy as np

from ..estimate import Estimate, Unsolved
from ..quantity import engineering
from .growth import Diode, Growth
from .solver import Array, Condition, Free, Network, Sample, Solution, solve
from .worst_case import Analysis, analyse

Probe: TypeAlias = Callable[[Solution], Array]

# A silicon junction conducts next to nothing up to here (from memory); beyond it "off" is not proved.
_JUNCTION_OFF_UP_TO = 0.3


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
    network = replace(
        _without_floating(growth.network(), free), free=tuple(free), conditions=tuple(conditions)
    )
    diodes = [d for d in growth.diodes if {d.anode, d.cathode} <= {*network.nets(), *network.known}]
    units = {name: unit for name, (_, unit) in probes.items()} | dict.fromkeys(map(_key, diodes), "V")
    reads = {name: probe for name, (probe, _) in probes.items()}
    reads |= {_key(diode): _forward_voltage(diode) for diode in diodes}
    analyses = analyse(list(growth.parameters.values()), _evaluation(network, reads), units)
    trouble = _trouble(growth, analyses, diodes)
    if trouble is not None:
        return trouble
    return {name: _estimate(growth, analyses[name]) for name in probes}


def _obstacle(growth: Growth) -> Unsolved | None:
    if growth.valueless:
        return Unsolved(
            "; ".join(growth.valueless.values()),
            parts=tuple(growth.valueless),
            needs=tuple(f"a value for {reference}" for reference in growth.valueless),
        )
    if not growth.blocked:
        return None
    nets = dict.fromkeys(blocked.net for blocked in growth.blocked)
    reasons = dict.fromkeys(f"net {blocked.net}: {blocked.reason}" for blocked in growth.blocked)
    return Unsolved(
        reason="no potential can be computed for " + "; ".join(reasons),
        parts=tuple(dict.fromkeys(blocked.part for blocked in growth.blocked)),
        nets=tuple(nets),
        needs=tuple(f'brief: [rails.{net}] voltage = "..."' for net in nets),
    )


def _without_floating(network: Network, free: Sequence[Free]) -> Network:
    """Leave out what no conductive path joins to a known potential: it carries no current."""
    floating = replace(network, free=tuple(free)).floating()
    elements = tuple(e for e in network.elements if not ({e.a, e.b} & floating))
    return replace(network, elements=elements)


def _key(diode: Diode) -> str:
    return f"forward voltage of {diode.part}"


def _forward_voltage(diode: Diode) -> Probe:
    return lambda solution: solution.voltage(diode.anode, diode.cathode)


def _evaluation(network: Network, reads: Mapping[str, Probe]) -> Callable[[Sample, int], Mapping[str, Array]]:
    def evaluate(sample: Sample, size: int) -> Mapping[str, Array]:
        solution = solve(network, sample, size)
        return {
            name: np.nan_to_num(np.broadcast_to(read(solution), (size,)), nan=np.inf, posinf=np.inf)
            for name, read in reads.items()
        }

    return evaluate


def _trouble(growth: Growth, analyses: Mapping[str, Analysis], diodes: Sequence[Diode]) -> Unsolved | None:
    for diode in diodes:
        forward = analyses[_key(diode)].spread.maximum
        if not forward <= _JUNCTION_OFF_UP_TO:
            return Unsolved(
                f"{diode.part} would see {engineering(forward, 'V')} forward, which is not covered",
                parts=(diode.part,),
                nets=(diode.anode, diode.cathode),
            )
    for name, analysis in analyses.items():
        if not analysis.monotonic:
            return Unsolved(
                f"{name} is not monotonic in its parameters: its corners do not bound it",
                parts=tuple(growth.parts),
                nets=tuple(growth.nets),
            )
    return None


def _estimate(growth: Growth, analysis: Analysis) -> Estimate:
    assumptions = [*growth.assumptions]
    assumptions += [f"{diode.part} blocks, as the solution bears out" for diode in growth.diodes]
    assumptions += [f"{part} taken as off" for part in growth.switches]
    return Estimate(
        spread=analysis.spread,
        statistical=analysis.statistical,
        contributions=analysis.contributions,
        parts=tuple(growth.parts),
        nets=tuple(growth.nets),
        assumptions=tuple(assumptions),
    )
