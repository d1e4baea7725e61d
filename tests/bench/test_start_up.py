"""How long a review of a small design takes, measured against importing the libraries that it stands on.

Both run in processes of their own with a folder of compiled modules, as after any first run, whatever the
environment of the tests says about writing such files.
"""

from __future__ import annotations

import os
import subprocess
import sys
from collections.abc import Mapping, Sequence
from pathlib import Path
from statistics import median
from time import perf_counter

import pytest

EXAMPLE = Path(__file__).parents[2] / "examples" / "frost-fan.cir"

IMPORTS = [sys.executable, "-c", "import lark, networkx, pint, numpy, rich.console"]

REVIEW = [sys.executable, "-m", "pwmlint.lint", "review", "--gate", "never", str(EXAMPLE)]

PAIRS = 7

# The first requirement on speed: a review may cost half as much again as the imports alone.
MOST = 1.5


def test_a_review_takes_little_longer_than_the_imports(
    capsys: pytest.CaptureFixture[str], tmp_path: Path
) -> None:
    environment = {**os.environ, "PYTHONPYCACHEPREFIX": str(tmp_path)}
    environment.pop("PYTHONDONTWRITEBYTECODE", None)
    for command in (IMPORTS, REVIEW):
        wall_time(command, environment)
    pairs = [(wall_time(IMPORTS, environment), wall_time(REVIEW, environment)) for _ in range(PAIRS)]
    ratio = median(review / imports for imports, review in pairs)
    imports, review = (median(times) for times in zip(*pairs, strict=True))
    with capsys.disabled():
        print(
            f"\nreview {1000 * review:.0f} ms, imports {1000 * imports:.0f} ms, "
            f"ratio {ratio:.2f} (median of {PAIRS} pairs, at most {MOST})"
        )
    assert ratio <= MOST


def wall_time(command: Sequence[str], environment: Mapping[str, str]) -> float:
    start = perf_counter()
    subprocess.run(command, check=True, stdout=subprocess.DEVNULL, env=environment)
    return perf_counter() - start
