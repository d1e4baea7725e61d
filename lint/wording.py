"""Words in texts: looked for in what people and programs wrote, and told where there is a choice."""

from __future__ import annotations

import re
from collections.abc import Iterable, Sequence

_BETWEEN_WORDS = re.compile(r"[^a-z0-9]+")


def has_word(text: str, words: Iterable[str]) -> bool:
    """Tell whether a text has one of `words` (lower case, several parted by one blank) as a whole word."""
    plain = f" {_BETWEEN_WORDS.sub(' ', text.casefold()).strip()} "
    return any(f" {word} " in plain for word in words)


def one_of(words: Sequence[str]) -> str:
    """Return words to choose from: `a, b or c`."""
    return f"{', '.join(words[:-1])} or {words[-1]}" if len(words) > 1 else words[0]
