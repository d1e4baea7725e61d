"""What a capacitor is made of, read from the words that people use for it. The words are data."""

from __future__ import annotations

import tomllib
from functools import cache
from importlib.resources import files
from typing import Any

from .wording import has_word

_MARKS = "marks"


def dielectric_of(*texts: str) -> str | None:
    """Return the name of the dielectric that the first telling text names, such as "aluminium", or None."""
    for text in texts:
        for name, table in _tables().items():
            if name != _MARKS and has_word(text, table["words"]):
                return name
    return None


def is_polarised(*texts: str) -> bool:
    """Tell whether the texts make a capacitor a polarised one: by its dielectric, or by a word for it."""
    marks = _tables()[_MARKS]
    if any(has_word(text, marks["unpolarised"]) for text in texts):
        return False
    if any(has_word(text, marks["polarised"]) for text in texts):
        return True
    dielectric = dielectric_of(*texts)
    return dielectric is not None and bool(_tables()[dielectric].get("polarised", False))


@cache
def _tables() -> dict[str, Any]:
    return tomllib.loads(files("pwmlint.lint").joinpath("dielectrics.toml").read_text(encoding="utf-8"))
