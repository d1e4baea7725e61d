"""What a Lark parser did not expect, and what it did, in the field's words."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from typing import cast

from lark import Token, UnexpectedToken


def offending(error: UnexpectedToken) -> Token:
    """Return the token that the parser did not expect."""
    return cast(Token, error.token)  # pyright: ignore[reportUnknownMemberType]  # lark leaves it untyped


def in_words(terminals: Iterable[str], words: Mapping[str, str]) -> str:
    """Return the expected `terminals` as a list in words; those without a word are left out."""
    return ", ".join(sorted({words[name] for name in terminals if name in words}))
