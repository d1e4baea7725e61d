"""What tells one result from another, run after run."""

from __future__ import annotations

import hashlib
from collections import Counter

from ...verdict import Review, Verdict

# The version changes whenever the same verdict would get another value.
VERDICT, INSTANCE = "verdict/v1", "verdictInstance/v1"


def fingerprints(review: Review) -> list[dict[str, str]]:
    """Return the partialFingerprints of each verdict of a review.

    Verdicts of one rule on the same parts and nets share the first key: those of the two amplifiers, say.
    The second tells them apart by the pins, and where these are the same too, by their order in the review.
    """
    met: Counter[str] = Counter()
    told: list[dict[str, str]] = []
    for verdict in review.verdicts:
        identity = _identity(verdict)
        met[identity] += 1
        instance = _digest(f"{identity}\x1e{met[identity]}")
        told.append({VERDICT: verdict.fingerprint, INSTANCE: instance})
    return told


def _identity(verdict: Verdict) -> str:
    return "\x1f".join((verdict.fingerprint, verdict.controller, *sorted(verdict.pins)))


def _digest(text: str) -> str:
    return hashlib.sha256(text.encode(errors="surrogatepass")).hexdigest()[:16]
