"""From a computed quantity and a limit to a verdict: the one place where the policy is written.

The policy decides with the worst case. Every corner inside: pass. Nominal outside: fail. Nominal inside
and a corner outside: fail where the limit is a part's rating or an absolute maximum; otherwise a person
judges when the root-sum-square of the tolerances still lies inside, and it fails when that does not.
(The practice of ECSS-Q-HB-30-01A: a passed extreme value analysis is a proof, a failed one is not.)
"""

from __future__ import annotations

from .estimate import Estimate, Unsolved
from .verdict import Level, Limit, Outcome, Verdict


def judge(
    estimate: Estimate,
    limit: Limit,
    message: str,
    *,
    source: str,
    rating: bool = False,
    remedy: str = "",
    level: Level | None = None,
    pins: tuple[str, ...] = (),
    nets: tuple[str, ...] | None = None,
    assumptions: tuple[str, ...] = (),
) -> Verdict:
    """Return the verdict on one quantity.

    message: one sentence with the figures, true whatever the outcome
    rating:  the limit is a part's rating or an absolute maximum, which no statistics may cross
    remedy:  printed only where the verdict is not a pass
    level:   where a failure counts differently from the rule's own level
    """
    outcome = _outcome(estimate, limit, rating=rating)
    return Verdict(
        outcome=outcome,
        message=message,
        measured=estimate.spread,
        limit=limit,
        margin=limit.margin(estimate.spread),
        level=level if outcome is Outcome.FAIL else None,
        parts=estimate.parts,
        nets=estimate.nets if nets is None else nets,
        pins=pins,
        formula=estimate.formula,
        contributions=estimate.contributions,
        assumptions=(*estimate.assumptions, *assumptions),
        source=source,
        remedy="" if outcome is Outcome.PASS else remedy,
    )


def _outcome(estimate: Estimate, limit: Limit, *, rating: bool) -> Outcome:
    if limit.contains(estimate.spread):
        return Outcome.PASS
    if rating or not limit.holds(estimate.spread.nominal) or not limit.contains(estimate.statistical):
        return Outcome.FAIL
    return Outcome.REVIEW


def unsolved(found: Unsolved, question: str, *, pins: tuple[str, ...] = ()) -> Verdict:
    """Return the open verdict on a quantity that could not be computed; `question` says what it was for."""
    return Verdict(
        outcome=Outcome.OPEN,
        message=f"{question}: {found.reason}",
        parts=found.parts,
        nets=found.nets,
        pins=pins,
        needs=found.needs,
    )


def missing(need: str, question: str) -> Verdict:
    """Return the open verdict on a question for which an input is missing, named in the user's words."""
    return Verdict(outcome=Outcome.OPEN, message=f"{question}: not told", needs=(need,))


def reports(estimate: Estimate, message: str, *, pins: tuple[str, ...] = (), source: str = "") -> Verdict:
    """Return an informational verdict: a computed figure that nothing in hand limits."""
    return Verdict(
        outcome=Outcome.INFORMATIONAL,
        message=message,
        measured=estimate.spread,
        parts=estimate.parts,
        nets=estimate.nets,
        pins=pins,
        formula=estimate.formula,
        contributions=estimate.contributions,
        assumptions=estimate.assumptions,
        source=source,
    )
