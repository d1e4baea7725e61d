"""Deviations: do the accepted verdicts still deserve it?"""

from __future__ import annotations

from collections.abc import Iterable

from ..grammar.errors import NetlistError
from ..lint.deviations import Applied
from ..lint.quantity import figure
from ..lint.rule import deviation_rule
from ..lint.verdict import Deviation, Outcome, Verdict

_SOURCE = "common practice, no source; deviation permit: ISO 9000, from memory"


@deviation_rule("deviations.complete", level="warning")
def complete(applied: Applied) -> Iterable[Verdict]:
    """Is every deviation written so that it counts?

    What:
        Each entry of the file of deviations needs a rule, a reason and an owner; its other keys must be
        known, its day a day, its accepted value a quantity with a unit. With a mistake it accepts nothing.
    Why:
        A deviation keeps a gate from stopping. What nobody gave a reason for, or nobody answers for, has not
        been decided; a misspelt key may have been meant as a restriction.
    Formula:
        None.
    Source:
        Common practice, no source; deviation permit: ISO 9000, from memory
    Remedy:
        Complete the entry at the place named, or take it out.
    Fails:
        R1 REF DTC 1k
        R2 DTC 0 10k
        [[deviation]] rule = "dead-time.range"; subject = "U1"; reason = ""; owner = "the pump team"
    Passes:
        R1 REF DTC 1k
        R2 DTC 0 10k
        [[deviation]] rule = "dead-time.range"; subject = "U1"; reason = "off on purpose"; owner = "pump team"
    """
    for mistake in applied.deviations.malformed:
        yield _malformed(mistake)
    entries = applied.deviations.entries
    if entries and not applied.deviations.malformed:
        yield Verdict(
            outcome=Outcome.PASS,
            message=f"{_deviations(len(entries))} complete",
        )


def _malformed(mistake: NetlistError) -> Verdict:
    expected = f"expected: {mistake.expected}" if mistake.expected else ""
    return Verdict(
        outcome=Outcome.FAIL,
        message=f"a deviation does not count: {mistake.message}",
        places=(mistake.place,),
        remedy="; ".join(filter(None, (expected, mistake.remedy))),
        source=_SOURCE,
    )


@deviation_rule("deviations.expired", level="warning")
def expired(applied: Applied) -> Iterable[Verdict]:
    """Is every deviation still in force?

    What:
        A deviation whose last day is over accepts nothing any more; what it accepted speaks again.
    Why:
        An expiry date is a promise to look again by that day.
    Formula:
        today <= expires
    Source:
        Common practice, no source; dates: ISO 8601
    Remedy:
        Mend what was accepted; or decide again, with a new day.
    Fails:
        R1 REF DTC 1k
        R2 DTC 0 10k
        [[deviation]] rule = "dead-time.range"; reason = "a"; owner = "b"; subject = "*"; expires = 2001-01-31
    Passes:
        R1 REF DTC 1k
        R2 DTC 0 10k
        [[deviation]] rule = "dead-time.range"; reason = "a"; owner = "b"; subject = "*"
    """
    for one in applied.expired:
        yield _about(
            one,
            f"the deviation from {one.rule} expired on {one.expires}; {one.owner} answered for it",
            "mend what was accepted, or decide again, with a new day",
        )
    if applied.used and not applied.expired:
        yield Verdict(outcome=Outcome.PASS, message=f"{_deviations(len(applied.used))} in force")


@deviation_rule("deviations.value", level="warning")
def value(applied: Applied) -> Iterable[Verdict]:
    """Is what is accepted no worse than it was?

    What:
        Holds the figure of a verdict against the value that its deviation accepts, at the end that is beyond
        the limit. Where the figure is worse, or is none of that kind, the verdict speaks again.
    Why:
        Whoever accepted 11 mA has not accepted 14 mA.
    Formula:
        maximum [unit] <= accepted [unit] above a limit, minimum >= accepted below one, to 0.1 %
    Source:
        Common practice, no source
    Remedy:
        Bring the figure back, or accept the new one, with its own reason.
    Fails:
        R1 REF 0 330
        [[deviation]] rule = "reference.load"; subject = "U1"; reason = "a"; owner = "b"; accepted = "11 mA"
    Passes:
        R1 REF 0 330
        [[deviation]] rule = "reference.load"; subject = "U1"; reason = "a"; owner = "b"; accepted = "25 mA"
    """
    for one, verdict in applied.outgrown:
        measured = verdict.measured
        now = f"it is {measured} now" if measured is not None else "it has no figure now"
        yield _about(
            one,
            f"{one.rule} was accepted at {_accepted(one)}; {now}",
            "bring the figure back, or accept the new one, with its own reason",
        )
    if not applied.outgrown and any(one.accepted is not None for one in applied.used):
        yield Verdict(outcome=Outcome.PASS, message="nothing accepted is worse than its accepted value")


@deviation_rule("deviations.unused", level="note")
def unused(applied: Applied) -> Iterable[Verdict]:
    """Does every deviation still accept something?

    What:
        Names each deviation that accepts no verdict of this review. Where its rule was not asked, because it
        is switched off or not loaded, nobody can know, and it is told without blame.
    Why:
        What it was about has been mended, renamed, or is accepted by another entry. Left in the file it
        would accept the next mistake of that kind unseen.
    Formula:
        None.
    Source:
        Common practice, no source
    Remedy:
        Take it out, or correct its rule and subject.
    Fails:
        R1 REF DTC 10k
        R2 DTC 0 1k
        [[deviation]] rule = "dead-time.range"; subject = "U1"; reason = "off on purpose"; owner = "pump team"
    Passes:
        R1 REF DTC 1k
        R2 DTC 0 10k
        [[deviation]] rule = "dead-time.range"; subject = "U1"; reason = "off on purpose"; owner = "pump team"
    """
    for one in applied.unused:
        yield _about(
            one,
            f"{_told(one)} accepts nothing",
            "take it out, or correct its rule and subject",
        )
    for one in applied.unasked:
        yield Verdict(
            outcome=Outcome.INFORMATIONAL,
            message=f"{_told(one)} was not needed: its rule was not asked",
            subject=f"{one.rule} {one.subject}".strip(),
            places=(one.place,),
            source=_SOURCE,
        )
    if applied.used and not applied.unused:
        yield Verdict(outcome=Outcome.PASS, message=f"{_deviations(len(applied.used))} in use")


def _told(one: Deviation) -> str:
    return f"the deviation from {one.rule}{f' of {one.subject}' if one.subject else ''}"


def _about(one: Deviation, message: str, remedy: str) -> Verdict:
    return Verdict(
        outcome=Outcome.FAIL,
        message=message,
        subject=f"{one.rule} {one.subject}".strip(),
        parts=one.parts or (),
        nets=one.nets or (),
        places=(one.place,),
        remedy=remedy,
        source=_SOURCE,
    )


def _accepted(one: Deviation) -> str:
    accepted = one.accepted
    assert accepted is not None
    if accepted.minimum == accepted.maximum:
        return figure(accepted.nominal, accepted.unit)
    return f"{figure(accepted.minimum, accepted.unit)} .. {figure(accepted.maximum, accepted.unit)}"


def _deviations(count: int) -> str:
    return f"{count} deviations are" if count > 1 else "the deviation is"
