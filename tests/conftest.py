"""Shared by all tests: the markers, and a review of a netlist given as text."""

from __future__ import annotations

from collections.abc import Callable
from math import isclose
from pathlib import Path

import pytest
from pwmlint.lint import Review, Verdict, review

Ask = Callable[..., list[Verdict]]
ReviewText = Callable[..., Review]
SameVerdicts = Callable[[Review, Review], bool]


def pytest_configure(config: pytest.Config) -> None:
    config.addinivalue_line(
        "markers", "construct(name): the construct of a netlist format that a test covers"
    )


@pytest.fixture
def review_text(tmp_path: Path) -> ReviewText:
    """Return a function that reviews a netlist given as text, with a brief and a parts list if wanted."""

    def run(netlist: str, *, brief: str = "", parts: str = "") -> Review:
        path = tmp_path / ("board.edf" if netlist.lstrip().startswith("(") else "board.cir")
        path.write_text(netlist, encoding="utf-8")
        for text, ending in ((brief, ".brief.toml"), (parts, ".parts.csv")):
            beside = tmp_path / f"board{ending}"
            beside.unlink(missing_ok=True)
            if text:
                beside.write_text(text, encoding="utf-8")
        return review(path)

    return run


@pytest.fixture
def ask(review_text: ReviewText) -> Ask:
    """Return a function that gives the verdicts of one rule on a netlist given as text."""

    def run(rule: str, netlist: str, *, brief: str = "", parts: str = "") -> list[Verdict]:
        found = review_text(netlist, brief=brief, parts=parts)
        return [verdict for verdict in found.verdicts if verdict.rule == rule]

    return run


@pytest.fixture(scope="session")
def same_verdicts() -> SameVerdicts:
    """Return a function that tells whether two reviews find the same, whatever words they find for it."""

    def words(verdict: Verdict) -> tuple[str, ...]:
        return (verdict.rule, verdict.subject, verdict.outcome, verdict.level or "")

    def figures(verdict: Verdict) -> list[float]:
        measured, limit = verdict.measured, verdict.limit
        found = [measured.minimum, measured.nominal, measured.maximum] if measured is not None else []
        found += [end for end in (limit.minimum, limit.maximum) if end is not None] if limit else []
        return found

    def alike(one: Verdict, other: Verdict) -> bool:
        ours, theirs = figures(one), figures(other)
        return (
            words(one) == words(other)
            and len(ours) == len(theirs)
            and all(isclose(a, b, rel_tol=1e-6, abs_tol=1e-12) for a, b in zip(ours, theirs, strict=True))
        )

    def same(one: Review, other: Review) -> bool:
        ours, theirs = (sorted(review.verdicts, key=words) for review in (one, other))
        return len(ours) == len(theirs) and all(map(alike, ours, theirs))

    return same
