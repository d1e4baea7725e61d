"""What flows in a current-sense resistor at full load, by where it stands in the power stage.

Continuous conduction, ideal parts, ripple left out: a buck's switch carries the load while it is on, that of
a boost or of an inverting stage the load over 1 - duty.
Source: any text on switching converters (charge balance of the output capacitor).
"""

from __future__ import annotations

from dataclasses import dataclass
from math import sqrt

from .power_stage import NotRecognised, PowerStage


@dataclass(frozen=True, slots=True)
class SensedCurrent:
    """Average and effective value (A) of the current in the sense resistor."""

    average: float
    effective: float


def sensed_current(
    stage: PowerStage | NotRecognised, load: float, duty: float | None
) -> SensedCurrent | None:
    """Return the current in the sense resistor, None where that needs a turns ratio or a duty not told.

    load: of the output (A); duty: the longest one that the stage needs
    Where the stage or the resistor's place in it is not recognised, the load's current is taken.
    """
    if isinstance(stage, NotRecognised) or stage.sensed not in ("switch", "input"):
        return SensedCurrent(load, load)
    if duty is None or not 0 < duty < 1:
        return None
    on = load if stage.topology == "buck" else load / (1 - duty)
    if stage.sensed == "switch":
        return SensedCurrent(on * duty, on * sqrt(duty))
    average = on if stage.topology == "boost" else on * duty
    return SensedCurrent(average, average)
