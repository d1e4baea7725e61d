"""The three floors: imports go down the stairs only, rules to lint to grammar, and never back up."""

from __future__ import annotations

import ast
from collections.abc import Iterator
from pathlib import Path

import pytest

ROOT = Path(__file__).parent.parent
FLOORS = ("grammar", "lint", "rules")

MODULES = [path for floor in FLOORS for path in sorted((ROOT / floor).rglob("*.py"))]


def floor_of(path: Path) -> str:
    return path.relative_to(ROOT).parts[0]


def imported(path: Path) -> Iterator[str]:
    """Yield the floors that a module imports from, its own included."""
    here = ["pwmlint", *path.relative_to(ROOT).with_suffix("").parts]
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"), str(path))):
        names: list[str] = []
        if isinstance(node, ast.Import):
            names = [alias.name for alias in node.names]
        elif isinstance(node, ast.ImportFrom):
            above = here[: len(here) - node.level] if node.level else []
            module = [*above, *(node.module or "").split(".")]
            names = [".".join([*filter(None, module), alias.name]) for alias in node.names]
        for name in names:
            words = name.split(".")
            if words[0] == "pwmlint" and len(words) > 1:
                yield words[1]
            elif words[0] in FLOORS:
                raise AssertionError(f"{path}: {name} is imported without its package")


@pytest.mark.parametrize("path", MODULES, ids=lambda path: str(path.relative_to(ROOT)))
def test_a_module_imports_from_its_own_floor_or_one_below(path: Path) -> None:
    floor = floor_of(path)
    allowed = {"grammar": {"grammar"}, "lint": {"grammar", "lint"}, "rules": {"grammar", "lint", "rules"}}[
        floor
    ]
    assert set(imported(path)) <= allowed


@pytest.mark.parametrize("floor", FLOORS)
def test_every_floor_has_modules(floor: str) -> None:
    assert any(floor_of(path) == floor for path in MODULES)


def test_each_floor_is_seen_to_use_the_one_below() -> None:
    used = {name for path in MODULES if floor_of(path) == "rules" for name in imported(path)}
    assert {"grammar", "lint"} <= used


@pytest.mark.parametrize(
    ("line", "floor"),
    [
        ("from ..rules.dead_time import driven", "rules"),
        ("from .. import rules", "rules"),
        ("import pwmlint.rules.dead_time", "rules"),
        ("from pwmlint.rules import dead_time", "rules"),
        ("def late():\n    from ..rules import dead_time", "rules"),
        ("from .quantity import Spread", "lint"),
        ("from ..grammar.netlist import Part", "grammar"),
    ],
)
def test_every_way_to_import_is_understood(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, line: str, floor: str
) -> None:
    monkeypatch.setitem(globals(), "ROOT", tmp_path)
    path = tmp_path / "lint" / "orchard.py"
    path.parent.mkdir()
    path.write_text(line, encoding="utf-8")
    assert list(imported(path)) == [floor]
