"""The examples: their exit status, what they find, and their reports to the letter.

A report is stored beside this test. With PWMLINT_UPDATE_SNAPSHOTS=1 in the environment a run writes the
reports anew; read the difference before you keep it: every figure was checked by hand once.
"""

from __future__ import annotations

import json
import os
from collections.abc import Callable
from importlib.metadata import version
from pathlib import Path

import pytest
from pwmlint.lint import Level, Outcome, Review, review
from pwmlint.lint.cli import main

UPDATE = "PWMLINT_UPDATE_SNAPSHOTS"

ROOT = Path(__file__).parents[2]
EXPECTED = Path(__file__).parent / "expected"

SOUND = ["frost-fan.cir", "cider-press.edf"]
FAULTY = {
    "frost-fan-rev-b.cir": {
        "connections.value-missing",
        "supply.range",
        "reference.load",
        "dead-time.driven",
        "soft-start.wiring",
        "output-mode.wiring",
        "feedback.output-voltage",
        "feedback.divider-ratio",
        "current-limit.sense-dissipation",
    },
    "cider-press-rev-b.edf": {
        "supply.range",
        "reference.bypass",
        "oscillator.frequency",
        "dead-time.minimum",
        "output-mode.topology",
        "feedback.output-voltage",
        "current-limit.trip-point",
    },
}
ALL = [*SOUND, *FAULTY]


@pytest.fixture(autouse=True)
def _from_the_root(monkeypatch: pytest.MonkeyPatch):
    """Review as a user does who stands in the repository's root: paths in the reports are relative."""
    monkeypatch.chdir(ROOT)
    for name in ("FORCE_COLOR", "COLUMNS"):
        monkeypatch.delenv(name, raising=False)


@pytest.fixture
def reports(tmp_path: Path) -> Callable[[str], tuple[int, str, str]]:
    """Return a function that gives an example's exit status, text report and JSON report."""

    def run(example: str) -> tuple[int, str, str]:
        text, data = tmp_path / "report.txt", tmp_path / "report.json"
        outputs = ["--format", "text", "--output", str(text), "--format", "json", "--output", str(data)]
        status = main(["review", f"examples/{example}", *outputs])
        return status, text.read_text(encoding="utf-8"), data.read_text(encoding="utf-8")

    return run


def _review(example: str) -> Review:
    return review(f"examples/{example}")


def _failing(found: Review) -> set[str]:
    return {verdict.rule for verdict in found.verdicts if verdict.outcome is Outcome.FAIL}


class TestSoundExamples:
    @pytest.mark.parametrize("example", SOUND)
    def test_pass_the_gate(self, example: str, reports: Callable[[str], tuple[int, str, str]]):
        assert reports(example)[0] == 0

    @pytest.mark.parametrize("example", SOUND)
    def test_have_no_failed_verdict(self, example: str):
        assert _failing(_review(example)) == set()

    @pytest.mark.parametrize("example", SOUND)
    def test_leave_nothing_open_or_to_judge_without_a_word(self, example: str):
        for verdict in _review(example).verdicts:
            if verdict.outcome is Outcome.REVIEW:
                assert verdict.remedy, verdict.rule
            if verdict.outcome is Outcome.OPEN:
                assert verdict.needs, verdict.rule

    @pytest.mark.parametrize("example", SOUND)
    def test_are_sound_without_brief_and_parts_list(self, example: str, tmp_path: Path):
        alone = tmp_path / example
        alone.write_bytes((ROOT / "examples" / example).read_bytes())
        assert _failing(review(alone)) == set()


class TestFaultyExamples:
    @pytest.mark.parametrize("example", FAULTY)
    def test_do_not_pass_the_gate(self, example: str, reports: Callable[[str], tuple[int, str, str]]):
        assert reports(example)[0] == 1

    @pytest.mark.parametrize(("example", "faults"), FAULTY.items())
    def test_show_every_fault_that_was_put_in(self, example: str, faults: set[str]):
        assert len(faults) >= 6
        assert faults <= _failing(_review(example))

    @pytest.mark.parametrize("example", FAULTY)
    def test_stop_at_errors_and_not_only_at_warnings(self, example: str):
        assert not _review(example).passes(Level.ERROR)


class TestReports:
    @pytest.mark.parametrize("example", ALL)
    def test_text_is_as_stored(self, example: str, reports: Callable[[str], tuple[int, str, str]]):
        _, text, _ = reports(example)
        assert max(map(len, text.splitlines())) <= 80
        assert "\x1b" not in text
        assert text == _stored(f"{example}.txt", text)

    @pytest.mark.parametrize("example", ALL)
    def test_json_is_as_stored(self, example: str, reports: Callable[[str], tuple[int, str, str]]):
        _, _, data = reports(example)
        assert json.loads(data)["tool"] == {"name": "pwmlint", "version": version("pwmlint")}
        # The version is asked for above; in the stored report it would change with every release.
        data = data.replace(f'"version": "{version("pwmlint")}"', '"version": ""')
        assert data == _stored(f"{example}.json", data)


def _stored(name: str, now: str) -> str:
    """Return the stored report; under PWMLINT_UPDATE_SNAPSHOTS the one of now, which is then stored."""
    path = EXPECTED / name
    if os.environ.get(UPDATE):
        path.write_text(now, encoding="utf-8", newline="\n")
    return path.read_text(encoding="utf-8")
