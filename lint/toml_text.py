"""Names and texts as TOML writes them: whatever a netlist calls a net, the file stays readable."""

from __future__ import annotations

import re

_BARE_KEY = re.compile(r"[A-Za-z0-9_-]+")
_MARKS = {'"': '\\"', "\\": "\\\\"}


def toml_key(name: str) -> str:
    """Return a net or a reference designator as a TOML key, quoted where a path or a mark demands it."""
    return name if _BARE_KEY.fullmatch(name) else toml_text(name)


def toml_text(text: str) -> str:
    """Return a text in quotes, what could steer a terminal as an escape.

    Half a surrogate pair has no TOML: see `is_statable`.
    """
    return f'"{"".join(map(_written, text))}"'


def is_statable(text: str) -> bool:
    """Tell whether TOML can hold `text`: it has no half surrogate pairs, not even escaped."""
    return not any("\ud800" <= character <= "\udfff" for character in text)


def in_ascii(text: str) -> str:
    """Return a TOML document in ASCII. Other characters stand in texts and comments, and become escapes."""
    return "".join(c if c.isascii() else _escape(c) for c in text)


def _written(character: str) -> str:
    if character in _MARKS:
        return _MARKS[character]
    return character if character.isprintable() else _escape(character)


def _escape(character: str) -> str:
    code = ord(character)
    return f"\\u{code:04x}" if code < 0x10000 else f"\\U{code:08x}"
