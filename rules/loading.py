"""What the rules on ratings share: a part beside its limit, and one verdict for all that keep theirs."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace

from ..lint.design import Design
from ..lint.estimate import Estimate
from ..lint.judge import judge
from ..lint.quantity import Spread, percent
from ..lint.verdict import Level, Limit, Outcome, Verdict

# Where no ambient is told: the temperature at which resistors are rated (IEC 60115-8).
_AMBIENT = 70.0


@dataclass(frozen=True, slots=True)
class Load:
    """What one part stands beside what it may stand.

    limit:  in the unit of the stress
    says:   a sentence with both figures
    level:  where exceeding the limit counts differently from the rule's own level
    pulsed: the stress is that of an output that conducts all the time; the mean over the pulses is less
    """

    part: str
    stress: Estimate
    limit: float
    says: str
    source: str
    remedy: str = ""
    assumptions: tuple[str, ...] = ()
    level: Level | None = None
    pulsed: bool = False

    def verdict(self) -> Verdict:
        """Return the verdict on this part alone."""
        found = judge(
            self.stress,
            Limit(None, self.limit, self.stress.spread.unit),
            self.says,
            source=self.source,
            rating=True,
            remedy=self.remedy,
            level=self.level,
            assumptions=self.assumptions,
        )
        found = replace(found, subject=self.part, parts=(self.part,))
        if self.pulsed and found.outcome is Outcome.FAIL:
            message = f"{found.message}: while the output conducts; the mean over the pulses is less"
            return replace(found, outcome=Outcome.REVIEW, level=None, message=message)
        return found


def verdicts(loads: Sequence[Load], kind: str, kept: str) -> Iterator[Verdict]:
    """Yield a verdict on every part that does not keep its limit, then one on all that do.

    kind, kept: what they are and what the others do, such as "resistors", "keep their rated power"
    """
    found = [load.verdict() for load in loads]
    yield from (verdict for verdict in found if verdict.outcome is not Outcome.PASS)
    passed = [verdict for verdict in found if verdict.outcome is Outcome.PASS]
    if not passed:
        return
    closest = min(passed, key=lambda verdict: verdict.margin or 0.0)
    message = closest.message
    if len(passed) > 1:
        message = f"{len(passed)} {kind} {kept}; the closest: {closest.message}"
    parts = tuple(verdict.parts[0] for verdict in passed)
    yield replace(closest, subject="", parts=parts, message=message)


def size(estimate: Estimate) -> Estimate:
    """Return what a quantity measures whatever its sign."""
    return replace(estimate, spread=_size(estimate.spread), statistical=_size(estimate.statistical))


def _size(spread: Spread) -> Spread:
    low, high = sorted((abs(spread.minimum), abs(spread.maximum)))
    least = 0.0 if spread.minimum <= 0 <= spread.maximum else low
    return Spread(least, abs(spread.nominal), high, spread.unit)


def ambient(design: Design) -> float:
    """Return the highest ambient temperature (degC) at which parts are judged."""
    told = design.circuit.conditions.ambient
    return _AMBIENT if told is None else told.maximum


def margin_taken(design: Design, share: float, what: str) -> str:
    """Return the assumption behind a derated limit: of what, the share, the policy, the temperature."""
    conditions = design.circuit.conditions
    assumed = "" if conditions.ambient is not None else " assumed"
    return f"{what}: {percent(share)} used, policy {conditions.policy} at {ambient(design):g} °C{assumed}"


_MOST_NAMED = 12


def some(names: Sequence[str]) -> str:
    """Return the names as a sentence lists them, the first ones only where there are many."""
    rest = len(names) - _MOST_NAMED
    return ", ".join(names[:_MOST_NAMED]) + (f" and {rest} more" if rest > 0 else "")
