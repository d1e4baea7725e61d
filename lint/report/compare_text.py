"""The comparison as text: what changed in parts and nets, then what became of the verdicts."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import replace
from typing import TextIO

from rich.cells import cell_len
from rich.console import Console

from ..compare.comparison import Change, Comparison, VerdictChange
from ..quantity import Spread
from ..verdict import Review, Verdict
from . import Gate
from .bar import Piece, bar
from .change_details import HEADINGS, asks, rows, summary, tells_nothing
from .change_words import ADDED, REMOVED, Line, counted, net_lines, part_lines
from .details import places
from .findings import gauge, lead, name
from .glyphs import BOX, Glyphs
from .page import Page, wrap
from .paper import answer, cautions, on_paper
from .words import counts, word

# Lines of one section; beyond, a list is no longer read, and JSON has them all.
MOST = 100

_LABEL = 12
_INDENT = 13
_WIDEST_SUBJECT = 16
_FIELD = 9
_LONGEST_BAR = 60
_STYLES = {ADDED: "green", REMOVED: "red"}


def write(comparison: Comparison, stream: TextIO, gate: Gate) -> None:
    """Write the report to `stream`, in colours and characters that the stream can show."""
    on_paper(stream, lambda console, glyphs: render(comparison, console, gate, glyphs))


def render(comparison: Comparison, console: Console, gate: Gate, glyphs: Glyphs = BOX) -> None:
    """Print the report on a rich console, as wide as the console is."""
    page = Page(console, glyphs)
    _title(page, comparison)
    unchanged = comparison.unchanged
    _lines(page, "parts", part_lines(comparison.circuit), unchanged.parts)
    _lines(page, "nets", net_lines(comparison.circuit), unchanged.nets)
    _verdicts(page, comparison)
    for sentence in comparison.assumptions:
        page.paragraph(sentence, _INDENT, ("  assumed", "dim"))
    if comparison.assumptions:
        page.blank()
    cautions(page, comparison.new.cautions)
    told: list[Piece] = [(summary(comparison), "")]
    answer(page, told, gate, comparison.passes(gate.level, strict=gate.strict))


def _title(page: Page, comparison: Comparison) -> None:
    for label, review in (("old", comparison.old), ("new", comparison.new)):
        page.paragraph(f"{review.netlist}  ({review.format})", _LABEL, (label, "dim"), "bold")
        for text in _beside(review):
            page.paragraph(text, _LABEL)
    page.blank()


def _beside(review: Review) -> list[str]:
    """Return the title of a revision and what was read beside its netlist."""
    beside = [f"brief: {review.brief or 'none'}", f"parts list: {review.parts_list or 'none'}"]
    beside += [f"deviations: {review.deviations}"] if review.deviations else []
    beside += [f"settings: {review.configuration}"] if review.configuration else []
    return [*filter(None, [review.name]), ", ".join(beside)]


def _lines(page: Page, title: str, lines: Sequence[Line], unchanged: int) -> None:
    """Print one section of changes, each with its word in the margin and its subject before it."""
    told = ", ".join(filter(None, (counted(lines), f"{unchanged} unchanged")))
    page.heading(title, page.glyphs.strong, [(told, "")])
    page.blank()
    shown = lines[:MOST]
    column = min(_WIDEST_SUBJECT, max((cell_len(page.say(line.subject)) for line in shown), default=0))
    for line in shown:
        _line(page, line, column)
    if len(lines) > MOST:
        page.paragraph(f"and {len(lines) - MOST} more; --format json tells all", _INDENT, style="dim")
    if lines:
        page.blank()


def _line(page: Page, line: Line, column: int) -> None:
    """Print one change in three columns; a subject too long for its own has a line to itself."""
    subject = page.say(line.subject)
    indent = _INDENT + column + 2
    texts = [piece for text in line.texts for piece in wrap(page.say(text), page.width - indent)]
    mark: Piece = (f"  {line.word}".ljust(_INDENT), _STYLES.get(line.word, "yellow"))
    if cell_len(subject) > column:
        page.paragraph(line.subject, _INDENT, mark, "bold")
        mark, subject = (" " * _INDENT, ""), ""
    for text in texts:
        page.line(mark, (subject + " " * (column + 2 - cell_len(subject)), "bold"), (text, ""))
        mark, subject = (" " * _INDENT, ""), ""


def _verdicts(page: Page, comparison: Comparison) -> None:
    page.heading("verdicts", page.glyphs.strong, [(summary(comparison), "")])
    page.blank()
    for change, heading in HEADINGS.items():
        found = comparison.of(change)
        if not found:
            continue
        page.heading(heading, page.glyphs.light, counts(one.verdict for one in found))
        page.blank()
        for one in [one for one in found if not tells_nothing(one)][:MOST]:
            _verdict(page, one)
        _named_only(page, change, [one.verdict for one in found if tells_nothing(one)])


def _named_only(page: Page, change: Change, verdicts: Iterable[Verdict]) -> None:
    """Print the rules of verdicts that came or went and ask nothing."""
    rules = ", ".join(dict.fromkeys(verdict.rule for verdict in verdicts))
    if rules:
        asked = "asked of the new revision only" if change is Change.NEW else "asked of the old revision only"
        page.paragraph(f"{asked}, nothing to do: {rules}", 2, style="dim")
        page.blank()


def _verdict(page: Page, change: VerdictChange) -> None:
    verdict = change.verdict
    mark = ("  was", "dim") if change.change is Change.GONE else lead(verdict)
    urgent = change.change in (Change.NEW, Change.WORSE) and asks(verdict)
    page.paragraph(verdict.message, _INDENT, mark, "bold" if urgent else "")
    page.paragraph(name(verdict), _INDENT, style="dim")
    if urgent:
        _gauge(page, change)
    told = rows(change)
    if urgent:
        told += [("at", places(verdict.places)), ("remedy", verdict.remedy)]
    for label, text in told:
        if text:
            style = "bold" if label == "remedy" else "dim"
            page.paragraph(text, _INDENT + _FIELD, (" " * _INDENT + label, style))
    page.blank()


def _gauge(page: Page, change: VerdictChange) -> None:
    """Print the figures on a bar, above them those of the old revision where both have one limit."""
    new = change.verdict
    cells = min(_LONGEST_BAR, page.width - _INDENT)
    if new.measured is None or new.limit is None:
        return
    old = change.old.measured if change.old is not None and change.old.limit == new.limit else None
    drawn = bar(_both(old, new.measured), new.limit, cells)
    if drawn is None:
        return
    now = replace(drawn, spread=new.measured)
    bars = [("", now)] if old is None else [("was", replace(drawn, spread=old)), ("now", now)]
    gauge(page, bars, word(new.outcome, new.level)[1], _INDENT)


def _both(old: Spread | None, new: Spread) -> Spread:
    """Return the spread over both, so that they are drawn to one scale."""
    if old is None:
        return new
    return Spread(min(old.minimum, new.minimum), new.nominal, max(old.maximum, new.maximum), new.unit)
