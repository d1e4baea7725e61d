"""What a capacitor is made of, read from the words that people use for it. The words are data."""

from __future__ import annotations

import re
import tomllib
from functools import cache
from importlib.resources import files
from typing import Any

_BETWEEN_WORDS = re.compile(r"[^a-z0-9]+")
_MARKS = "marks"


def dielectric_of(*texts: str) -> str | None:
    """Return the name of the dielectric that the first telling text names, such as "aluminium", or None."""
    for text in texts:
        for name, table in _tables().items():
            if name != _MARKS and _has_word(text, table["words"]):
                return name
    return None


def is_polarised(*texts: str) -> bool:
    """Tell whether the texts make a capacitor a polarised one: by its dielectric, or by a word for it."""
    marks = _tables()[_MARKS]
    if any(_has_word(text, marks["unpolarised"]) for text in texts):
        return False
    if any(_has_word(text, marks["polarised"]) for text in texts):
        return True
    dielectric = dielectric_of(*texts)
    return dielectric is not None and bool(_tables()[dielectric].get("polarised", False))


def _has_word(text: str, words: list[str]) -> bool:
    plain = f" {_BETWEEN_WORDS.sub(' ', text.casefold()).strip()} "
    return any(f" {word} " in plain for word in words)


@cache
def _tables() -> dict[str, Any]:
    return tomllib.loads(files("pwmlint.lint").joinpath("dielectrics.toml").read_text(encoding="utf-8"))
