"""Accepted verdicts: a TOML file of deviations -> Deviations, and what they do to the verdicts of a review.

A deviation stops a gate from stopping, so it is read severely: one without a reason or an owner, with a key
that is not known or with a day that is none does not count, and a verdict says so. So it does of one that has
expired, that accepts less than what is measured now, or that is about nothing any more.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass, replace
from datetime import date
from fnmatch import translate
from functools import lru_cache
from math import isfinite
from pathlib import Path

from ..grammar.errors import NetlistError
from ..grammar.netlist import Place
from .quantity import Spread
from .toml_document import Table, TomlDocument
from .verdict import Deviation, Outcome, Verdict

TABLE = "deviation"

_KEYS = ("rule", "subject", "parts", "nets", "reason", "owner", "expires", "accepted")

# The outcomes that somebody may answer for.
ACCEPTABLE = frozenset({Outcome.FAIL, Outcome.REVIEW, Outcome.OPEN})

_EXPECTED = {
    "rule": 'the id of a rule, such as "dead-time.range"',
    "reason": "why it is accepted, in a sentence",
    "owner": "who answers for it",
}

# More is no list of deviations but a way to keep a machine busy.
_MOST_ENTRIES = 2_000

# What is accepted is written with few digits: so much beyond it, as a share, is no change for the worse. Less
# than the least is written as zero.
_ROUNDING, _LEAST = 1e-3, 1e-15


class DeviationsError(NetlistError):
    """A file of deviations that cannot be read at all."""


@dataclass(frozen=True, slots=True)
class Deviations:
    """The deviations of one file, and the mistakes in it: an entry with a mistake is not among them."""

    file: str
    entries: tuple[Deviation, ...]
    malformed: tuple[NetlistError, ...]


@dataclass(frozen=True, slots=True)
class Applied:
    """What became of a file of deviations.

    used:     those that accept a verdict
    expired:  those whose last day is over, though there is a verdict that they are about
    outgrown: those whose accepted value is less than what is measured now, with that verdict
    unused:   those that are about no verdict
    unasked:  those that would be about the verdicts of a rule that was not asked
    """

    deviations: Deviations
    used: tuple[Deviation, ...]
    expired: tuple[Deviation, ...]
    outgrown: tuple[tuple[Deviation, Verdict], ...]
    unused: tuple[Deviation, ...]
    unasked: tuple[Deviation, ...] = ()


def read_deviations(path: str | Path) -> Deviations:
    """Read a file of deviations; raise DeviationsError where it is no TOML or cannot be opened."""
    document = TomlDocument(path, DeviationsError)
    document.root.know((TABLE,))
    entries = tuple(filter(None, (_entry(table, document) for table in document.root.array(TABLE))))
    if len(entries) > _MOST_ENTRIES:
        raise DeviationsError(
            f"{len(entries)} deviations",
            Place(document.file, 0, 0),
            expected=f"at most {_MOST_ENTRIES}",
            remedy="mend the design, or accept by a pattern what is accepted many times over",
        )
    return Deviations(document.file, entries, tuple(sorted(document.mistakes, key=lambda one: one.place)))


def apply(
    deviations: Deviations,
    verdicts: Iterable[Verdict],
    today: date,
    asked: Callable[[str], bool] = lambda pattern: True,
) -> tuple[tuple[Verdict, ...], Applied]:
    """Return the verdicts with the deviations that accept them, and what became of each deviation.

    asked: tells whether every rule that a deviation may be from was asked
    """
    accepted: list[Verdict] = []
    used: list[Deviation] = []
    expired: list[Deviation] = []
    outgrown: list[tuple[Deviation, Verdict]] = []
    for verdict in verdicts:
        about = [one for one in deviations.entries if _is_about(one, verdict)]
        live = [one for one in about if one.expires is None or today <= one.expires]
        accepting = next((one for one in live if _covers(one, verdict)), None)
        accepted.append(verdict if accepting is None else replace(verdict, deviation=accepting))
        if accepting is not None:
            used.append(accepting)
        else:
            outgrown += [(one, verdict) for one in live]
        expired += [one for one in about if one not in live]
    spoken = {*used, *expired, *(one for one, _ in outgrown)}
    silent = [one for one in deviations.entries if one not in spoken]
    return tuple(accepted), Applied(
        deviations=deviations,
        used=_once(used),
        expired=_once(expired),
        outgrown=tuple(outgrown),
        unused=tuple(one for one in silent if asked(one.rule)),
        unasked=tuple(one for one in silent if not asked(one.rule)),
    )


def to_accept(verdict: Verdict) -> Spread | None:
    """Return what there is to accept of a verdict's figure: its end beyond the limit, else the whole of it.

    None where the verdict has no figure, or one without bound.
    """
    measured = verdict.measured
    if measured is None or not (isfinite(measured.minimum) and isfinite(measured.maximum)):
        return None
    below, above = _sides(verdict, measured)
    if below and above:
        return measured
    return Spread.exact(measured.minimum if below else measured.maximum, measured.unit)


def _entry(table: Table, document: TomlDocument) -> Deviation | None:
    """Return one deviation, or None where something is wrong with it: the mistake is then noted."""
    known = len(document.mistakes)
    all_known = table.know(_KEYS)
    rule, reason, owner = (_needed(table, key) for key in ("rule", "reason", "owner"))
    entry = Deviation(
        rule=rule,
        subject=(table.text("subject") or "") if table.has("subject") else "",
        reason=reason,
        owner=owner,
        parts=table.texts("parts", 'a list of texts such as ["R4", "R5"]'),
        nets=table.texts("nets", 'a list of texts such as ["REF"]'),
        expires=table.day("expires"),
        accepted=table.spread("accepted", None),
        place=table.place,
    )
    return entry if all_known and len(document.mistakes) == known else None


def _needed(table: Table, key: str) -> str:
    """Return a text without which a deviation does not count; that it is missing is noted."""
    if not table.has(key):
        table.mistake(key, f"a deviation without {key} does not count", expected=f'{key} = "..."')
    return table.text(key, _EXPECTED[key]) or ""


def _is_about(deviation: Deviation, verdict: Verdict) -> bool:
    return (
        verdict.outcome in ACCEPTABLE
        and fits(verdict.rule, deviation.rule)
        and fits(verdict.subject, deviation.subject)
        and (deviation.parts is None or set(deviation.parts) == set(verdict.parts))
        and (deviation.nets is None or set(deviation.nets) == set(verdict.nets))
    )


def fits(text: str, pattern: str) -> bool:
    """Tell whether a text fits a pattern: "*" for any text, "?" for a character, all else for itself."""
    if not ("*" in pattern or "?" in pattern):
        return text == pattern
    if len(pattern) - pattern.count("*") > len(text):
        return False
    return _form(pattern).match(text) is not None


@lru_cache(maxsize=2 * _MOST_ENTRIES)  # a file of many long patterns is compiled once, not once a verdict
def _form(pattern: str) -> re.Pattern[str]:
    return re.compile(translate(pattern.replace("[", "[[]")))


def _covers(deviation: Deviation, verdict: Verdict) -> bool:
    """Tell whether the verdict measures nothing worse than what was accepted."""
    accepted, measured = deviation.accepted, verdict.measured
    if accepted is None:
        return True
    if measured is None or measured.unit != accepted.unit:
        return False
    below, above = _sides(verdict, measured)
    lowest, highest = accepted.minimum, accepted.maximum
    return not (below and measured.minimum < lowest - _rounding(lowest)) and not (
        above and measured.maximum > highest + _rounding(highest)
    )


def _rounding(accepted: float) -> float:
    """Return how far beyond what is accepted a figure may be: it was written with few digits."""
    return max(_ROUNDING * abs(accepted), _LEAST)


def _sides(verdict: Verdict, measured: Spread) -> tuple[bool, bool]:
    """Tell whether the lower and the upper end count: the one beyond its limit, or else both."""
    limit = verdict.limit
    below = limit is not None and limit.minimum is not None and measured.minimum < limit.minimum
    above = limit is not None and limit.maximum is not None and measured.maximum > limit.maximum
    return (below, above) if below or above else (True, True)


def _once(deviations: Sequence[Deviation]) -> tuple[Deviation, ...]:
    """Return each deviation once, in the order of the file."""
    return tuple(sorted(set(deviations), key=lambda one: one.place))
