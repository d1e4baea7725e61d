"""The summary of the seeded faults: recall and false alarms by topic, at the end of the run."""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass, field
from pathlib import Path

import pytest

from .reviewing import Reviewer


@dataclass(slots=True)
class Tally:
    """What the run has counted, by topic.

    seeded, found, untold: faults; those found; those found with neither brief nor parts list
    asked, alarms:         verdicts on sound boards; those that failed or are for a person, unexplained
    explained:             those for a person that are explained
    """

    seeded: Counter[str] = field(default_factory=Counter[str])
    found: Counter[str] = field(default_factory=Counter[str])
    untold: Counter[str] = field(default_factory=Counter[str])
    asked: Counter[str] = field(default_factory=Counter[str])
    alarms: Counter[str] = field(default_factory=Counter[str])
    explained: Counter[str] = field(default_factory=Counter[str])

    def rows(self) -> list[tuple[str, ...]]:
        """Return the table: a heading, one row a topic, the sum."""
        columns = (self.seeded, self.found, self.untold, self.asked, self.alarms, self.explained)
        topics = sorted({topic for column in columns for topic in column})
        heading = ("topic", "faults", "found", "recall", "netlist alone", "asked", "alarms", "explained")
        rows = [self._row(topic, [column[topic] for column in columns]) for topic in topics]
        return [heading, *rows, self._row("all", [column.total() for column in columns])]

    @staticmethod
    def _row(topic: str, counts: list[int]) -> tuple[str, ...]:
        seeded, found, untold, *rest = counts
        recall = f"{100 * found / seeded:.0f} %" if seeded else "-"
        return (topic, str(seeded), str(found), recall, str(untold), *map(str, rest))


_TALLY = pytest.StashKey[Tally]()


def pytest_configure(config: pytest.Config) -> None:
    config.stash[_TALLY] = Tally()


@pytest.fixture(scope="session")
def tally(pytestconfig: pytest.Config) -> Tally:
    return pytestconfig.stash[_TALLY]


@pytest.fixture(scope="session")
def reviewer(tmp_path_factory: pytest.TempPathFactory) -> Reviewer:
    folder: Path = tmp_path_factory.mktemp("boards")
    return Reviewer(folder)


def pytest_terminal_summary(terminalreporter: pytest.TerminalReporter, config: pytest.Config) -> None:
    rows = config.stash[_TALLY].rows()
    if len(rows) <= 2:
        return
    terminalreporter.section("seeded faults and sound boards")
    widths = [max(len(row[column]) for row in rows) for column in range(len(rows[0]))]
    for row in rows:
        first, *rest = (
            cell.ljust(width) if column == 0 else cell.rjust(width)
            for column, (cell, width) in enumerate(zip(row, widths, strict=True))
        )
        terminalreporter.write_line("  ".join((first, *rest)))
