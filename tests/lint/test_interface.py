"""The Python interface: its examples run as written, and it offers what it says."""

from __future__ import annotations

import doctest
import inspect
from pathlib import Path

import pwmlint.lint
import pytest

EXAMPLES = Path(__file__).parents[2] / "examples"


def test_the_examples_run_as_written(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(EXAMPLES)
    found = doctest.testmod(pwmlint.lint, report=True)
    assert found.attempted > 8
    assert found.failed == 0


@pytest.mark.parametrize("name", pwmlint.lint.__all__)
def test_every_name_is_there_and_described(name: str) -> None:
    assert len(inspect.getdoc(getattr(pwmlint.lint, name)) or "") > 20


def test_the_names_are_sorted_so_that_none_is_forgotten_in_a_crowd() -> None:
    assert pwmlint.lint.__all__ == sorted(pwmlint.lint.__all__)
