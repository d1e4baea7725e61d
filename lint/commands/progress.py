"""Which of many netlists a run is at, for whoever waits at a terminal; a log has no use for it."""

from __future__ import annotations

import sys
from collections.abc import Iterator, Sequence
from typing import TypeVar

from ...grammar.errors import printable

_Item = TypeVar("_Item")

_CLEAR = "\r\x1b[K"
_LONGEST = 50


def with_progress(items: Sequence[tuple[str, _Item]]) -> Iterator[tuple[str, _Item]]:
    """Yield named items, and tell on standard error which one it is, where that is a terminal."""
    told = len(items) > 1 and sys.stderr.isatty()
    for number, (name, item) in enumerate(items, start=1):
        if told:
            _tell(f"{_CLEAR}{number} of {len(items)}: {printable(name)[-_LONGEST:]}")
        try:
            yield name, item
        finally:
            if told:
                _tell(_CLEAR)


def _tell(text: str) -> None:
    sys.stderr.write(text)
    sys.stderr.flush()
