"""Dead time from the voltage on the dead-time pin, as a band over the published models."""

from __future__ import annotations

from dataclasses import dataclass, replace

from ..controllers import Profile
from ..estimate import Estimate
from ..quantity import Spread


@dataclass(frozen=True, slots=True)
class DeadTime:
    """Dead time as a share of the oscillator's period, and in seconds where the frequency is known."""

    share: Estimate
    seconds: Estimate | None


def dead_time(profile: Profile, voltage: Estimate, frequency: Estimate | None) -> DeadTime:
    """Return the dead time that a voltage (V) on the dead-time pin makes at an oscillator frequency (Hz).

    The published models disagree, so the band runs from the least of them at the lowest voltage to the
    greatest at the highest; it never falls below what the family keeps at 0 V.
    """
    share = replace(
        voltage, spread=_share(profile, voltage.spread), statistical=_share(profile, voltage.statistical)
    )
    if frequency is None:
        return DeadTime(share, None)
    return DeadTime(share, _seconds(share, frequency))


def _share(profile: Profile, voltage: Spread) -> Spread:
    least = profile.figure("dead-time.least").spread()

    def models(volts: float) -> list[float]:
        return [model.dead_time(volts) for model in profile.dead_time_models]

    nominal = models(voltage.nominal)
    return Spread(
        max(least.minimum, min(models(voltage.minimum))),
        max(least.nominal, sum(nominal) / len(nominal)),
        max(least.maximum, max(models(voltage.maximum))),
        "",
    )


def _seconds(share: Estimate, frequency: Estimate) -> Estimate:
    def seconds(part: Spread, whole: Spread) -> Spread:
        return Spread(
            part.minimum / whole.maximum, part.nominal / whole.nominal, part.maximum / whole.minimum, "s"
        )

    return replace(
        share,
        spread=seconds(share.spread, frequency.spread),
        statistical=seconds(share.statistical, frequency.statistical),
        parts=tuple(dict.fromkeys((*share.parts, *frequency.parts))),
        nets=tuple(dict.fromkeys((*share.nets, *frequency.nets))),
        assumptions=tuple(dict.fromkeys((*share.assumptions, *frequency.assumptions))),
    )
