"""The sheet that the text report is written on: headings, wrapped paragraphs, aligned rows.

Every text that comes from a file passes through `Page.say`: control characters, bidirectional overrides and
terminal escapes are written out, and the console gets finished lines, never markup.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from itertools import zip_longest

from rich.cells import cell_len, chop_cells
from rich.console import Console
from rich.text import Text

from ...grammar.errors import no_command, printable
from .bar import Piece
from .glyphs import ASCII, Glyphs, spelt_out

# Stands for a space at which no line may break. `printable` never leaves one in a text from a file.
_GLUE = "\u00a0"

# Longer, a text from a file floods the terminal; the reports for programs have all of it.
_LONGEST_TEXT = 4_000

# A number stays on the line of its unit, and a range on one line.
_UNIT = re.compile(r"(?<=\d) (?=(?:[pnuµmkMG]?(?:V|A|ohm|Ω|F|H|s|Hz|W|J)|%|°C|degC|deg|K|ppm/K)(?!\w))")
_RANGE = re.compile(r" (?=\.\. )|(?<= \.\.) ")


class Page:
    """A console that lines are put on one after another.

    width:   the cells of a line, as many as the console's
    glyphs:  the characters to draw with; with `ASCII`, texts are spelt out in ASCII as well
    """

    def __init__(self, console: Console, glyphs: Glyphs) -> None:
        self.console = console
        self.glyphs = glyphs
        self.width = console.width

    def say(self, text: str) -> str:
        """Return a text from outside as it may be printed, at a length that may be read."""
        if len(text) > _LONGEST_TEXT:
            text = f"{text[:_LONGEST_TEXT]} ... and {len(text) - _LONGEST_TEXT:,} characters more"
        text = printable(text)
        return spelt_out(text) if self.glyphs is ASCII else text

    def line(self, *pieces: Piece) -> None:
        """Put one line of finished pieces."""
        text = Text.assemble(*pieces)
        text.rstrip()
        self.console.print(text, soft_wrap=True, highlight=False)

    def blank(self) -> None:
        """Put an empty line."""
        self.line()

    def heading(self, title: str, rule: str, notes: Sequence[Piece] = ()) -> None:
        """Put `title`, a rule of the character `rule`, and `notes` at the right end of the line."""
        title = no_command(self.say(title))
        shown = [(self.say(text), style) for text, style in notes]
        taken = cell_len(title) + sum(cell_len(text) for text, _ in shown)
        gap = " " if shown else ""
        length = max(2, self.width - taken - 1 - len(gap))
        self.line((title, "bold"), (f" {rule * length}{gap}", "dim"), *shown)

    def paragraph(self, text: str, indent: int, lead: Piece = ("", ""), style: str = "") -> None:
        """Put `text` wrapped at `indent`, with `lead` in the margin of its first line."""
        margin, margin_style = lead
        for line in wrap(self.say(text), self.width - indent):
            self.line((margin.ljust(indent), margin_style), (line, style))
            margin = ""

    def row(self, cells: Sequence[Piece], widths: Sequence[int], indent: int) -> None:
        """Put one row of a table, each cell wrapped in its own column, the first (numbers) flush right."""
        columns = [wrap(self.say(text), width) for (text, _), width in zip(cells, widths, strict=True)]
        for texts in zip_longest(*columns, fillvalue=""):
            pieces: list[Piece] = [(" " * (indent + widths[0] - cell_len(texts[0])) + texts[0], cells[0][1])]
            for text, width, (_, style) in zip(texts[1:], widths[1:], cells[1:], strict=True):
                pieces += [("  ", ""), (text, style), (" " * (width - cell_len(text)), "")]
            self.line(*pieces)


def wrap(text: str, width: int) -> list[str]:
    """Return `text` in lines of at most `width` cells; a longer word is cut where the line ends."""
    glued = _RANGE.sub(_GLUE, _UNIT.sub(_GLUE, text))
    lines = [""]
    for word in glued.split(" "):
        joined = f"{lines[-1]} {word}" if lines[-1] else word
        if cell_len(joined) <= width:
            lines[-1] = joined
            continue
        pieces = chop_cells(word, width)
        lines[-1:] = [*([lines[-1]] if lines[-1] else []), *pieces]
    return [no_command(line.replace(_GLUE, " ")) for line in lines]
