"""A fresh brief changes nothing: the sound boards, in both formats, with and without a parts list."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest
from pwmlint.grammar import read_bytes
from pwmlint.lint import Review
from pwmlint.lint.brief import read_brief
from pwmlint.lint.brief_writer import brief_text
from pwmlint.lint.controllers import generic_number
from pwmlint.lint.parts_list import read_parts_list
from pwmlint.lint.review import review_netlist

from .board import Board
from .catalogue import SOUND
from .reviewing import FORMATS
from .writers import WRITERS, parts_list_text


@pytest.mark.parametrize("rated", [True, False], ids=["with parts list", "netlist alone"])
@pytest.mark.parametrize("form", FORMATS)
@pytest.mark.parametrize("board", SOUND, ids=lambda board: board.name)
def test_a_fresh_brief_changes_no_verdict(
    board: Board, form: str, rated: bool, tmp_path: Path, same_verdicts: Callable[[Review, Review], bool]
) -> None:
    netlist = read_bytes(WRITERS[form](board).encode(), "board", keep=lambda m: generic_number(m) is not None)
    parts, brief = tmp_path / "board.parts.csv", tmp_path / "board.brief.toml"
    parts.write_text(parts_list_text(board), encoding="utf-8")
    listed = read_parts_list(parts) if rated else None
    brief.write_text(brief_text(netlist, listed), encoding="utf-8")
    told = read_brief(brief)
    assert told.controllers
    assert same_verdicts(review_netlist(netlist, None, listed), review_netlist(netlist, told, listed))
