"""What became of a verdict, in words: its outcome, figures and margin as they were and as they are."""

from __future__ import annotations

from ..compare.comparison import Change, Comparison, VerdictChange
from ..deviations import ACCEPTABLE
from ..quantity import figure
from ..verdict import Limit, Verdict
from .change_words import ARROW
from .details import margin
from .words import word

# The headings of the fates in a report, in its order.
HEADINGS = {
    Change.NEW: "new verdicts",
    Change.WORSE: "worse",
    Change.GONE: "gone",
    Change.BETTER: "better",
    Change.CHANGED: "other figures",
}


def asks(verdict: Verdict) -> bool:
    """Tell whether a verdict asks something of the reader that nobody has accepted."""
    return verdict.outcome in ACCEPTABLE and verdict.deviation is None


def tells_nothing(change: VerdictChange) -> bool:
    """Tell whether a verdict came or went that asked nothing: naming its rule is enough."""
    return change.change in (Change.NEW, Change.GONE) and not asks(change.verdict)


def called(verdict: Verdict) -> str:
    """Return a verdict's word, and that it is accepted."""
    text, _ = word(verdict.outcome, verdict.level)
    return f"{text}, accepted" if verdict.deviation is not None else text


def rows(change: VerdictChange) -> list[tuple[str, str]]:
    """Return what tells new from old, each with its label: outcome, figures, limit, margin."""
    old, new = change.old, change.new
    if old is None or new is None:
        return []
    found = [("outcome", called(old), called(new)), ("measured", _measured(old), _measured(new))]
    found += [("limit", _limit(old.limit), _limit(new.limit)), ("margin", margin(old), margin(new))]
    return [(label, f"{was or 'none'}{ARROW}{now or 'none'}") for label, was, now in found if was != now]


def summary(comparison: Comparison) -> str:
    """Return the counts of the verdicts: "2 new, 1 worse, 40 unchanged"."""
    counts = [(len(comparison.of(change)), change.value) for change in Change]
    told = [f"{count} {text}" for count, text in counts if count]
    return ", ".join([*told, f"{comparison.unchanged.verdicts} unchanged"])


def _measured(verdict: Verdict) -> str:
    spread = verdict.measured
    if spread is None or spread.unit:
        return "" if spread is None else str(spread)
    # A ratio reads as the limits do, in percent.
    low, nominal, high = (figure(value, "") for value in (spread.minimum, spread.nominal, spread.maximum))
    return nominal if low == high else f"{nominal} ({low} .. {high})"


def _limit(limit: Limit | None) -> str:
    if limit is None:
        return ""
    low = "" if limit.minimum is None else f"≥ {figure(limit.minimum, limit.unit)}"
    high = "" if limit.maximum is None else f"≤ {figure(limit.maximum, limit.unit)}"
    return " and ".join(filter(None, (low, high)))
