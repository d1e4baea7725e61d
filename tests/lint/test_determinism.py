"""The same input gives the same bytes, whatever order Python's hashes come in."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path

import pytest
from pwmlint.lint.report import FORMATS

EXAMPLES = Path(__file__).parents[2] / "examples"
NETLISTS = ("cider-press-rev-b.edf", "frost-fan-rev-b.cir")


def written(folder: Path, *arguments: str, seed: str) -> dict[str, bytes]:
    """Return what a run of its own writes, by the name of the file; standard output is "-"."""
    environment = {**os.environ, "PYTHONHASHSEED": seed}
    command = [sys.executable, "-m", "pwmlint.lint", *arguments]
    done = subprocess.run(command, cwd=EXAMPLES, env=environment, capture_output=True, check=False)
    assert done.returncode in (0, 1), done.stderr
    return {"-": done.stdout} | {path.name: path.read_bytes() for path in folder.iterdir()}


def test_reviews(tmp_path: Path) -> None:
    outputs = [
        argument for name in FORMATS for argument in ("--format", name, "--output", str(tmp_path / name))
    ]
    once, again = (written(tmp_path, "review", *NETLISTS, *outputs, seed=seed) for seed in ("1", "2"))
    assert set(once) == {"-", *FORMATS}
    for name, report in once.items():
        assert again[name] == report, name


@pytest.mark.parametrize("arguments", [["permit", NETLISTS[0]], ["rules"], ["controllers", "494"]])
def test_other_commands(arguments: list[str], tmp_path: Path) -> None:
    once, again = (written(tmp_path, *arguments, seed=seed) for seed in ("1", "2"))
    assert once == again
