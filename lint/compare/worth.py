"""What a part is worth, so far as both revisions can tell it alike."""

from __future__ import annotations

import re

from ...grammar.netlist import Part
from .side import Side

_DIGITS = 9  # two spellings of one value differ in the rounding of doubles
_NEITHER = re.compile(r"[\W_]+")


def worth(side: Side, part: Part) -> str:
    """Return the value of a part in SI units, else the words that name its type, as one comparable text."""
    value = side.reader.written(part)
    if value is not None:
        return f"{value.number:.{_DIGITS}g}"
    return plain(part.value or part.model)


def plain(text: str) -> str:
    """Return a name by its letters and digits alone, case folded: exporters change the rest."""
    return _NEITHER.sub("", text).casefold() or text.strip()
