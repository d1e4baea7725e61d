"""Two revisions given as the lines of lists, compared without being reviewed."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest
from pwmlint.grammar import read_bytes
from pwmlint.lint import read_parts_list
from pwmlint.lint.compare.circuits import circuit_changes
from pwmlint.lint.compare.comparison import CircuitChanges
from pwmlint.lint.compare.pairing import match
from pwmlint.lint.compare.side import Side
from pwmlint.lint.controllers import generic_number
from pwmlint.lint.design import Design

SideOf = Callable[..., Side]
Changes = Callable[..., CircuitChanges]


@pytest.fixture
def side_of(tmp_path: Path) -> SideOf:
    """Return a function that makes a revision of the lines of a list, or of an EDIF file."""

    def make(text: str, parts: str = "") -> Side:
        data = text if text.lstrip().startswith("(") else f"* from the orchard\n{text}\n.end\n"
        listed = tmp_path / "orchard.parts.csv"
        listed.write_text(parts, encoding="utf-8")
        netlist = read_bytes(data.encode(), "orchard.cir", keep=lambda name: generic_number(name) is not None)
        return Side(Design(netlist, None, read_parts_list(listed) if parts else None))

    return make


@pytest.fixture
def changes(side_of: SideOf) -> Changes:
    """Return a function that compares the circuits of two revisions."""

    def compare(old: str, new: str, *, old_parts: str = "", new_parts: str = "") -> CircuitChanges:
        one, other = side_of(old, old_parts), side_of(new, new_parts)
        return circuit_changes(one, other, match(one, other))

    return compare
