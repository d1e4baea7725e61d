"""Reference designators as parts lists write them: lists and ranges such as `R1-R4, R7`."""

from __future__ import annotations

import re

_MOST_IN_A_RANGE = 10_000

# A hyphen with blanks beside it, a dash, an ellipsis or a word: all are written as one hyphen first.
_MARK = re.compile(r" ?(?:[\N{EN DASH}\N{EM DASH}…]|\.\.\.?) ?| - ?|- | to ", re.IGNORECASE)
_RANGE = re.compile(
    r"(?P<prefix>[^\s-]*?[A-Za-z_])(?P<first>[0-9]{1,9})-(?P<again>[^\s-]*?)(?P<last>[0-9]{1,9})"
)

_NUMBERS = re.compile(r"[0-9]+(?:-[0-9]+)?")
_PREFIX = re.compile(r"[^\s-]*?[A-Za-z_](?=[0-9]+$)")


def expand(text: str) -> list[str]:
    """Return the reference designators that `text` lists: "R1-R3, C5" is ["R1", "R2", "R3", "C5"].

    Letters may be written once: "R1, 3-4" is ["R1", "R3", "R4"].

    A hyphen between different prefixes is part of a name ("A1-R3"). Raises ValueError, with a sentence, for a
    range that runs backwards or holds more than 10 000 parts.
    """
    items = re.split(r"[,;&\s]+", _MARK.sub("-", " ".join(text.split())))
    references: list[str] = []
    for item in items:
        if _NUMBERS.fullmatch(item) and references and (prefix := _PREFIX.match(references[-1])):
            item = prefix[0] + item
        if item and item.casefold() != "and":
            references += _one(item)
    return references


def _one(item: str) -> list[str]:
    match = _RANGE.fullmatch(item)
    if match is None or match["again"] not in ("", match["prefix"]):
        return [item]
    first, last = int(match["first"]), int(match["last"])
    if last < first:
        raise ValueError(f"the range {item} runs backwards")
    if last - first >= _MOST_IN_A_RANGE:
        raise ValueError(f"the range {item} holds more than {_MOST_IN_A_RANGE:,} parts")
    width = len(match["first"]) if match["first"].startswith("0") else 0
    return [f"{match['prefix']}{number:0{width}d}" for number in range(first, last + 1)]
