"""The verdicts of a text report, by topic: in full where something is asked of the reader, else in brief."""

from __future__ import annotations

from collections.abc import Sequence

from rich.cells import cell_len

from ...grammar.errors import no_command
from ..quantity import figure
from ..verdict import TOPICS, Outcome, Verdict
from .bar import Bar, Piece, bar, label_line
from .details import details, margin
from .page import Page
from .ranking import asks
from .words import badness, counts, word, word_of

_INDENT = 11
_LABEL = 9
_SHORTEST_BAR, _LONGEST_BAR = 14, 60

# Between the columns of a small bar: rule, low limit, bar, high limit, margin.
_GAPS = 2 + 1 + 1 + 2

_ELSEWHERE = (Outcome.OPEN, Outcome.NOT_APPLICABLE)


def topics(page: Page, verdicts: Sequence[Verdict]) -> None:
    """Print the verdicts by topic, worst first; those open, accepted or not applicable stand elsewhere."""
    for topic in sorted({verdict.topic for verdict in verdicts}, key=_walk):
        about = [verdict for verdict in verdicts if verdict.topic == topic]
        shown = [one for one in about if one.outcome not in _ELSEWHERE and one.deviation is None]
        if not shown:
            continue
        page.heading(topic or "other", page.glyphs.light, counts(about))
        page.blank()
        in_full = sorted((verdict for verdict in shown if asks(verdict)), key=badness)
        in_brief = sorted((verdict for verdict in shown if not asks(verdict)), key=badness)
        for verdict in in_full:
            _full(page, verdict)
            page.blank()
        _brief(page, in_brief)
        if in_brief:
            page.blank()


def name(verdict: Verdict) -> str:
    """Return the rule and its subject in one text."""
    return f"{verdict.rule}  {verdict.subject}".rstrip()


def lead(verdict: Verdict) -> Piece:
    """Return the word of a verdict as it stands in the margin."""
    text, style = word_of(verdict)
    return f"  {text}", style


def _walk(topic: str) -> tuple[int, str]:
    return (TOPICS.index(topic) if topic in TOPICS else len(TOPICS), topic)


def _full(page: Page, verdict: Verdict) -> None:
    page.paragraph(verdict.message, _INDENT, lead(verdict), "bold")
    page.paragraph(name(verdict), _INDENT, style="dim")
    drawn = _bar(verdict, min(_LONGEST_BAR, page.width - _INDENT))
    if drawn is not None:
        gauge(page, [("", drawn)], word(verdict.outcome, verdict.level)[1], _INDENT)
    for label, text in details(verdict):
        if text:
            label_style = "bold" if label == "remedy" else "dim"
            page.paragraph(text, _INDENT + _LABEL, (" " * _INDENT + label, label_style))


def gauge(page: Page, bars: Sequence[tuple[str, Bar]], outside: str, indent: int) -> None:
    """Print bars of one scale, each with its label: the limits above them, the last one's values below."""
    last = bars[-1][1]
    margin = " " * indent
    room = page.width - indent
    page.blank()
    page.line((margin + page.say(label_line(last.limits(page.glyphs), room)), "dim"))
    for label, drawn in bars:
        page.line((f"{label:>{indent - 1}} ", "dim" if label else ""), *drawn.draw(page.glyphs, outside))
    page.line((margin + page.say(label_line(last.values(), room)), ""))
    page.blank()


def _bar(verdict: Verdict, cells: int) -> Bar | None:
    if verdict.measured is None or verdict.limit is None:
        return None
    return bar(verdict.measured, verdict.limit, cells)


def _brief(page: Page, verdicts: Sequence[Verdict]) -> None:
    """Print verdicts that ask nothing: the message, then the rule and a small bar, all bars in line."""
    barred = [verdict for verdict in verdicts if _bar(verdict, _SHORTEST_BAR) is not None]
    names, lows, highs, margins = (
        max((cell_len(page.say(text(verdict))) for verdict in barred), default=0)
        for text in (name, _low, _high, margin)
    )
    cells = page.width - _INDENT - names - lows - highs - margins - _GAPS
    apart = cells < _SHORTEST_BAR
    if apart:
        names, cells = 0, min(_LONGEST_BAR, cells + names)
    for verdict in verdicts:
        page.paragraph(verdict.message, _INDENT, lead(verdict))
        drawn = _bar(verdict, cells)
        if drawn is None or apart:
            page.paragraph(name(verdict), _INDENT, style="dim")
        if drawn is not None:
            title = "" if apart else no_command(page.say(name(verdict)))
            page.line(
                (" " * _INDENT + _pad(title, names), "dim"),
                (f"  {page.say(_low(verdict)):>{lows}} ", "dim"),
                *drawn.draw(page.glyphs, "red"),
                (f" {page.say(_high(verdict)):<{highs}}", "dim"),
                (f"  {page.say(margin(verdict)):>{margins}}", ""),
            )


def _low(verdict: Verdict) -> str:
    limit = verdict.limit
    return "" if limit is None or limit.minimum is None else figure(limit.minimum, limit.unit)


def _high(verdict: Verdict) -> str:
    limit = verdict.limit
    return "" if limit is None or limit.maximum is None else figure(limit.maximum, limit.unit)


def _pad(text: str, width: int) -> str:
    return text + " " * (width - cell_len(text))
