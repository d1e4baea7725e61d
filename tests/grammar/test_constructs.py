"""Which construct of the two netlist formats is covered by which test: a list made from the tests themselves.

Each test of a construct carries `@pytest.mark.construct("A2 string broken at column 80")`. The letter and
number name the part of the format:

A EDIF 2 0 0: A1 tokens, A2 strings, A3 grammar, A4 names, A5 what exporters write, A6 values
B SPICE-style lists: B1 lines, B2 cards, B3 elements, B4 nodes, B5 numbers and expressions, B6 pin orders of
  controllers, B7 dialects, B8 what stays ambiguous
C marking codes of IEC 60062

The list is stored in constructs.md; after a change of tests, write it anew with PWMLINT_UPDATE_SNAPSHOTS=1.
"""

from __future__ import annotations

import ast
import os
from collections.abc import Iterator
from pathlib import Path

TESTS = Path(__file__).parents[1]
STORED = Path(__file__).with_name("constructs.md")

PARTS = [*(f"A{n}" for n in range(1, 7)), *(f"B{n}" for n in range(1, 9)), "C"]


def constructs_of(node: ast.AST) -> Iterator[str]:
    """Yield the constructs that a decorated function, class or parameter names."""
    for call in ast.walk(node):
        if isinstance(call, ast.Call) and ast.unparse(call.func).rpartition(".")[2] == "construct":
            yield str(ast.literal_eval(call.args[0]))


def marked(path: Path) -> Iterator[tuple[str, str]]:
    """Yield (construct, test) for every marked test of a file."""
    where = path.relative_to(TESTS).as_posix()
    for node in ast.parse(path.read_text(encoding="utf-8")).body:
        if isinstance(node, ast.ClassDef):
            shared = [c for decorator in node.decorator_list for c in constructs_of(decorator)]
            yield from marked_tests(node.body, f"{where}::{node.name}", shared)
        else:
            yield from marked_tests([node], where, [])


def marked_tests(nodes: list[ast.stmt], where: str, shared: list[str]) -> Iterator[tuple[str, str]]:
    for node in nodes:
        if isinstance(node, ast.FunctionDef) and node.name.startswith("test_"):
            own = [construct for decorator in node.decorator_list for construct in constructs_of(decorator)]
            yield from ((construct, f"{where}::{node.name}") for construct in (*shared, *own))


def table() -> str:
    found: dict[str, list[str]] = {}
    for path in sorted(TESTS.rglob("test_*.py")):
        for construct, test in marked(path):
            found.setdefault(construct, []).append(test)
    lines = ["| construct | test |", "| --- | --- |"]
    for construct in sorted(found):
        lines.append(f"| {construct.replace('|', chr(92) + '|')} | {', '.join(sorted(found[construct]))} |")
    return "\n".join(lines) + "\n"


def test_every_part_of_both_formats_has_tests() -> None:
    covered = {line.split()[1] for line in table().splitlines()[2:]}
    assert set(PARTS) <= covered, sorted(set(PARTS) - covered)


def test_the_stored_list_is_the_one_the_tests_make() -> None:
    made = table()
    if os.environ.get("PWMLINT_UPDATE_SNAPSHOTS"):
        STORED.write_text(made, encoding="utf-8")
    assert made == STORED.read_text(encoding="utf-8")
