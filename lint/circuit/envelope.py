"""Between which potentials each net moves while the converter works: the hull of what its regimes give."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from math import isfinite

from ..quantity import Spread
from .controllers import Controller
from .potentials import Potential
from .regimes import Operation, Regime, potentials_in

# Regulation, and what the parts have to stand beside it for as long as it lasts. The start is left out: it is
# over before a part grows warm, and an output at ground is met in the short circuit as well.
IN_REGULATION = (Regime.NO_LOAD, Regime.LOWEST_INPUT, Regime.HIGHEST_INPUT)
WITH_FAULTS = (*IN_REGULATION, Regime.CURRENT_LIMIT, Regime.SHORT_CIRCUIT)

# Pins that move over a range which the profile knows.
_MOVING_PINS = {"feedback": "feedback.control-range", "timing capacitor": "oscillator.ramp"}


@dataclass(frozen=True, slots=True)
class Operated:
    """A controller and what is known of its converter in operation."""

    controller: Controller
    operation: Operation


def envelope(
    known: Mapping[str, Potential], converters: Sequence[Operated], regimes: Sequence[Regime]
) -> dict[str, Potential]:
    """Return the known potentials, each widened to wherever one of `regimes` takes its net.

    Nets then count as independent of each other, which bounds what they do together.
    """
    found = dict(known)
    for one in converters:
        for regime in regimes:
            for net, potential in potentials_in(regime, known, one.controller, one.operation).items():
                if _is_finite(potential.spread):  # else its loop has run away, and other rules say so
                    found[net] = _widened(found.get(net, potential), potential)
        found |= _moving(one.controller, found)
    return found


def _is_finite(spread: Spread) -> bool:
    return isfinite(spread.minimum) and isfinite(spread.maximum)


def _widened(potential: Potential, other: Potential) -> Potential:
    """Return a potential that holds two."""
    low = min(potential.spread.minimum, other.spread.minimum)
    high = max(potential.spread.maximum, other.spread.maximum)
    if (low, high) == (potential.spread.minimum, potential.spread.maximum):
        return potential
    spread = Spread(low, potential.spread.nominal, high, "V")
    return Potential(potential.net, spread, "regime", label=f"{potential.net} in operation")


def _moving(controller: Controller, known: Mapping[str, Potential]) -> dict[str, Potential]:
    """Return the pins of a controller that move over a range of their own."""
    found: dict[str, Potential] = {}
    for role, figure in _MOVING_PINS.items():
        net = controller.net(role)
        if net and net not in known and figure in controller.profile.figures:
            spread = controller.profile.figure(figure).spread()
            found[net] = Potential(net, spread, "regime", label=f"{controller.reference} {role}")
    return found
