"""What a text report is printed with, and how it ends: a stream's console, cautions, the gate's answer."""

from __future__ import annotations

import os
from collections.abc import Callable, Sequence
from io import StringIO
from typing import TextIO

from rich.cells import cell_len
from rich.console import Console

from . import Gate, colour, words
from .bar import Piece
from .glyphs import ASCII, BOX, Glyphs
from .page import Page

_INDENT = 11


def on_paper(stream: TextIO, draw: Callable[[Console, Glyphs], None]) -> None:
    """Let `draw` print a report, and write it to `stream` in colours and characters that it can show."""
    coloured = colour.wanted(stream, os.environ)
    sheet = StringIO()
    console = Console(
        file=sheet,
        width=colour.width(stream, os.environ),
        height=1,  # of no meaning here, but asked of the terminal at every line where it is not given
        color_system="standard" if coloured else None,
        force_terminal=coloured,
        force_jupyter=False,
        no_color=not coloured,
        legacy_windows=False,
    )
    draw(console, BOX if colour.shows_box_characters(stream) else ASCII)
    stream.write(sheet.getvalue())


def cautions(page: Page, sentences: Sequence[str]) -> None:
    """Print what the reader must be cautioned of."""
    if not sentences:
        return
    page.heading("cautions", page.glyphs.light)
    page.blank()
    for sentence in sentences:
        page.paragraph(sentence, _INDENT, ("  caution", "bold yellow"))
    page.blank()


def answer(page: Page, told: Sequence[Piece], gate: Gate, passed: bool) -> None:
    """Print the count and the gate's answer, on one line where they fit."""
    said: list[Piece] = [
        (f"gate {gate}: ", "bold"),
        (words.gate_answer(passed), "bold green" if passed else "bold red"),
    ]
    taken = sum(cell_len(text) for text, _ in (*told, *said))
    page.line((page.glyphs.strong * page.width, "dim"))
    if taken + 2 > page.width:
        if sum(cell_len(text) for text, _ in told) > page.width:
            page.paragraph("".join(text for text, _ in told), 0)
        else:
            page.line(*told)
        page.line(*said)
    else:
        page.line(*told, (" " * (page.width - taken), ""), *said)
