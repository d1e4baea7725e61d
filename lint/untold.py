"""Verdicts that fail by nothing but a tolerance that nobody told.

A resistor without a tolerance is taken for one of 5 %, and may have been bought at 1 %. Where a verdict
passes with close parts, to call it a failure may be a false alarm on a sound design, and to call it a pass a
miss: a person must judge, and is told what would settle it.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import replace

from .design import Design
from .quantity import percent
from .verdict import Outcome, Verdict

_FINE = frozenset({Outcome.PASS, Outcome.INFORMATIONAL})
_MOST_NAMED = 4


def on_untold_tolerances(verdicts: Iterable[Verdict], design: Design) -> Mapping[Verdict, str]:
    """Return the failed verdicts in which the tolerance of a part is assumed, each with what would settle it.

    A nominal value outside the limit is a failure whatever the tolerances are, and is not among them.
    """
    found: dict[Verdict, str] = {}
    for verdict in verdicts:
        measured, limit = verdict.measured, verdict.limit
        if verdict.outcome is not Outcome.FAIL or measured is None or limit is None:
            continue
        wanted = _what_to_tell(verdict, design) if limit.holds(measured.nominal) else ""
        if wanted:
            found[verdict] = wanted
    return found


def left_to_judge(
    verdicts: Iterable[Verdict], hinging: Mapping[Verdict, str], close: Iterable[Verdict]
) -> tuple[Verdict, ...]:
    """Return the verdicts, those of `hinging` for a person to judge that pass with close parts.

    close: what the same rules say of the design with close parts
    """
    outcomes: dict[str, set[Outcome]] = {}
    for verdict in close:
        outcomes.setdefault(verdict.fingerprint, set()).add(verdict.outcome)
    return tuple(
        _to_judge(verdict, hinging[verdict])
        if verdict in hinging and outcomes.get(verdict.fingerprint, {Outcome.FAIL}) <= _FINE
        else verdict
        for verdict in verdicts
    )


def _to_judge(verdict: Verdict, wanted: str) -> Verdict:
    remedy = f"tell {wanted}; where it is no closer: {verdict.remedy}" if verdict.remedy else f"tell {wanted}"
    return replace(verdict, outcome=Outcome.REVIEW, level=None, remedy=remedy)


def _what_to_tell(verdict: Verdict, design: Design) -> str:
    """Return which tolerances would settle a verdict, empty where all are told."""
    assumed: dict[str, list[str]] = {}
    for reference in verdict.parts:
        part = design.circuit.parts.get(reference)
        value = design.circuit.value(part) if part is not None else None
        if value is not None and not value.tolerance.told and value.tolerance.plus:
            assumed.setdefault(percent(value.tolerance.plus), []).append(reference)
    texts = [f"the tolerance of {_named(parts)}, {ratio} is assumed" for ratio, parts in assumed.items()]
    return " and ".join(texts)


def _named(parts: list[str]) -> str:
    more = len(parts) - _MOST_NAMED
    return ", ".join(parts[:_MOST_NAMED]) + (f" and {more} more" if more > 0 else "")
