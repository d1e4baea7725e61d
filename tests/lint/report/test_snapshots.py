"""The faulty push-pull example in every format that has no stored report elsewhere, to the letter.

With PWMLINT_UPDATE_SNAPSHOTS=1 in the environment a run writes the reports anew; read the difference.
"""

from __future__ import annotations

import json
import os
from collections.abc import Callable, Iterable
from dataclasses import replace
from importlib.metadata import version
from pathlib import Path

import pytest
from pwmlint.lint.circuit.controllers import Controller
from pwmlint.lint.design import Design
from pwmlint.lint.report import FORMATS
from pwmlint.lint.rule import rule
from pwmlint.lint.verdict import Outcome, Review, Verdict

SNAPSHOTS = Path(__file__).parent / "snapshots"

UPDATE = "PWMLINT_UPDATE_SNAPSHOTS"

# The text report has snapshots of its own; the examples' text and JSON reports are stored with their tests.
STORED = [name for name in FORMATS if name not in ("text", "json")]

ENDINGS = {
    "sarif-alerts": "alerts.sarif",
    "junit": "junit.xml",
    "markdown": "md",
    "annotations": "annotations.txt",
}


@rule("supply.range", level="error", topic="supply")
def supply_range(controller: Controller, design: Design) -> Iterable[Verdict]:
    """Does the press run within its supply?

    What: stands in for the installed rules, whose words are not what is compared here.
    Formula: V = R I
    """
    del controller, design
    return ()


@pytest.mark.parametrize("name", STORED)
@pytest.mark.parametrize("state", ["faulty", "accepted"])
def test_reports_are_as_stored(
    name: str,
    state: str,
    written: Callable[..., str],
    cider_press: Review,
    accepted: Review,
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    for module in ("sarif", "sarif.alerts"):
        monkeypatch.setattr(f"pwmlint.lint.report.{module}.load_rules", lambda: (supply_range,))
    review = cider_press if state == "faulty" else accepted
    if name == "sarif":
        review = replace(review, verdicts=tuple(sample(review.verdicts)))
    # The version would change with every release.
    report = written(name, review).replace(f'"version": "{version("pwmlint")}"', '"version": ""')
    path = SNAPSHOTS / f"cider-press-{state}.{ENDINGS.get(name, name)}"
    if os.environ.get(UPDATE):
        path.write_text(report, encoding="utf-8", newline="\n")
    stored = path.read_text(encoding="utf-8")
    if path.suffix == ".sarif":
        assert rounded(report) == rounded(stored)
    else:
        assert report == stored


def sample(verdicts: Iterable[Verdict]) -> Iterable[Verdict]:
    """Yield what asks something of the reader, and one of each other outcome: a log of all is long."""
    met: set[Outcome] = set()
    for verdict in verdicts:
        if verdict.outcome in (Outcome.FAIL, Outcome.REVIEW) or verdict.outcome not in met:
            yield verdict
        met.add(verdict.outcome)


def rounded(report: str) -> object:
    """Return a log with its numbers to nine digits: the rest is the linear algebra library's."""
    return json.loads(report, parse_float=lambda text: float(f"{float(text):.9g}"))
