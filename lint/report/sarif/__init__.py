"""The log for result viewers and code hosts: SARIF 2.1.0.

One run holds the results of every netlist. The same reviews give the same bytes: no times, no machine, no
identifiers drawn at random, ASCII throughout.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from typing import Any, TextIO

from ....grammar.errors import printable
from ...rule import Rule, load_rules
from ...verdict import Review, SwitchedOff
from .. import Gate, Unread
from ..values import serialised, tool
from ..words import gate_answer, not_reviewed
from .places import BASE, artifact, physical
from .results import Tables, inert, results
from .rules import descriptor
from .sources import NAME, indexes, taxonomy

SCHEMA = "https://json.schemastore.org/sarif-2.1.0.json"


def write(reviews: Sequence[Review], stream: TextIO, gate: Gate) -> None:
    """Write the complete log: a result for every verdict, what is accepted with its suppression."""
    stream.write(serialised(log(reviews, gate, load_rules())))


def log(reviews: Sequence[Review], gate: Gate, rules: Sequence[Rule]) -> dict[str, Any]:
    """Return the complete log as data; `rules` are those that it describes."""
    documents = indexes(verdict for review in reviews for verdict in review.verdicts)
    tables = Tables({one.id: index for index, one in enumerate(rules)}, documents)
    run: dict[str, Any] = {
        "tool": {
            "driver": {
                **tool(),
                "rules": [descriptor(one) for one in rules],
                "supportedTaxonomies": [{"name": NAME, "index": 0}],
            }
        },
        "invocations": [_invocation(reviews, gate)],
        "originalUriBaseIds": {BASE: {"description": {"text": "The folder in which the review was run."}}},
        "artifacts": _artifacts(reviews),
        "columnKind": "unicodeCodePoints",
        "taxonomies": [taxonomy(documents)],
        "results": [result for review in reviews for result in results(review, tables)],
    }
    return {"$schema": SCHEMA, "version": "2.1.0", "runs": [run]}


def _invocation(reviews: Iterable[Review], gate: Gate) -> dict[str, Any]:
    """Return how the run ended.

    It was a success whatever it found, and the gate gives the exit status; but not where a netlist could not
    be reviewed.
    """
    passed = gate.passes_all(reviews)
    told: dict[str, Any] = {
        "executionSuccessful": not gate.unread,
        "exitCode": 2 if gate.unread else 0 if passed else 1,
        "exitCodeDescription": not_reviewed(gate.unread) or f"gate {gate}: {gate_answer(passed)}",
    }
    if gate.unread:
        told["toolExecutionNotifications"] = [_unread(one) for one in gate.unread]
    if off := [_not_asked(one, review) for review in reviews for one in review.switched_off]:
        told["toolConfigurationNotifications"] = off
    return told


def _unread(one: Unread) -> dict[str, Any]:
    """Return the notification that a netlist could not be reviewed."""
    reason = f"{one.netlist} could not be reviewed: {one.message}"
    return {
        "level": "error",
        "message": {"text": inert(printable(f"{reason}; {one.remedy}" if one.remedy else reason))},
        "locations": [{"physicalLocation": physical(one.place)}],
    }


def _not_asked(off: SwitchedOff, review: Review) -> dict[str, Any]:
    """Return the notification that a rule was not asked of a netlist."""
    return {
        "level": "note",
        "message": {"text": printable(f"{off.rule} is switched off for {review.netlist}")},
        "associatedRule": {"id": printable(off.rule)},
        "locations": [{"physicalLocation": physical(off.place)}],
    }


def _artifacts(reviews: Iterable[Review]) -> list[dict[str, Any]]:
    """Return the files that were read, netlists first; each once."""
    netlists: dict[str, None] = {}
    told: dict[str, None] = {}
    for review in reviews:
        netlists[review.netlist] = None
        files = (review.brief, review.parts_list, review.deviations, review.configuration)
        told.update(dict.fromkeys(filter(None, files)))
    roles = [(file, "analysisTarget") for file in netlists]
    roles += [(file, "userSpecifiedConfiguration") for file in told if file not in netlists]
    return [{"location": artifact(file), "roles": [role]} for file, role in roles]
