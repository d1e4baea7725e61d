"""Deviations written for what a review finds: read back and completed, they accept just that."""

from __future__ import annotations

from datetime import date
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st
from pwmlint.lint import Review, review
from pwmlint.lint.deviations import apply, read_deviations
from pwmlint.lint.permit import permit
from pwmlint.lint.quantity import Spread
from pwmlint.lint.verdict import Limit, Outcome, Verdict

EXAMPLES = Path(__file__).parents[2] / "examples"
TODAY = date(2026, 5, 4)


@pytest.fixture(scope="module")
def faulty() -> Review:
    return review(EXAMPLES / "cider-press-rev-b.edf")


def completed(text: str) -> str:
    return text.replace('reason = ""', 'reason = "first press only"').replace('owner = ""', 'owner = "us"')


def asking(verdicts: tuple[Verdict, ...], *outcomes: str) -> list[Verdict]:
    return [verdict for verdict in verdicts if verdict.outcome in outcomes and verdict.deviation is None]


@pytest.mark.parametrize(
    "netlist", sorted(path.name for path in EXAMPLES.iterdir() if path.suffix in (".cir", ".edf"))
)
@pytest.mark.parametrize("told", [True, False])
def test_completed_they_accept_all_and_every_one_is_used(netlist: str, told: bool, tmp_path: Path) -> None:
    path = tmp_path / netlist
    path.write_bytes((EXAMPLES / netlist).read_bytes())
    brief = EXAMPLES / Path(netlist).with_suffix(".brief.toml") if told else None
    found = review(path, brief=brief)
    file = tmp_path / "all.deviations.toml"
    file.write_text(completed(permit(found.verdicts, open_too=True)), encoding="utf-8")
    after = review(path, brief=brief, deviations=file)
    assert not asking(after.verdicts, "fail", "review", "open")
    assert not [
        verdict for verdict in after.verdicts if verdict.rule == "deviations.unused" and verdict.level
    ]


def test_as_written_they_accept_nothing(faulty: Review, tmp_path: Path) -> None:
    file = tmp_path / "all.deviations.toml"
    file.write_text(permit(faulty.verdicts), encoding="utf-8")
    deviations = read_deviations(file)
    assert not deviations.entries
    assert len(deviations.malformed) == 2 * len(asking(faulty.verdicts, "fail", "review"))


def test_what_is_accepted_already_is_not_written_again(faulty: Review, tmp_path: Path) -> None:
    file = tmp_path / "all.deviations.toml"
    file.write_text(completed(permit(faulty.verdicts)), encoding="utf-8")
    verdicts, _ = apply(read_deviations(file), faulty.verdicts, TODAY)
    assert permit(verdicts) == ""


def test_open_verdicts_only_when_asked_for() -> None:
    verdicts = [Verdict(outcome=Outcome.OPEN, message="Does it?", rule="reference.load", subject="U1")]
    assert permit(verdicts) == ""
    assert permit(verdicts, open_too=True).count("[[deviation]]") == 1


def test_one_about_the_deviations_is_not_accepted_by_another() -> None:
    stale = Verdict(outcome=Outcome.FAIL, message="unused", rule="deviations.unused", topic="deviations")
    assert permit([stale]) == ""


NAMES = st.text(min_size=1, max_size=8)


@given(NAMES, NAMES, st.lists(NAMES, min_size=1, max_size=3, unique=True), st.floats(-1e7, 1e7), NAMES)
def test_any_name_and_any_figure_comes_back(
    subject: str, message: str, parts: list[str], value: float, net: str
) -> None:
    import tempfile

    def verdict(*more: str) -> Verdict:
        return Verdict(
            outcome=Outcome.FAIL,
            message=message,
            rule="reference.load",
            subject=subject,
            measured=Spread.exact(value, "V"),
            limit=Limit(None, value - 1.0, "V"),
            parts=(*parts, *more),
            nets=(net,),
        )

    # A second verdict of the same subject: parts and nets must then tell them apart.
    verdicts = [verdict(), verdict("R1", "R2", "R3", "R4")]
    text = completed(permit(verdicts))
    with tempfile.TemporaryDirectory() as folder:
        file = Path(folder) / "any.deviations.toml"
        file.write_text(text, encoding="utf-8")
        deviations = read_deviations(file)
    assert not deviations.malformed
    found, _ = apply(deviations, verdicts, TODAY)
    assert all(one.deviation for one in found)
