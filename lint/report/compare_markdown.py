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
from .markdown_parts import folded, named, table, write_lines
from .markdown_text import code, inline
from .words import gate_answer


def write(comparison: Comparison, stream: TextIO, gate: Gate) -> None:
    """Write the report to `stream`, in characters that the stream can show."""
    write_lines(_report(comparison, gate), stream)


def _report(comparison: Comparison, gate: Gate) -> Iterator[str]:
    old, new = comparison.old.netlist, comparison.new.netlist
    yield from (f"### pwmlint: from {code(old)} to {code(new)}", "")
    answer = gate_answer(comparison.passes(gate.level, strict=gate.strict))
    yield from (f"**Gate {gate}: {answer}**; verdicts: {summary(comparison)}", "")
    urgent = [
        one for change in (Change.NEW, Change.WORSE) for one in comparison.of(change) if asks(one.verdict)
    ]
    yield from table(("change", "verdict", "finding", "rule", "figures"), [_row(one) for one in urgent])
    unchanged = comparison.unchanged
    yield from _lines("parts", part_lines(comparison.circuit), unchanged.parts)
    yield from _lines("nets", net_lines(comparison.circuit), unchanged.nets)
    rest = [one for one in comparison.verdicts if one not in urgent and not tells_nothing(one)]
    yield from _folded(f"More verdicts that changed: {len(rest)}", [_item(one) for one in rest])
    yield from _folded("Taken for granted", [inline(sentence) for sentence in comparison.assumptions])
    yield from _folded("Cautions", [inline(sentence) for sentence in comparison.new.cautions])


def _row(change: VerdictChange) -> tuple[str, ...]:
    verdict = change.verdict
    return change.change.value, called(verdict), inline(verdict.message), named(verdict), _figures(change)


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
    verdict, figures = change.verdict, _figures(change)
    told = f" ({figures})" if figures else ""
    return f"**{HEADINGS[change.change]}** {named(verdict)}: {inline(verdict.message)}{told}"


def _figures(change: VerdictChange) -> str:
    return _arrows("; ".join(f"{label} {text}" for label, text in rows(change)))


def _folded(title: str, items: Sequence[str]) -> Iterator[str]:
    return folded(title, [(f"- {item}",) for item in items])
