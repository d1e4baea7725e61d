"""What became of the verdicts: which of the old ones is which of the new ones, and whether it is worse."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Callable, Hashable, Iterable, Mapping, Sequence
from dataclasses import dataclass, replace
from math import isclose, isfinite

from ..verdict import Level, Outcome, Verdict
from .comparison import Change, VerdictChange

# A margin is clearly another one from this difference on: of the limit, and of what the margin was. Below, it
# is the rounding of a value or the drift of an assumption.
LEAST_OF_LIMIT = 0.01
LEAST_OF_MARGIN = 0.1

# Room beyond this, as a share of the limit, makes nothing better or worse.
_AMPLE = 1.0

# A figure is another one from this share of it on.
_OTHER_FIGURE = 0.01

_LEVELS = (None, *reversed(Level))  # an unlevelled failure is the rule's mistake; it ranks lowest
_ASKS_NOTHING, _OPEN, _REVIEW, _FAIL = range(4)
_RANKS = {Outcome.OPEN: _OPEN, Outcome.REVIEW: _REVIEW, Outcome.FAIL: _FAIL}


@dataclass(frozen=True, slots=True)
class Names:
    """What parts and nets of the old revision are called in the new one."""

    parts: Mapping[str, str]
    nets: Mapping[str, str]

    def of(self, verdict: Verdict) -> Verdict:
        """Return an old verdict in the names of the new revision."""
        return replace(
            verdict,
            subject=self.parts.get(verdict.subject, self.nets.get(verdict.subject, verdict.subject)),
            parts=tuple(self.parts.get(part, part) for part in verdict.parts),
            nets=tuple(self.nets.get(net, net) for net in verdict.nets),
        )


def verdict_changes(
    old: Sequence[Verdict], new: Sequence[Verdict], names: Names
) -> tuple[tuple[VerdictChange, ...], int]:
    """Return the verdicts that are not the same, the new and worse ones first, and how many are."""
    changes: list[VerdictChange] = []
    unchanged = 0
    for one, other in _matched(old, new, names):
        change = _change(one, other)
        if change is None:
            unchanged += 1
        else:
            changes.append(VerdictChange(change, one, other))
    order = tuple(Change)
    changes.sort(key=lambda one: (order.index(one.change), *(-part for part in rank(one.verdict))))
    return tuple(changes), unchanged


def _matched(
    old: Sequence[Verdict], new: Sequence[Verdict], names: Names
) -> Iterable[tuple[Verdict | None, Verdict | None]]:
    """Return pairs of old and new verdict, in the order of the new ones, then what is gone.

    A verdict is the one with its fingerprint in the new names, else the next one of its rule and subject.
    """
    renamed = [names.of(verdict) for verdict in old]
    partners: dict[int, int] = {}
    for look in (_fingerprint, _question):
        _pair(renamed, new, partners, look)
    taken = set(partners.values())
    pairs: list[tuple[Verdict | None, Verdict | None]] = [
        (old[partners[place]] if place in partners else None, verdict) for place, verdict in enumerate(new)
    ]
    return [*pairs, *((verdict, None) for place, verdict in enumerate(old) if place not in taken)]


def _pair(
    old: Sequence[Verdict],
    new: Sequence[Verdict],
    partners: dict[int, int],
    look: Callable[[Verdict], Hashable],
) -> None:
    """Pair those left over that look alike, in order; `partners` is the place in `new` to that in `old`."""
    taken = set(partners.values())
    waiting: dict[Hashable, list[int]] = defaultdict(list)
    for place in range(len(old) - 1, -1, -1):
        if place not in taken:
            waiting[look(old[place])].append(place)
    for place, verdict in enumerate(new):
        if place not in partners and (found := waiting.get(look(verdict))):
            partners[place] = found.pop()


def _fingerprint(verdict: Verdict) -> Hashable:
    return verdict.fingerprint


def _question(verdict: Verdict) -> Hashable:
    return verdict.rule, verdict.subject


def _change(old: Verdict | None, new: Verdict | None) -> Change | None:
    """Return what became of a verdict, None where it is the same."""
    if old is None:
        return Change.NEW
    if new is None:
        return Change.GONE
    was, now = rank(old), rank(new)
    if was != now:
        return Change.WORSE if _is_worse(old, new, was, now) else Change.BETTER
    less = _less_margin(old, new)
    if less:
        return Change.WORSE if less > 0 else Change.BETTER
    return Change.CHANGED if old.outcome is not new.outcome or _other_figure(old, new) else None


def rank(verdict: Verdict) -> tuple[int, int]:
    """Return how much a verdict asks of the reader; what a deviation accepts asks nothing."""
    if verdict.deviation is not None:
        return _ASKS_NOTHING, 0
    level = _LEVELS.index(verdict.level) if verdict.outcome is Outcome.FAIL else 0
    return _RANKS.get(verdict.outcome, _ASKS_NOTHING), level


def _is_worse(old: Verdict, new: Verdict, was: tuple[int, int], now: tuple[int, int]) -> bool:
    """Tell whether a verdict of another rank is worse; what can no longer be checked is no better for it."""
    lost = new.deviation is None and new.outcome is Outcome.OPEN and old.outcome is not Outcome.OPEN
    return lost or now > was


def _less_margin(old: Verdict, new: Verdict) -> int:
    """Return 1 where the margin is clearly less, -1 where it is clearly more, else 0."""
    if old.margin is None or new.margin is None:
        return 0
    was, now = min(old.margin, _AMPLE), min(new.margin, _AMPLE)
    if was == now:
        return 0  # two infinite ones have no difference
    apart = abs(was - now)
    if apart < LEAST_OF_LIMIT or apart < LEAST_OF_MARGIN * min(abs(was), abs(now)):
        return 0
    return 1 if now < was else -1


def _other_figure(old: Verdict, new: Verdict) -> bool:
    """Tell whether the measured figures are not the same, by more than a hundredth."""
    if old.measured is None or new.measured is None:
        return (old.measured is None) != (new.measured is None)
    one, other = old.measured, new.measured
    if one.unit != other.unit:
        return True
    pairs = ((one.minimum, other.minimum), (one.nominal, other.nominal), (one.maximum, other.maximum))
    scale = max((abs(value) for pair in pairs for value in pair if isfinite(value)), default=0.0)
    return not all(isclose(a, b, rel_tol=0.0, abs_tol=_OTHER_FIGURE * scale) for a, b in pairs)
