"""What a converter is doing while a question is asked: starting, regulating, limiting, shorted.

A regime is told by the potentials that differ from the standing circuit: the output net, the net of the
current-sense resistor, the supply; and by whether capacitors are still empty.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from enum import StrEnum

from ..quantity import Spread
from .amplifiers import SenseResistor
from .controllers import Controller
from .potentials import Potential


class Regime(StrEnum):
    """The regimes in which a rule may ask for a potential."""

    STANDING = "standing"  # rails as told, loops not closed
    START_UP = "start-up"  # supply and reference up, output at ground, capacitors empty
    LOWEST_INPUT = "regulation at the lowest supply"
    HIGHEST_INPUT = "regulation at the highest supply"
    NO_LOAD = "no load"
    CURRENT_LIMIT = "current limit"
    SHORT_CIRCUIT = "short circuit"
    SUPPLY_ABSENT = "supply absent"


# The regimes in which the voltage amplifier holds its inputs equal.
REGULATING = frozenset({Regime.LOWEST_INPUT, Regime.HIGHEST_INPUT, Regime.NO_LOAD})


@dataclass(frozen=True, slots=True)
class Operation:
    """What is known of the converter in operation, None where it is not.

    output:    the output net; regulated: its voltage in regulation, V
    sense:     the current-sense resistor; threshold: its voltage when the limit takes over, V
    threshold_shorted: the same with the output shorted
    full_load: its voltage at full load, V
    reversed:  the current lowers the end towards the power path, as it does where it returns below ground
    """

    output: str = ""
    regulated: Spread | None = None
    sense: SenseResistor | None = None
    threshold: Spread | None = None
    threshold_shorted: Spread | None = None
    full_load: Spread | None = None
    reversed: bool = False


_ZERO = Spread.exact(0.0, "V")


def potentials_in(
    regime: Regime, known: Mapping[str, Potential], controller: Controller, operation: Operation
) -> dict[str, Potential]:
    """Return the known potentials of a regime, over those of the standing circuit."""
    changed = dict(known)
    supply, reference = controller.net("supply") or "", controller.net("reference") or ""
    if regime is Regime.STANDING:
        return changed
    if regime is Regime.SUPPLY_ABSENT:
        _hold(changed, regime, supply, _ZERO)
        _hold(changed, regime, reference, _ZERO)
    if regime in (Regime.LOWEST_INPUT, Regime.HIGHEST_INPUT) and supply in known:
        band = known[supply].spread
        end = band.minimum if regime is Regime.LOWEST_INPUT else band.maximum
        _hold(changed, regime, supply, Spread.exact(end, "V"))
    _hold(changed, regime, operation.output, _output(regime, operation))
    if operation.sense is not None:
        near = operation.sense.near
        _hold(changed, regime, near, _near(changed, regime, operation, operation.sense))
    return changed


def _hold(changed: dict[str, Potential], regime: Regime, net: str, spread: Spread | None) -> None:
    if net and spread is not None:
        changed[net] = Potential(net, spread, "regime", label=f"{net} in {regime}")


def _output(regime: Regime, operation: Operation) -> Spread | None:
    """Return the voltage of the output net in a regime."""
    if regime in (Regime.START_UP, Regime.SHORT_CIRCUIT, Regime.SUPPLY_ABSENT):
        return _ZERO
    if regime is Regime.CURRENT_LIMIT and operation.regulated is not None:
        # While the limit holds, the output is anywhere from a short circuit to its regulated voltage.
        nominal = operation.regulated.nominal
        return Spread(min(0.0, nominal), nominal, max(0.0, nominal), "V")
    return operation.regulated


def _near(
    changed: Mapping[str, Potential], regime: Regime, operation: Operation, sense: SenseResistor
) -> Spread | None:
    """Return the potential of the sense resistor's end towards the power path."""
    across = {
        Regime.CURRENT_LIMIT: operation.threshold,
        Regime.SHORT_CIRCUIT: operation.threshold_shorted or operation.threshold,
        Regime.LOWEST_INPUT: operation.full_load,
        Regime.HIGHEST_INPUT: operation.full_load,
    }.get(regime, _ZERO)
    far = changed.get(sense.far)
    if across is None or far is None:
        return None
    if operation.reversed:
        across = Spread(-across.maximum, -across.nominal, -across.minimum, "V")
    base = far.spread
    return Spread(
        base.minimum + across.minimum, base.nominal + across.nominal, base.maximum + across.maximum, "V"
    )
