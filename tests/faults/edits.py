"""What can go wrong with a board: each edit is a function from a board to the board with the fault in it."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import replace
from typing import TypeAlias

from .board import GROUND, SYMBOLS, Board, Part

Edit: TypeAlias = Callable[[Board], Board]


def _changed(reference: str, change: Callable[[Part], Part]) -> Edit:
    def edit(board: Board) -> Board:
        assert board.part(reference), reference
        parts = tuple(change(part) if part.reference == reference else part for part in board.parts)
        return replace(board, parts=parts)

    return edit


def without(*references: str) -> Edit:
    """Leave parts out."""

    def edit(board: Board) -> Board:
        parts = tuple(part for part in board.parts if part.reference not in references)
        assert len(parts) == len(board.parts) - len(references), references
        return replace(board, parts=parts)

    return edit


def added(reference: str, symbol: str, nets: str, value: str) -> Edit:
    """Add a part that the sound board does not have; `nets` as the table writes them."""
    part = Part(reference, symbol, tuple(nets.split()), value)
    return lambda board: replace(board, parts=(*board.parts, part))


def value(reference: str, text: str) -> Edit:
    """Give a part another value, the parts list's row the same: what is drawn is what is bought."""

    def edit(board: Board) -> Board:
        drawn = _changed(reference, lambda part: replace(part, value=text))(board)
        row = drawn.ratings.get(reference, {})
        return rating(reference, value=text)(drawn) if "value" in row else drawn

    return edit


def drawn_as(reference: str, symbol: str) -> Edit:
    """Fit another kind of part with as many pins."""
    return _changed(reference, lambda part: replace(part, symbol=symbol))


def moved(reference: str, pin: str, net: str) -> Edit:
    """Connect one pin of a part to another net."""

    def change(part: Part) -> Part:
        nets = list(part.nets)
        nets[part.index(pin)] = net
        return replace(part, nets=tuple(nets))

    return _changed(reference, change)


def opened(reference: str, pin: str) -> Edit:
    """Leave one pin of a part on a net of its own."""
    return moved(reference, pin, f"LOOSE_{reference}")


def swapped(reference: str, pin: str, other: str) -> Edit:
    """Exchange two pins of a part."""

    def change(part: Part) -> Part:
        nets = list(part.nets)
        one, two = part.index(pin), part.index(other)
        nets[one], nets[two] = nets[two], nets[one]
        return replace(part, nets=tuple(nets))

    return _changed(reference, change)


def reversed_(reference: str) -> Edit:
    """Turn a part of two pins round."""

    def edit(board: Board) -> Board:
        pins = SYMBOLS[board.part(reference).symbol]
        return swapped(reference, pins[0], pins[1])(board)

    return edit


def joined(kept: str, lost: str) -> Edit:
    """Make one net of two: a solder bridge, a label used twice."""

    def change(part: Part) -> Part:
        return replace(part, nets=tuple(kept if net == lost else net for net in part.nets))

    return lambda board: replace(board, parts=tuple(change(part) for part in board.parts))


def shorted(reference: str) -> Edit:
    """Short a part of two pins: its nets become one, ground where one of them is ground."""

    def edit(board: Board) -> Board:
        kept, lost = board.part(reference).nets
        return joined(lost, kept)(board) if lost == GROUND else joined(kept, lost)(board)

    return edit


def brief(key: str, text: str) -> Edit:
    """Ask for something else in the brief; `text` without its quotes."""
    return lambda board: replace(board, brief={**board.brief, key: f'"{text}"'})


def rating(reference: str, **cells: str) -> Edit:
    """Change cells in a part's row of the parts list; an empty text empties the cell."""

    def edit(board: Board) -> Board:
        row = {**board.ratings.get(reference, {}), **{key.replace("_", " "): t for key, t in cells.items()}}
        return replace(board, ratings={**board.ratings, reference: row})

    return edit


def all_of(*edits: Edit) -> Edit:
    """Make several edits that are one mistake."""

    def edit(board: Board) -> Board:
        for one in edits:
            board = one(board)
        return board

    return edit


def _each(references: Iterable[str], make: Callable[[str], Edit]) -> Edit:
    return all_of(*(make(reference) for reference in references))


def value_of_all(references: str, text: str) -> Edit:
    """Give several parts one value."""
    return _each(references.split(), lambda reference: value(reference, text))
