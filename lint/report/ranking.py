"""What of a review asks something of the reader, worst first, and what somebody has accepted."""

from __future__ import annotations

from ..verdict import Deviation, Outcome, Review, Verdict
from .words import badness


def asks(verdict: Verdict) -> bool:
    """Tell whether a verdict failed or is for a person to judge, and is not accepted."""
    return verdict.outcome in (Outcome.FAIL, Outcome.REVIEW) and verdict.deviation is None


def findings(review: Review) -> list[Verdict]:
    """Return what failed or is for a person to judge, and is not accepted; worst first."""
    return sorted(filter(asks, review.verdicts), key=badness)


def unanswered(review: Review) -> list[Verdict]:
    """Return what could not be checked and is not accepted."""
    return [one for one in review.verdicts if one.outcome is Outcome.OPEN and one.deviation is None]


def accepted(review: Review) -> list[tuple[Verdict, Deviation]]:
    """Return what is accepted, each with its deviation; worst first."""
    ranked = sorted(review.verdicts, key=badness)
    return [(verdict, verdict.deviation) for verdict in ranked if verdict.deviation is not None]


def acceptance(deviation: Deviation) -> str:
    """Return in words who accepts a verdict, why, and until when."""
    until = f", until {deviation.expires.isoformat()}" if deviation.expires is not None else ""
    return f"accepted by {deviation.owner}{until}: {deviation.reason}"
