"""The comparison for the discussion of a change: Markdown, what the gate looks at first, the rest folded.

No line begins with a text from a file.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import TextIO

from ..compare.comparison import Change, Comparison, VerdictChange
from . import Gate
from .change_details import HEADINGS, asks, called, rows, summary, tells_nothing
from .change_words import ARROW, Line, counted, net_lines, part_lines
from .colour import shows_box_characters
from .glyphs import spelt_out
from .markdown_text import code, inline

# Hosts bound the length of a comment.
MOST = 25


def write(comparison: Comparison, stream: TextIO, gate: Gate) -> None:
    """Write the report to `stream`, in characters that the stream can show."""
    text = "\n".join(_report(comparison, gate)).rstrip("\n") + "\n"
    stream.write(text if shows_box_characters(stream) else spelt_out(text))


def _report(comparison: Comparison, gate: Gate) -> Iterator[str]:
    old, new = comparison.old.netlist, comparison.new.netlist
    yield from (f"### pwmlint: from {code(old)} to {code(new)}", "")
    answer = "passed" if comparison.passes(gate.level, strict=gate.strict) else "not passed"
    yield from (f"**Gate {gate}: {answer}**; verdicts: {summary(comparison)}", "")
    urgent = [
        one for change in (Change.NEW, Change.WORSE) for one in comparison.of(change) if asks(one.verdict)
    ]
    yield from _table(urgent)
    unchanged = comparison.unchanged
    yield from _lines("parts", part_lines(comparison.circuit), unchanged.parts)
    yield from _lines("nets", net_lines(comparison.circuit), unchanged.nets)
    rest = [one for one in comparison.verdicts if one not in urgent and not tells_nothing(one)]
    yield from _folded(f"More verdicts that changed: {len(rest)}", [_item(one) for one in rest])
    yield from _folded("Taken for granted", [inline(sentence) for sentence in comparison.assumptions])
    yield from _folded("Cautions", [inline(sentence) for sentence in comparison.new.cautions])


def _table(changes: Sequence[VerdictChange]) -> Iterator[str]:
    if not changes:
        return
    yield "| change | verdict | finding | rule | figures |"
    yield "| --- | --- | --- | --- | --- |"
    for one in changes[:MOST]:
        verdict = one.verdict
        figures = "; ".join(f"{label} {text}" for label, text in rows(one))
        cells = (one.change.value, called(verdict), inline(verdict.message), _named(one), _arrows(figures))
        yield f"| {' | '.join(cells)} |"
    yield from ("", *_beyond(len(changes)))


def _lines(title: str, lines: Sequence[Line], unchanged: int) -> Iterator[str]:
    told = ", ".join(filter(None, (counted(lines), f"{unchanged} unchanged")))
    if not lines:
        yield from (f"{title.capitalize()}: {told}", "")
        return
    yield from _folded(f"{title.capitalize()}: {told}", [_line(line) for line in lines])


def _line(line: Line) -> str:
    subject = ARROW.join(code(name) for name in line.subject.split(ARROW))
    return f"**{line.word}** {subject}: {_arrows('; '.join(line.texts))}"


def _arrows(text: str) -> str:
    """Return a text of our own making, what stands beside its arrows escaped."""
    return ARROW.join(inline(piece) for piece in text.split(ARROW))


def _item(change: VerdictChange) -> str:
    figures = "; ".join(f"{label} {text}" for label, text in rows(change))
    told = f" ({_arrows(figures)})" if figures else ""
    return f"**{HEADINGS[change.change]}** {_named(change)}: {inline(change.verdict.message)}{told}"


def _named(change: VerdictChange) -> str:
    return f"{code(change.verdict.rule)} {inline(change.verdict.subject)}".rstrip()


def _folded(title: str, items: Sequence[str]) -> Iterator[str]:
    """Yield a list that is folded until somebody asks for it; the blank lines let it be Markdown inside."""
    if not items:
        return
    yield from ("<details>", f"<summary>{title}</summary>", "")
    yield from (f"- {item}" for item in items[:MOST])
    yield from ("", *_beyond(len(items)), "</details>", "")


def _beyond(found: int) -> Iterator[str]:
    if found > MOST:
        yield from (f"and {found - MOST} more; `--format json` tells all", "")
