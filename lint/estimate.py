"""A computed quantity with everything that went into it: what rules judge and reports print."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from enum import StrEnum

from .quantity import Spread


class Method(StrEnum):
    """Which worst-case analysis decides a verdict."""

    EXTREME = "extreme"
    RSS = "rss"
    MONTE_CARLO = "monte-carlo"


@dataclass(frozen=True, slots=True)
class Estimate:
    """One quantity of the circuit over tolerances, trimmers and ranges.

    spread:      extreme value analysis: every parameter at its worst end at once
    statistical: root-sum-square of the tolerances inside the same outer loops (supply, load, trimmer)
    contributions: (parameter, share of the spread 0..1), the greatest first
    parts, nets: what took part in it
    assumptions: defaults and guesses behind it, each a sentence
    formula:     the formula with the numbers in it
    """

    spread: Spread
    statistical: Spread
    contributions: tuple[tuple[str, float], ...] = ()
    parts: tuple[str, ...] = ()
    nets: tuple[str, ...] = ()
    assumptions: tuple[str, ...] = ()
    formula: str = ""

    def because(self, formula: str) -> Estimate:
        """Return the same estimate with `formula` as its explanation."""
        return replace(self, formula=formula)

    def scaled(self, factor: float, unit: str | None = None) -> Estimate:
        """Return the same estimate times a positive factor, such as 1/2 for two outputs that alternate."""
        if factor <= 0:
            raise ValueError("a negative factor would turn the ends round")

        def times(spread: Spread) -> Spread:
            ends = (spread.minimum * factor, spread.nominal * factor, spread.maximum * factor)
            return Spread(*ends, spread.unit if unit is None else unit)

        return replace(self, spread=times(self.spread), statistical=times(self.statistical))


@dataclass(frozen=True, slots=True)
class Unsolved:
    """A quantity that could not be computed: `reason` is a sentence, `parts` what stood in the way.

    `needs` names what the user could add to open it, as he would write it.
    """

    reason: str
    parts: tuple[str, ...] = ()
    nets: tuple[str, ...] = ()
    needs: tuple[str, ...] = field(default=())
