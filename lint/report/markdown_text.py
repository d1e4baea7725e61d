"""Texts from files inside Markdown, where a name can be no markup, no link, no mention and no HTML.

Renderers differ in what they take for a link or a reference, so nothing is escaped that they might look
through: a word that is not plainly a word or a figure becomes a code span, which all of them leave alone.
"""

from __future__ import annotations

import re
from itertools import groupby

from ...grammar.errors import printable

_LONGEST = 600
_ELLIPSIS = "..."

# A word or figure, without the punctuation of a sentence round it.
_PLAIN = re.compile(r"[\w+\-±./%×·=°Ωµ≥≤∞–,;()']*")
_BEFORE, _AFTER = "(\"'", "\"'):.,;?"

# What hosts and renderers make links of all the same (sites, numbers of tickets and of changes), or marks.
_LINKED = re.compile(r"\w\.[^\W\d]|\w//|%\w|[A-Z]-\d|[0-9a-f]{7}|==|\+\+", re.IGNORECASE)

# What would end a code span or the cell of a table is written as an escape, as `printable` does.
_IN_CODE = str.maketrans({"`": r"\x60", "|": r"\x7c"})


def inline(text: str) -> str:
    """Return a sentence, suspicious words in it as code."""
    words = cut(printable(text)).split(" ")
    pieces: list[str] = []
    for plain, run in groupby(words, key=_is_plain):
        joined = " ".join(run)
        pieces.append(joined.replace("_", r"\_") if plain else code(joined))
    return " ".join(pieces)


def code(text: str) -> str:
    """Return a text as a code span; one of blanks only, or none, as it is."""
    text = cut(printable(text)).translate(_IN_CODE)
    return f"`{text}`" if text.strip() else text


def cut(text: str) -> str:
    """Return a text that is no longer than a line or two of a table can be."""
    return text if len(text) <= _LONGEST else text[: _LONGEST - len(_ELLIPSIS)] + _ELLIPSIS


def _is_plain(word: str) -> bool:
    bare = word.lstrip(_BEFORE).rstrip(_AFTER)
    return _PLAIN.fullmatch(bare) is not None and _LINKED.search(word) is None
