"""The comparison for programs. `compare.schema.json` beside this module describes it.

As in the JSON report of a review, the same comparison gives the same bytes, and values are in SI base units.
"""

from __future__ import annotations

from dataclasses import asdict
from typing import Any, TextIO

from ..compare.comparison import (
    CircuitChanges,
    Comparison,
    Difference,
    NetChange,
    NetSeen,
    PartChange,
    PartSeen,
    VerdictChange,
)
from ..verdict import Review, Verdict
from . import Gate
from .json import read_of
from .values import limit_values, number, serialised, spread_values, tool

SCHEMA = 1


def write(comparison: Comparison, stream: TextIO, gate: Gate) -> None:
    """Write the comparison to `stream`; the gate is no part of it, it is the exit status."""
    del gate
    report = {
        "schema": SCHEMA,
        "tool": tool(),
        "old": _revision(comparison.old),
        "new": _revision(comparison.new),
        **_circuit(comparison.circuit),
        "verdicts": [_change(change) for change in comparison.verdicts],
        "unchanged": asdict(comparison.unchanged),
        "assumptions": list(comparison.assumptions),
    }
    stream.write(serialised(report))


def _revision(review: Review) -> dict[str, Any]:
    return {
        **read_of(review),
        "cautions": list(review.cautions),
        "counts": review.counts,
    }


def _circuit(circuit: CircuitChanges) -> dict[str, Any]:
    return {
        "parts": {
            "added": [_part(part) for part in circuit.parts_added],
            "removed": [_part(part) for part in circuit.parts_removed],
            "changed": [_part_change(change) for change in circuit.parts_changed],
        },
        "nets": {
            "added": [_net(net) for net in circuit.nets_added],
            "removed": [_net(net) for net in circuit.nets_removed],
            "changed": [_net_change(change) for change in circuit.nets_changed],
        },
    }


def _part(part: PartSeen) -> dict[str, Any]:
    return {
        "reference": part.reference,
        "kind": part.kind,
        "value": part.value,
        "model": part.model,
        "nets": list(part.nets),
        "fitted": part.fitted,
        "place": part.place._asdict(),
    }


def _part_change(change: PartChange) -> dict[str, Any]:
    return {
        "old": _part(change.old),
        "new": _part(change.new),
        "renumbered": change.renumbered,
        "differences": [_difference(one) for one in change.differences],
        "pins": [{"pin": move.pin, "old": move.old, "new": move.new} for move in change.pins],
    }


def _difference(one: Difference) -> dict[str, Any]:
    return {
        "what": one.what,
        "old": one.old,
        "new": one.new,
        "old_number": number(one.old_number),
        "new_number": number(one.new_number),
        "unit": one.unit,
    }


def _net(net: NetSeen) -> dict[str, Any]:
    return {"name": net.name, "pins": list(net.pins), "place": net.place._asdict()}


def _net_change(change: NetChange) -> dict[str, Any]:
    return {
        "old": _net(change.old),
        "new": _net(change.new),
        "renamed": change.renamed,
        "gained": list(change.gained),
        "lost": list(change.lost),
    }


def _change(change: VerdictChange) -> dict[str, Any]:
    return {
        "change": change.change,
        "rule": change.verdict.rule,
        "subject": change.verdict.subject,
        "old": _verdict(change.old),
        "new": _verdict(change.new),
    }


def _verdict(verdict: Verdict | None) -> dict[str, Any] | None:
    if verdict is None:
        return None
    return {
        "outcome": verdict.outcome,
        "level": verdict.level,
        "accepted": verdict.deviation is not None,
        "message": verdict.message,
        "measured": spread_values(verdict.measured),
        "limit": limit_values(verdict.limit),
        "margin": number(verdict.margin),
        "parts": list(verdict.parts),
        "nets": list(verdict.nets),
        "places": [place._asdict() for place in verdict.places],
        "remedy": verdict.remedy,
        "fingerprint": verdict.fingerprint,
    }
