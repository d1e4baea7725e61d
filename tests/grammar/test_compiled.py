from __future__ import annotations

import os
import subprocess
import sys
from collections.abc import Callable
from importlib.util import cache_from_source
from pathlib import Path

import pytest
from pwmlint.grammar.compiled import compiled

GRAMMAR = Path("somewhere") / "fan.lark"

READ = r"""
from pwmlint.grammar.spice import read_spice
print(sorted(read_spice("orchard\nR1 a 0 1k\n", "fan.cir").parts))
"""


def test_it_lies_with_the_compiled_modules_and_is_none_of_them(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(sys, "dont_write_bytecode", False)
    module = Path(cache_from_source(str(GRAMMAR)))
    found = Path(str(compiled(GRAMMAR)))
    assert found.parent == module.parent
    assert found.suffix == ".lark"
    assert found.stem == module.stem


def test_none_is_written_where_python_writes_none(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(sys, "dont_write_bytecode", True)
    assert compiled(GRAMMAR) is False


def test_none_is_written_where_python_compiles_none(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(sys, "dont_write_bytecode", False)
    monkeypatch.setattr(sys.implementation, "cache_tag", None)
    assert compiled(GRAMMAR) is False


def untouched(file: Path) -> None:
    del file


def cut_off(file: Path) -> None:
    file.write_bytes(file.read_bytes()[:100])


def of_another_grammar(file: Path) -> None:
    file.write_bytes(b"0" * 64 + file.read_bytes()[64:])


def no_file(file: Path) -> None:
    file.unlink()
    file.mkdir()


@pytest.mark.parametrize("spoil", [untouched, cut_off, of_another_grammar, no_file])
def test_a_kept_grammar_reads_the_same_and_a_spoilt_one_is_made_anew(
    spoil: Callable[[Path], None], tmp_path: Path
) -> None:
    assert read(tmp_path) == "['R1']"
    (kept,) = tmp_path.rglob("spice.*.lark")
    spoil(kept)
    assert read(tmp_path) == "['R1']"


def read(folder: Path) -> str:
    """Read a list in a process that keeps compiled files in `folder`; nothing is said on standard error."""
    environment = {**os.environ, "PYTHONPYCACHEPREFIX": str(folder)}
    environment.pop("PYTHONDONTWRITEBYTECODE", None)
    done = subprocess.run(
        [sys.executable, "-c", READ], env=environment, capture_output=True, text=True, check=True
    )
    assert done.stderr == ""
    return done.stdout.strip()
