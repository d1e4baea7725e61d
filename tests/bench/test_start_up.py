"""How long a review of a small design takes, measured against importing the libraries that it stands on.

Both run in processes of their own with a folder of compiled modules, as after any first run, whatever the
environment of the tests says about writing such files.
"""

from __future__ import annotations

import os
import subprocess
import sys
from collections.abc import Mapping, Sequence
from functools import partial
from pathlib import Path

import pytest

from .turns import best_attempt, least_times

EXAMPLE = Path(__file__).parents[2] / "examples" / "frost-fan.cir"

IMPORTS = [sys.executable, "-c", "import lark, networkx, pint, numpy, rich.console"]

REVIEW = [sys.executable, "-m", "pwmlint.lint", "review", "--gate", "never", str(EXAMPLE)]

TURNS = 7

# The first requirement on speed: a review may cost half as much again as the imports alone.
MOST = 1.5


def test_a_review_takes_little_longer_than_the_imports(
    capsys: pytest.CaptureFixture[str], tmp_path: Path
) -> None:
    environment = {**os.environ, "PYTHONPYCACHEPREFIX": str(tmp_path)}
    environment.pop("PYTHONDONTWRITEBYTECODE", None)
    runs = [partial(run, command, environment) for command in (IMPORTS, REVIEW)]
    for first in runs:  # as after any first run, there are compiled modules
        first()

    def measure() -> float:
        imports, review = least_times(runs, TURNS)
        with capsys.disabled():
            print(f"\nreview {1000 * review:.0f} ms, imports {1000 * imports:.0f} ms")
        return review / imports

    with capsys.disabled():
        assert best_attempt(measure, MOST, name="a review over the imports") <= MOST


def run(command: Sequence[str], environment: Mapping[str, str]) -> None:
    subprocess.run(command, check=True, stdout=subprocess.DEVNULL, env=environment)
