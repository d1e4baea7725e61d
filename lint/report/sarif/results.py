"""The verdicts of a review as SARIF results."""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from ....grammar.errors import printable
from ....grammar.netlist import Place
from ...verdict import Deviation, Level, Outcome, Review, Verdict
from ..values import limit_values, number, spread_values
from .identity import fingerprints
from .places import logical, physical, sheets
from .sources import taxa


@dataclass(frozen=True, slots=True)
class Tables:
    """What results point into: rule id and document to their indexes in the log."""

    rules: Mapping[str, int]
    documents: dict[str, int]


def results(review: Review, tables: Tables) -> list[dict[str, Any]]:
    """Return one result a verdict, in the order of the review."""
    known_sheets = sheets(review)
    whole = (Place(review.netlist, 0, 0),)
    return [
        _result(verdict, verdict.places or whole, identity, known_sheets, tables)
        for verdict, identity in zip(review.verdicts, fingerprints(review), strict=True)
    ]


def _result(
    verdict: Verdict,
    places: Sequence[Place],
    identity: dict[str, str],
    known_sheets: frozenset[str],
    tables: Tables,
) -> dict[str, Any]:
    location: dict[str, Any] = {"physicalLocation": physical(places[0])}
    if named := logical(verdict, known_sheets):
        location["logicalLocations"] = named
    told: dict[str, Any] = {
        "ruleId": printable(verdict.rule),
        "kind": verdict.outcome.value,
        "level": _level(verdict),
        "message": {"text": message(verdict)},
        "locations": [location],
        "partialFingerprints": identity,
        "suppressions": [_suppression(verdict.deviation)] if verdict.deviation is not None else [],
        "properties": _properties(verdict),
    }
    if verdict.rule in tables.rules:
        told["ruleIndex"] = tables.rules[verdict.rule]
    if len(places) > 1:
        told["relatedLocations"] = [{"physicalLocation": physical(place)} for place in places[1:]]
    if references := taxa(verdict, tables.documents):
        told["taxa"] = references
    return told


def message(verdict: Verdict) -> str:
    """Return what the result says, with what is missing and what to do: properties are not always shown."""
    sentences = [verdict.message, *(f"Missing: {need}" for need in verdict.needs)]
    if verdict.remedy:
        sentences.append(f"Remedy: {verdict.remedy}")
    return inert(" ".join(_ended(printable(sentence)) for sentence in sentences))


def _level(verdict: Verdict) -> str:
    """Return the level; the standard lets only what failed have one (section 3.27.10)."""
    if verdict.outcome is not Outcome.FAIL:
        return "none"
    return (verdict.level or Level.WARNING).value


def _ended(sentence: str) -> str:
    return sentence if sentence.endswith((".", "?", "!")) else f"{sentence}."


def inert(text: str) -> str:
    """Return a message in which a name can be neither a placeholder nor an embedded link.

    Braces are doubled (section 3.11.5). Brackets get a backslash (section 3.11.6), but only where there could
    be a link: a bit of a bus stays legible where a reader takes messages as they are.
    """
    text = text.replace("{", "{{").replace("}", "}}")
    return re.sub(r"[\\\[\]]", r"\\\g<0>", text) if "](" in text else text


def _suppression(deviation: Deviation) -> dict[str, Any]:
    properties: dict[str, Any] = {"owner": printable(deviation.owner)}
    if deviation.expires is not None:
        properties["expires"] = deviation.expires.isoformat()
    if deviation.accepted is not None:
        properties["accepted"] = spread_values(deviation.accepted)
    return {
        "kind": "external",
        "status": "accepted",
        "justification": printable(deviation.reason),
        "location": {"physicalLocation": physical(deviation.place)},
        "properties": properties,
    }


def _properties(verdict: Verdict) -> dict[str, Any]:
    """Return what SARIF has no place for; what a verdict does not have is left out."""
    told: dict[str, Any] = {
        "topic": printable(verdict.topic),
        "subject": printable(verdict.subject),
        "controller": printable(verdict.controller),
        "measured": spread_values(verdict.measured),
        "limit": limit_values(verdict.limit),
        "margin": number(verdict.margin),
        "formula": printable(verdict.formula),
        "contributions": [
            {"parameter": printable(parameter), "share": number(share)}
            for parameter, share in verdict.contributions
        ],
        "assumptions": [printable(sentence) for sentence in verdict.assumptions],
        "source": printable(verdict.source),
        "needs": [printable(need) for need in verdict.needs],
        "remedy": printable(verdict.remedy),
    }
    return {name: value for name, value in told.items() if value not in (None, "", [])}
