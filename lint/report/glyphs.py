"""The characters that a text report is drawn with, where the stream can show them and where it cannot."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TextIO

from .colour import shows_box_characters


@dataclass(frozen=True, slots=True)
class Glyphs:
    """One set of characters, each one cell wide.

    strong, light:     the rules beside the headings of a controller and of a topic
    inside, outside:   the scale of a bar between its limits and beyond them
    spread, nominal:   from minimum to maximum, and the nominal value on it
    low, high:         the limits; crossed: a limit that the spread runs through
    less, more:        the value lies farther out than the drawing reaches
    at_least, at_most: the signs before a limit written out
    """

    strong: str
    light: str
    inside: str
    outside: str
    spread: str
    nominal: str
    low: str
    high: str
    crossed: str
    less: str
    more: str
    at_least: str
    at_most: str


BOX = Glyphs("━", "─", "─", "╌", "━", "●", "├", "┤", "┿", "◀", "▶", "≥", "≤")

ASCII = Glyphs("=", "-", "-", ".", "=", "o", "|", "|", "|", "<", ">", ">=", "<=")

# What the figures of a verdict are written with, spelt for a stream that has only ASCII.
_SPELT_OUT = str.maketrans({"Ω": "ohm", "µ": "u", "°": "deg", "∞": "inf", "≥": ">=", "≤": "<=", "·": "*"})


def shown(text: str, stream: TextIO) -> str:
    """Return `text` with the end of a line, in characters that `stream` can carry."""
    return (text if shows_box_characters(stream) else spelt_out(text)) + "\n"


def spelt_out(text: str) -> str:
    r"""Return `text` in ASCII: the symbols of units by name, anything else as an escape, `\xe9` style."""
    return text.translate(_SPELT_OUT).encode("ascii", "backslashreplace").decode("ascii")
