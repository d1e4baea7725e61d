"""The hook of `.pre-commit-hooks.yaml` in a scratch repository: a bad change is not committed.

The hook runs with the interpreter of the tests instead of an environment of its own, so that no network is
needed; everything else of it is as written.
"""

from __future__ import annotations

import os
import re
import shutil
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest
import yaml

ROOT = Path(__file__).parents[1]
EXAMPLES = ROOT / "examples"

pytestmark = pytest.mark.skipif(shutil.which("git") is None, reason="git is not installed")

Git = Callable[..., subprocess.CompletedProcess[str]]


def hook() -> dict[str, Any]:
    (only,) = yaml.safe_load((ROOT / ".pre-commit-hooks.yaml").read_text(encoding="utf-8"))
    return only


@pytest.fixture
def git(tmp_path: Path) -> Git:
    """Return git in a repository that holds the sound frost fan and has the hook installed."""
    folder = tmp_path / "orchard"
    folder.mkdir()
    environment = {
        **{key: value for key, value in os.environ.items() if not key.startswith("GIT_")},
        "PRE_COMMIT_HOME": str(tmp_path / "home"),
        "GIT_CONFIG_GLOBAL": os.devnull,
        "GIT_CONFIG_NOSYSTEM": "1",
        "PATH": os.pathsep.join([str(Path(sys.executable).parent), os.environ["PATH"]]),
    }

    def run(*arguments: str) -> subprocess.CompletedProcess[str]:
        identity = ("-c", "user.name=Orchard", "-c", "user.email=orchard@example.org")
        command = ["git", *identity, *arguments]
        return subprocess.run(
            command, cwd=folder, env=environment, capture_output=True, text=True, check=False
        )

    assert run("init", "--quiet").returncode == 0
    for ending in (".cir", ".brief.toml", ".parts.csv"):
        shutil.copy(EXAMPLES / f"frost-fan{ending}", folder)
    here = {**hook(), "language": "system", "entry": f"{sys.executable} -m pwmlint.lint review"}
    config = {"repos": [{"repo": "local", "hooks": [here]}]}
    (folder / ".pre-commit-config.yaml").write_text(yaml.safe_dump(config), encoding="utf-8")
    subprocess.run(
        [sys.executable, "-m", "pre_commit", "install"],
        cwd=folder,
        env=environment,
        check=True,
        capture_output=True,
    )
    assert run("add", ".").returncode == 0
    first = run("commit", "-m", "the sound fan")
    assert first.returncode == 0, first.stdout + first.stderr
    return run


def commits(git: Git) -> int:
    return int(git("rev-list", "--count", "HEAD").stdout)


def test_the_entry_is_the_command_line() -> None:
    assert hook()["entry"] == "pwmlint review"
    assert hook()["language"] == "python"


@pytest.mark.parametrize(
    ("name", "wanted"),
    [
        ("board.edf", True),
        ("BOARD.EDF", True),
        ("psu/board.cir", True),
        ("board.brief.toml", True),
        ("board.parts.csv", True),
        ("board.deviations.toml", True),
        ("pyproject.toml", False),
        ("edf.py", False),
        ("parts.csv", False),
        ("board.edf.txt", False),
    ],
)
def test_which_files_it_looks_at(name: str, wanted: bool) -> None:
    assert bool(re.search(hook()["files"], name)) is wanted


def test_a_bad_change_of_the_netlist_is_blocked(git: Git, tmp_path: Path) -> None:
    netlist = tmp_path / "orchard" / "frost-fan.cir"
    netlist.write_text((EXAMPLES / "frost-fan-rev-b.cir").read_text(encoding="utf-8"), encoding="utf-8")
    done = git("commit", "-a", "-m", "revision B")
    assert done.returncode == 1
    assert "gate error: not passed" in done.stdout + done.stderr
    assert commits(git) == 1


def test_a_brief_that_the_netlist_does_not_meet_is_blocked(git: Git, tmp_path: Path) -> None:
    brief = tmp_path / "orchard" / "frost-fan.brief.toml"
    text = brief.read_text(encoding="utf-8")
    brief.write_text(text.replace('topology = "single-ended"', 'topology = "push-pull"'), encoding="utf-8")
    done = git("commit", "-a", "-m", "push-pull")
    assert done.returncode == 1
    assert "output-mode.topology" in done.stdout + done.stderr
    assert commits(git) == 1


def test_any_other_change_passes(git: Git, tmp_path: Path) -> None:
    (tmp_path / "orchard" / "notes.txt").write_text("pears in row nine\n", encoding="utf-8")
    assert git("add", "notes.txt").returncode == 0
    assert git("commit", "-m", "notes").returncode == 0
    assert commits(git) == 2
