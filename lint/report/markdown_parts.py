"""What the reports in Markdown are made of: tables and folded lists, each cut to what hosts show."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from typing import TextIO

from ..verdict import Verdict
from .glyphs import shown
from .markdown_text import code, inline

# Hosts bound the length of a comment.
MOST = 25


def write_lines(lines: Iterable[str], stream: TextIO) -> None:
    """Write the lines of a report, in characters that the stream can show."""
    stream.write(shown("\n".join(lines).rstrip("\n"), stream))


def named(verdict: Verdict) -> str:
    """Return the rule and the subject of a verdict."""
    return f"{code(verdict.rule)} {inline(verdict.subject)}".rstrip()


def table(headings: Sequence[str], rows: Sequence[Sequence[str]]) -> Iterator[str]:
    """Yield a table; none where there are no rows."""
    if not rows:
        return
    for cells in (headings, ["---"] * len(headings), *rows[:MOST]):
        yield f"| {' | '.join(cells)} |"
    yield from ("", *_beyond(len(rows)))


def folded(title: str, items: Sequence[Iterable[str]]) -> Iterator[str]:
    """Yield a list that is folded until somebody asks for it, none where it has no items.

    items: each the lines of one
    """
    if not items:
        return
    # The blank lines let what is folded be Markdown.
    yield from ("<details>", f"<summary>{title}</summary>", "")
    for item in items[:MOST]:
        yield from item
    yield from ("", *_beyond(len(items)), "</details>", "")


def _beyond(found: int) -> Iterator[str]:
    """Yield how many are not shown."""
    if found > MOST:
        yield from (f"and {found - MOST} more; `--format json` tells all", "")
