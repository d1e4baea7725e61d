"""What stands below the message of a verdict in a report: its figures, its parts, its places, in words."""

from __future__ import annotations

from collections.abc import Sequence

from ...grammar.netlist import Place
from ..quantity import percent
from ..verdict import Verdict
from .words import grouped

_PLACES, _SHARES = 4, 5
_LEAST_SHARE = 0.01

# A margin beyond this many times its limit has no more to say.
_GREATEST_MARGIN = 9.99


def details(verdict: Verdict) -> list[tuple[str, str]]:
    """Return what stands below the message, each with its label; an empty text is not to be printed."""
    parts, nets = ", ".join(verdict.parts), ", ".join(verdict.nets)
    return [
        ("measured", str(verdict.measured) if verdict.measured and not verdict.limit else ""),
        ("margin", margin(verdict)),
        ("formula", verdict.formula),
        ("spread", _shares(verdict.contributions)),
        ("parts", f"{parts} on {nets}" if parts and nets else parts),
        ("nets", "" if parts else nets),
        ("at", places(verdict.places)),
        *(("needs", need) for need in verdict.needs),
        *(("assumed", sentence) for sentence in grouped(verdict.assumptions)),
        ("source", verdict.source),
        ("remedy", verdict.remedy),
    ]


def margin(verdict: Verdict) -> str:
    """Return the margin of a verdict as a percentage of its limit, empty where it has none."""
    room = verdict.margin
    if room is None:
        return ""
    if abs(room) > _GREATEST_MARGIN:
        return f"{'>' if room > 0 else '< -'}{percent(_GREATEST_MARGIN)}"
    return percent(room, 2)


def places(found: Sequence[Place]) -> str:
    """Return the first places as `file:line:column, line:column`: a file is named where it changes."""
    texts: list[str] = []
    file = None
    for place in found[:_PLACES]:
        where = f"{place.line}:{place.column}" if place.line else ""
        texts.append(where if place.file == file else f"{place.file}:{where}".rstrip(":"))
        file = place.file
    more = f" and {len(found) - _PLACES} more" if len(found) > _PLACES else ""
    return ", ".join(texts) + more


def _shares(contributions: Sequence[tuple[str, float]]) -> str:
    """Return what the spread comes from, without the crumbs."""
    named = [(source, share) for source, share in contributions if share >= _LEAST_SHARE][:_SHARES]
    texts = [f"{percent(share, 2)} from {source}" for source, share in named]
    rest = len(contributions) - len(named)
    return ", ".join(texts) + (f", less from {rest} more" if texts and rest else "")
