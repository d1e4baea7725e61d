"""Parts that may stand between a primary and a secondary circuit; their words and numbers are data."""

from __future__ import annotations

import re
import tomllib
from functools import cache
from importlib.resources import files
from typing import Any

from .wording import has_word

_LETTERS = re.compile(r"[A-Za-z]+")


def is_opto_coupler(reference: str, *texts: str) -> bool:
    """Tell whether a circuit is an opto-coupler or another isolator, by its reference or its texts."""
    table = _tables()["opto-coupler"]
    letters = _LETTERS.match(reference.rpartition("/")[2])
    if letters is not None and letters.group().upper() in table["references"]:
        return True
    numbers = re.compile(rf"(?<![0-9])(?:{'|'.join(table['numbers'])})(?![0-9])", re.IGNORECASE)
    return any(has_word(text, table["words"]) or numbers.search(text) is not None for text in texts)


def is_safety_capacitor(*texts: str) -> bool:
    """Tell whether a text marks a capacitor as of class Y (IEC 60384-14)."""
    return any(has_word(text, _tables()["safety-capacitor"]["words"]) for text in texts)


@cache
def _tables() -> dict[str, Any]:
    return tomllib.loads(files("pwmlint.lint").joinpath("isolators.toml").read_text(encoding="utf-8"))
