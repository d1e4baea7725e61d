"""What trimmers can set on the bench, whatever the tolerances of the unit at hand."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace
from itertools import product

from ..estimate import Unsolved
from ..quantity import Spread
from .answers import estimate
from .growth import Growth
from .network import Condition, Free
from .states import Probe
from .worst_case import Parameter, Variation


def trimmers(growth: Growth) -> tuple[str, ...]:
    """Return the reference designators of the trimmers in a network."""
    return tuple(parameter.label for parameter in _travels(growth))


def _travels(growth: Growth) -> list[Parameter]:
    return [p for p in growth.parameters.values() if p.variation is Variation.TRAVEL]


def settable(
    growth: Growth,
    probes: Mapping[str, tuple[Probe, str]],
    name: str,
    free: Sequence[Free] = (),
    conditions: Sequence[Condition] = (),
) -> tuple[float, float] | None:
    """Return the values of the probe `name` between which every unit can be set.

    Each end is as the least favourable unit has it, so the two are crossed where no value is within reach
    of every unit. None without a trimmer, or where an end of the travel has no solution.
    """
    travel = _travels(growth)
    if not travel:
        return None
    ends: list[Spread] = []
    for positions in product((0.0, 1.0), repeat=len(travel)):
        fixed = {p.name: replace(p, low=x, nominal=x, high=x) for p, x in zip(travel, positions, strict=True)}
        growth.parameters.update(fixed)
        found = estimate(growth, probes, free, conditions)
        if isinstance(found, Unsolved):
            return None
        ends.append(found[name].spread)
    lowest = min(ends, key=lambda end: end.nominal)
    highest = max(ends, key=lambda end: end.nominal)
    return lowest.maximum, highest.minimum
