"""The text report, laid out by the walk an engineer makes round the controller.

First the pins in their physical order, then the verdicts by topic with the worst first, then what could not
be checked and what would open it, then the cautions, the count and the gate's answer.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import TextIO

from rich.cells import cell_len
from rich.console import Console

from ..verdict import ControllerReview, Outcome, PinRow, Review, Verdict
from . import Gate, Unread
from .bar import Piece
from .findings import lead, name, topics
from .glyphs import BOX, Glyphs
from .page import Page
from .paper import answer, cautions, on_paper
from .ranking import acceptance, accepted, asks, unanswered
from .words import counts, grouped, not_reviewed, word

_LABEL = 12
_INDENT = 11
_MARGIN = 2

# The widest that the columns of the pin table become; the one of the states takes what the others leave.
_WIDEST = (4, 14, 20, 0, 14)
_STATE = 3


def write(reviews: Sequence[Review], stream: TextIO, gate: Gate) -> None:
    """Write the report of `reviews` to `stream`, in colours and characters that the stream can show."""
    on_paper(stream, lambda console, glyphs: render(reviews, console, gate, glyphs))


def render(reviews: Sequence[Review], console: Console, gate: Gate, glyphs: Glyphs = BOX) -> None:
    """Print the report of `reviews` on a rich console, as wide as the console is."""
    page = Page(console, glyphs)
    for number, review in enumerate(reviews):
        if number:
            page.blank()
        _title(page, review)
        for controller, verdicts in _sections(review):
            if controller is not None:
                _controller(page, controller)
            elif review.controllers:
                page.heading("the rest of the board", glyphs.strong)
                page.blank()
            topics(page, verdicts)
        _not_checked(page, unanswered(review))
        _accepted(page, review)
        _taken_for_granted(page, review)
        cautions(page, review.cautions)
        _not_applicable(page, review.verdicts)
        _switched_off(page, review)
        answer(page, counts(review.verdicts), gate.of(review), gate.passes(review))
    _not_reviewed(page, gate.unread)
    if len(reviews) > 1 or gate.unread:
        passed = sum(gate.passes(review) for review in reviews)
        told = [f"{len(reviews)} netlist{'s' * (len(reviews) > 1)}, {passed} passed"] if reviews else []
        told += [not_reviewed(gate.unread)] if gate.unread else []
        answer(page, [("; ".join(told), "bold")], gate, gate.passes_all(reviews))


def _not_reviewed(page: Page, unread: Sequence[Unread]) -> None:
    """Print the netlists that could not be reviewed, and why."""
    if not unread:
        return
    page.blank()
    page.heading("could not be reviewed", page.glyphs.strong)
    page.blank()
    for one in unread:
        page.paragraph(one.netlist, _INDENT, ("  error", "bold red"), "bold")
        for text, style in ((one.message, ""), (one.where and f"at {one.where}", "dim"), (one.remedy, "")):
            if text:
                page.paragraph(text, _INDENT, style=style)
        page.blank()


def _title(page: Page, review: Review) -> None:
    netlist = f"{review.netlist}  ({review.format})"
    rows = [
        ("netlist", netlist),
        ("title", review.name),
        ("brief", review.brief or "none"),
        ("parts list", review.parts_list or "none"),
        ("deviations", review.deviations or ""),
        ("settings", review.configuration or ""),
    ]
    for label, text in rows:
        if text:
            page.paragraph(text, _LABEL, (label, "dim"), "bold" if label == "netlist" else "")
    if any(verdict.measured and verdict.limit for verdict in review.verdicts):
        _legend(page)
    page.blank()


def _legend(page: Page) -> None:
    """Say once how a bar is read."""
    glyphs = page.glyphs
    limits: list[Piece] = [
        ("bars".ljust(_LABEL), "dim"),
        (f"{glyphs.low}{glyphs.inside * 2}{glyphs.high}", ""),
        (" limits   ", "dim"),
        (glyphs.spread * 2, "green"),
        (" minimum to maximum   ", "dim"),
    ]
    rest: list[Piece] = [
        (glyphs.nominal, "green"),
        (" nominal   ", "dim"),
        ("%", ""),
        (" margin", "dim"),
    ]
    if sum(cell_len(text) for text, _ in (*limits, *rest)) > page.width:
        page.line(*limits)
        limits = [(" " * _LABEL, "")]
    page.line(*limits, *rest)


def _sections(review: Review) -> Iterator[tuple[ControllerReview | None, list[Verdict]]]:
    """Yield each controller with its verdicts, then the rest; a lone controller takes them all."""
    if len(review.controllers) == 1:
        yield review.controllers[0], list(review.verdicts)
        return
    for controller in review.controllers:
        yield controller, [verdict for verdict in review.verdicts if verdict.controller == controller.part]
    known = {controller.part for controller in review.controllers}
    rest = [verdict for verdict in review.verdicts if verdict.controller not in known]
    if rest:
        yield None, rest


def _controller(page: Page, controller: ControllerReview) -> None:
    """Print one controller: what it is, where it stands, its pins."""
    model = f", {controller.model}" if controller.model else ""
    page.heading(controller.part, page.glyphs.strong, [(f"{controller.family} class{model}", "")])
    page.paragraph(f"at {controller.place}", 2, style="dim")
    page.blank()
    _pin_table(page, controller.pins)
    page.blank()
    _power_stage(page, controller)
    for sentence in controller.assumptions:
        page.paragraph(sentence, _INDENT, ("  assumed", "dim"))
    if controller.assumptions:
        page.blank()


def _power_stage(page: Page, controller: ControllerReview) -> None:
    """Print what the outputs drive, and what says so."""
    if not controller.power_stage and not controller.evidence:
        return
    page.paragraph(controller.power_stage or "not recognised", _INDENT, ("  drives", "dim"))
    for sentence in controller.evidence:
        page.paragraph(sentence, _INDENT, style="dim")
    page.blank()


def _pin_table(page: Page, pins: Sequence[PinRow]) -> None:
    header = ("pin", "function", "net", "voltage or state", "verdict")
    rows: list[tuple[Piece, ...]] = [tuple((title, "dim") for title in header)]
    for pin in sorted(pins, key=_pin_order):
        said = word(pin.outcome, pin.level) if pin.outcome else ("", "")
        rows.append(((pin.number, ""), (pin.function, ""), (pin.net, ""), (pin.state, ""), said))
    widths = [
        min(widest, max(cell_len(page.say(row[column][0])) for row in rows))
        for column, widest in enumerate(_WIDEST)
    ]
    widths[_STATE] = page.width - _MARGIN - sum(widths) - 2 * (len(widths) - 1)
    for row in rows:
        page.row(row, widths, indent=_MARGIN)


def _pin_order(pin: PinRow) -> tuple[bool, int, str]:
    """Return a key for the physical order: numbers by value, anything else after them."""
    return not pin.number.isdecimal(), len(pin.number), pin.number


def _not_checked(page: Page, verdicts: Sequence[Verdict]) -> None:
    """Print what could not be checked, grouped by the input that would open it."""
    groups: dict[tuple[str, ...], list[Verdict]] = {}
    for verdict in verdicts:
        groups.setdefault(verdict.needs, []).append(verdict)
    if not groups:
        return
    page.heading("could not be checked", page.glyphs.light, counts(verdicts))
    page.blank()
    for needs, group in sorted(groups.items(), key=lambda item: (not item[0], -len(item[1]), item[0])):
        mark = lead(group[0])
        for need in needs or ("no single input opens these; each says what stands in the way",):
            page.paragraph(need, _INDENT, mark, "bold")
            mark = ("  and", "dim")
        for verdict in group:
            page.paragraph(verdict.message, _INDENT)
            page.paragraph(name(verdict), _INDENT, style="dim")
        page.blank()


def _accepted(page: Page, review: Review) -> None:
    """Print what would stop a gate if somebody did not answer for it, and who does, why, and until when."""
    found = accepted(review)
    if not found:
        return
    page.heading("accepted", page.glyphs.light, counts(verdict for verdict, _ in found))
    page.blank()
    for verdict, deviation in found:
        page.paragraph(verdict.message, _INDENT, lead(verdict))
        page.paragraph(name(verdict), _INDENT, style="dim")
        page.paragraph(acceptance(deviation), _INDENT)
        page.paragraph(f"at {deviation.place}", _INDENT, style="dim")
        page.blank()


def _taken_for_granted(page: Page, review: Review) -> None:
    """Print once each what the verdicts in brief rest on; a verdict in full has its assumptions beside it."""
    said = [sentence for verdict in review.verdicts if asks(verdict) for sentence in verdict.assumptions]
    said += [sentence for controller in review.controllers for sentence in controller.assumptions]
    rest = [sentence for verdict in review.verdicts if not asks(verdict) for sentence in verdict.assumptions]
    unsaid = [sentence for sentence in dict.fromkeys(rest) if sentence not in set(said)]
    if not unsaid:
        return
    page.heading("taken for granted", page.glyphs.light)
    page.blank()
    for sentence in grouped(unsaid):
        page.paragraph(sentence, _INDENT, ("  assumed", "dim"))
    page.blank()


def _not_applicable(page: Page, verdicts: Sequence[Verdict]) -> None:
    rules = [verdict.rule for verdict in verdicts if verdict.outcome is Outcome.NOT_APPLICABLE]
    if rules:
        listed = ", ".join(dict.fromkeys(rules))
        page.paragraph(f"{len(rules)} not applicable: {listed}", 2, style="dim")
        page.blank()


def _switched_off(page: Page, review: Review) -> None:
    """Print which rules were not asked, and where that is written."""
    lines: dict[str, list[str]] = {}
    for off in review.switched_off:
        lines.setdefault(off.where, []).append(off.rule)
    for where, rules in lines.items():
        page.paragraph(f"{len(rules)} switched off by {where}: {', '.join(rules)}", 2, style="bold")
    if lines:
        page.blank()
