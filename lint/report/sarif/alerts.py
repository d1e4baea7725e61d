"""The same log for hosts that show every result as an alert: only what failed and is not accepted.

Such hosts look at no kind and no suppression, ask for a line in a file, and refuse longer texts.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any, TextIO, cast

from ...rule import load_rules
from ...verdict import Level, Outcome, Review
from .. import Gate
from ..values import serialised
from . import log
from .identity import INSTANCE

# What the hosts document of themselves.
LONGEST_TEXT, LONGEST_NAME, MOST_RESULTS = 1024, 255, 25_000

_LONGEST = {"text": LONGEST_TEXT, "name": LONGEST_NAME, "fullyQualifiedName": LONGEST_NAME}

_ELLIPSIS = "..."

# The one fingerprint that the hosts keep.
_KEPT = "primaryLocationLineHash"

# The words of the hosts for a rule's level.
_SEVERITIES = {Level.ERROR: "error", Level.WARNING: "warning", Level.NOTE: "recommendation"}

_LEVELS = tuple(level.value for level in Level)


def write(reviews: Sequence[Review], stream: TextIO, gate: Gate) -> None:
    """Write the log of what failed and is not accepted, worst first."""
    alerts = log(reviews, gate, load_rules())
    run = alerts["runs"][0]
    shown = [one for one in run["results"] if one["kind"] == Outcome.FAIL and not one["suppressions"]]
    run["results"] = sorted(shown, key=lambda one: _LEVELS.index(one["level"]))[:MOST_RESULTS]
    for result in run["results"]:
        result["locations"][0]["physicalLocation"].setdefault("region", {"startLine": 1})
        result["partialFingerprints"][_KEPT] = result["partialFingerprints"][INSTANCE]
    _describe_only_used(run)
    stream.write(serialised(_cut(alerts)))


def _describe_only_used(run: dict[str, Any]) -> None:
    """Leave out the rules without a result, and let the results point at the others anew."""
    used = {result["ruleId"] for result in run["results"]}
    driver = run["tool"]["driver"]
    driver["rules"] = [one for one in driver["rules"] if one["id"] in used]
    indexes = {one["id"]: index for index, one in enumerate(driver["rules"])}
    for one in driver["rules"]:
        level = Level(one["defaultConfiguration"]["level"])
        one["properties"]["problem.severity"] = _SEVERITIES[level]
    for result in run["results"]:
        if "ruleIndex" in result:
            result["ruleIndex"] = indexes[result["ruleId"]]


def _cut(value: Any, longest: int | None = None) -> Any:
    """Return data of a log with the texts that hosts show cut to what they take."""
    if isinstance(value, dict):
        items = cast("dict[str, Any]", value).items()
        return {key: _cut(item, _LONGEST.get(key)) for key, item in items}
    if isinstance(value, list):
        return [_cut(item) for item in cast("list[Any]", value)]
    if isinstance(value, str) and longest is not None and len(value) > longest:
        return value[: longest - len(_ELLIPSIS)] + _ELLIPSIS
    return value
