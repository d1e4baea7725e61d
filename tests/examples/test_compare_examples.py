"""What changed from each example to its faulty revision, to the letter; stored and renewed as reviews are."""

from __future__ import annotations

import json
import os
from importlib.metadata import version
from pathlib import Path

import pytest
from pwmlint.lint.cli import main
from pwmlint.lint.compare import Change, compare
from pwmlint.lint.verdict import Outcome

UPDATE = "PWMLINT_UPDATE_SNAPSHOTS"

ROOT = Path(__file__).parents[2]
EXPECTED = Path(__file__).parent / "expected"

# The example, its ending, and what the examples' README says of its faulty revision.
EDITS = {
    "frost-fan.cir": (
        {"R17", "R18", "TP1"},
        set[str](),
        {"C6", "C7", "R2", "R3", "R6", "R13", "U1", "C1", "C2"},
    ),
    "cider-press.edf": (set[str](), {"C9"}, {"R2", "R13", "RV1", "U1"}),
}
WORSE = {
    "frost-fan.cir": {
        *("supply.range", "dead-time.driven", "soft-start.wiring", "output-mode.wiring", "reference.load"),
        *("feedback.output-voltage", "feedback.divider-ratio", "current-limit.sense-dissipation"),
    },
    "cider-press.edf": {
        *("output-mode.topology", "oscillator.frequency", "dead-time.minimum", "feedback.output-voltage"),
        *("current-limit.trip-point", "reference.bypass", "supply.range"),
    },
}


@pytest.fixture(autouse=True)
def _from_the_root(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(ROOT)
    for name in ("FORCE_COLOR", "COLUMNS"):
        monkeypatch.delenv(name, raising=False)


def revisions(example: str) -> tuple[str, str]:
    name, _, ending = example.partition(".")
    return f"examples/{example}", f"examples/{name}-rev-b.{ending}"


@pytest.mark.parametrize("example", EDITS)
def test_every_edit_is_told_and_nothing_else(example: str) -> None:
    added, removed, changed = EDITS[example]
    found = compare(*revisions(example)).circuit
    assert {part.reference for part in found.parts_added} == added
    assert {part.reference for part in found.parts_removed} == removed
    assert {change.new.reference for change in found.parts_changed} == changed
    assert not any(change.renamed for change in found.nets_changed)


@pytest.mark.parametrize("example", WORSE)
def test_every_fault_is_worse_and_its_repair_better(example: str) -> None:
    forth, back = compare(*revisions(example)), compare(*reversed(revisions(example)))
    failing = {one.verdict.rule for one in forth.of(Change.WORSE) if one.verdict.outcome is Outcome.FAIL}
    assert WORSE[example] <= failing
    assert WORSE[example] <= {one.verdict.rule for one in back.of(Change.BETTER)}


@pytest.mark.parametrize("form", ["text", "markdown", "json"])
@pytest.mark.parametrize("example", EDITS)
def test_reports_are_as_stored(example: str, form: str, tmp_path: Path) -> None:
    path = tmp_path / "report"
    assert main(["compare", *revisions(example), "--format", form, "--output", str(path)]) == 1
    report = path.read_text(encoding="utf-8").replace(f'"version": "{version("pwmlint")}"', '"version": ""')
    stored = EXPECTED / f"{example}.compare.{form}"
    if os.environ.get(UPDATE):
        stored.write_text(report, encoding="utf-8", newline="\n")
    expected = stored.read_text(encoding="utf-8")
    if form == "json":
        assert rounded(report) == rounded(expected)
    else:
        assert report == expected


def rounded(report: str) -> object:
    """Return a JSON report with its numbers to nine digits: the rest is the linear algebra library's."""
    return json.loads(report, parse_float=lambda text: float(f"{float(text):.9g}"))
