"""Boards written in both formats are one board to the comparison, and a fault is told across formats."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from pathlib import Path

import pytest
from pwmlint.lint.compare import Change, Comparison, compare
from pwmlint.lint.verdict import Level, Outcome

from .board import Board
from .cider_press import CIDER_PRESS
from .cold_store import COLD_STORE
from .edits import Edit, added, moved, reversed_, swapped, value, without
from .frost_fan import FROST_FAN
from .irrigation_pump import IRRIGATION_PUMP
from .mast_beacon import MAST_BEACON
from .writers import WRITERS, brief_text, parts_list_text

Compare = Callable[..., Comparison]

BOARDS = (FROST_FAN, CIDER_PRESS, COLD_STORE, IRRIGATION_PUMP, MAST_BEACON)
NAMES = [board.name for board in BOARDS]
ENDINGS = {"SPICE": "cir", "EDIF": "edf"}

# Asked of one format only, or about the reading of it: none of them finds fault with the board.
FORMAT_ALONE = {"connections.title-line", "connections.reading", "rating.capacitor-polarity"}

# As a list needs it: there a value of two words would be a node and a model.
ONE_WORD = {"connector"}


def plain(board: Board) -> Board:
    """Return a board whose connectors have values of one word."""
    parts = tuple(
        replace(part, value=part.value.replace(" ", "-").replace("M", "m"))
        if part.symbol in ONE_WORD
        else part
        for part in board.parts
    )
    return replace(board, parts=parts)


@pytest.fixture
def across(tmp_path: Path) -> Compare:
    """Return a function that compares two boards, each written in a format of its own."""

    def run(old: Board, new: Board, old_form: str = "SPICE", new_form: str = "EDIF") -> Comparison:
        paths: list[Path] = []
        for name, board, form in (("old", old, old_form), ("new", new, new_form)):
            path = tmp_path / f"{name}.{ENDINGS[form]}"
            path.write_text(WRITERS[form](plain(board)), encoding="utf-8")
            path.with_suffix(".brief.toml").write_text(brief_text(board), encoding="utf-8")
            path.with_suffix(".parts.csv").write_text(parts_list_text(board), encoding="utf-8")
            paths.append(path)
        return compare(*paths)

    return run


@pytest.mark.parametrize("forms", [("SPICE", "EDIF"), ("EDIF", "SPICE")], ids="->".join)
@pytest.mark.parametrize("board", BOARDS, ids=NAMES)
def test_a_board_in_another_format_is_the_same_board(
    across: Compare, board: Board, forms: tuple[str, str]
) -> None:
    found = across(board, board, *forms)
    assert not found.circuit
    assert {one.verdict.rule for one in found.verdicts} <= FORMAT_ALONE
    assert {one.verdict.outcome for one in found.verdicts} <= {Outcome.PASS, Outcome.INFORMATIONAL}
    assert found.unchanged.parts == len(board.parts)
    assert found.passes(Level.NOTE, strict=True)


@pytest.mark.parametrize("form", ENDINGS)
@pytest.mark.parametrize("board", BOARDS, ids=NAMES)
def test_a_board_is_itself(across: Compare, board: Board, form: str) -> None:
    found = across(board, board, form, form)
    assert not found.circuit
    assert found.verdicts == ()


@pytest.mark.parametrize(
    ("edit", "reference", "told"),
    [
        (value("R6", "3.83k"), "R6", ("value", "38.3 kΩ", "3.83 kΩ")),
        (moved("U1", "OUTPUT CTRL", "REF"), "U1", ("OUTPUT CTRL", "0", "REF")),
        (moved("R11", "1", "GND"), "R11", ("one end", "RTN", "GND")),
        (moved("J2", "2", "GND"), "J2", ("2", "RTN", "GND")),
        (value("Q2", "NPN 80V"), "Q2", ("type", "NPN40V", "NPN 80V")),
    ],
)
def test_an_edit_is_told_across_formats(
    across: Compare, edit: Edit, reference: str, told: tuple[str, str, str]
) -> None:
    found = across(FROST_FAN, edit(FROST_FAN)).circuit
    (change,) = found.parts_changed
    assert change.new.reference == reference
    differences = [(one.what, one.old, one.new) for one in change.differences]
    assert [*differences, *((move.pin, move.old, move.new) for move in change.pins)] == [told]
    assert (found.parts_added, found.parts_removed) == ((), ())


@pytest.mark.parametrize("edit", [reversed_("D1"), swapped("M1", "D", "S"), swapped("U1", "VCC", "REF")])
def test_pins_that_changed_places_are_told_across_formats(across: Compare, edit: Edit) -> None:
    (change,) = across(FROST_FAN, edit(FROST_FAN)).circuit.parts_changed
    assert len(change.pins) == 2
    assert {move.old for move in change.pins} != {None}


def numbered_anew(board: Board) -> Board:
    """Return a board with all resistors one number up, and two nets under other names."""
    nets = {"FB": "SENSE", "LZ": "N17"}

    def up(reference: str) -> str:
        return f"R{int(reference[1:]) + 1}" if reference.startswith("R") else reference

    parts = tuple(
        replace(part, reference=up(part.reference), nets=tuple(nets.get(net, net) for net in part.nets))
        for part in board.parts
    )
    return replace(board, parts=parts, ratings={up(name): row for name, row in board.ratings.items()})


@pytest.mark.parametrize("forms", [("SPICE", "SPICE"), ("EDIF", "EDIF"), ("SPICE", "EDIF")], ids="->".join)
def test_a_drawing_numbered_anew_is_no_new_drawing(across: Compare, forms: tuple[str, str]) -> None:
    found = across(FROST_FAN, numbered_anew(FROST_FAN), *forms)
    changed = found.circuit.parts_changed
    assert {one.old.reference: one.new.reference for one in changed} == {
        f"R{number}": f"R{number + 1}" for number in range(1, 17)
    }
    assert not any(one.differences or one.pins for one in changed)
    renamed = {one.old.name: one.new.name for one in found.circuit.nets_changed}
    assert renamed == {"FB": "SENSE", "LZ": "N17"}
    assert (found.circuit.parts_added, found.circuit.parts_removed) == ((), ())
    assert {one.verdict.rule for one in found.verdicts} <= FORMAT_ALONE


def test_parts_that_came_and_went_are_told_across_formats(across: Compare) -> None:
    new = added("R90", "resistor", "VOUT GND", "1k")(without("C15")(FROST_FAN))
    found = across(FROST_FAN, new).circuit
    assert [part.reference for part in found.parts_added] == ["R90"]
    assert [part.reference for part in found.parts_removed] == ["C15"]
    assert found.parts_changed == ()


def test_the_gate_stops_at_a_fault_across_formats(across: Compare) -> None:
    found = across(FROST_FAN, value("R6", "3.83k")(FROST_FAN))
    worse = {one.verdict.rule for one in found.of(Change.WORSE) if one.verdict.outcome is Outcome.FAIL}
    assert "feedback.output-voltage" in worse
    for one in found.of(Change.WORSE):
        if one.verdict.rule == "feedback.output-voltage":
            assert one.old is not None
            assert one.old.measured is not None
            assert one.old.measured.nominal == pytest.approx(12.1, abs=0.1)  # 2.5 V (1 + 38.3 / 10)
