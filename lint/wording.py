"""Looking for words in texts that people and programs wrote: whole words, whatever stands between them."""

from __future__ import annotations

import re
from collections.abc import Iterable

_BETWEEN_WORDS = re.compile(r"[^a-z0-9]+")


def has_word(text: str, words: Iterable[str]) -> bool:
    """Tell whether a text has one of `words` (lower case, several parted by one blank) as a whole word."""
    plain = f" {_BETWEEN_WORDS.sub(' ', text.casefold()).strip()} "
    return any(f" {word} " in plain for word in words)
