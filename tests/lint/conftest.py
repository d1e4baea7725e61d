"""A design from a netlist given as text, for the tests of the circuit and of the design."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest
from pwmlint.grammar import read_bytes
from pwmlint.lint import read_brief, read_parts_list
from pwmlint.lint.design import Design

DesignOf = Callable[..., Design]


@pytest.fixture
def design_of(tmp_path: Path) -> DesignOf:
    """Return a function that makes a design of the lines of a list, of a brief and of a parts list."""

    def make(lines: str, *, brief: str = "", parts: str = "") -> Design:
        netlist = read_bytes(f"* from the orchard\n{lines}\n.end\n".encode(), "orchard.cir")
        told, listed = tmp_path / "orchard.brief.toml", tmp_path / "orchard.parts.csv"
        told.write_text(brief, encoding="utf-8")
        listed.write_text(parts, encoding="utf-8")
        return Design(
            netlist,
            read_brief(told) if brief else None,
            read_parts_list(listed) if parts else None,
        )

    return make
