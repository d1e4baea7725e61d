"""What of a review asks something of the reader, worst first, and what somebody has accepted."""

from __future__ import annotations

from ..verdict import Deviation, Outcome, Review, Verdict
from .words import badness


def findings(review: Review) -> list[Verdict]:
    """Return what failed or is for a person to judge, and is not accepted; worst first."""
    return _ranked(review, Outcome.FAIL, Outcome.REVIEW)


def unanswered(review: Review) -> list[Verdict]:
    """Return what could not be checked and is not accepted."""
    return _ranked(review, Outcome.OPEN)


def accepted(review: Review) -> list[tuple[Verdict, Deviation]]:
    """Return what is accepted, each with its deviation; worst first."""
    ranked = sorted(review.verdicts, key=badness)
    return [(verdict, verdict.deviation) for verdict in ranked if verdict.deviation is not None]


def acceptance(deviation: Deviation) -> str:
    """Return in words who accepts a verdict, why, and until when."""
    until = f", until {deviation.expires.isoformat()}" if deviation.expires is not None else ""
    return f"accepted by {deviation.owner}{until}: {deviation.reason}"


def _ranked(review: Review, *outcomes: Outcome) -> list[Verdict]:
    chosen = (one for one in review.verdicts if one.outcome in outcomes and one.deviation is None)
    return sorted(chosen, key=badness)
