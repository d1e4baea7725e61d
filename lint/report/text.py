"""The text report, laid out by the walk an engineer makes round the controller.

First the pins in their physical order, then the verdicts by topic with the worst first, then what could not
be checked and what would open it, then the cautions, the count and the gate's answer. Colours follow IEC
60073 (red: act, yellow: abnormal, green: normal, blue: your action is needed) and never stand without a word.
"""

from __future__ import annotations

import os
from collections import Counter
from collections.abc import Iterable, Iterator, Sequence
from io import StringIO
from typing import TextIO

from rich.cells import cell_len
from rich.console import Console

from ..quantity import percent
from ..verdict import ControllerReview, Level, Outcome, PinRow, Review, Verdict
from . import Gate, colour
from .bar import Bar, Piece, bar, label_line
from .glyphs import ASCII, BOX, Glyphs
from .page import Page

# The order in which one walks round the board; a topic that is not named here follows in alphabetical order.
_WALK = (
    "connections",
    "supply",
    "reference",
    "oscillator",
    "dead time",
    "soft start",
    "output mode",
    "output stage",
    "error amplifier",
    "feedback",
    "current limit",
    "ratings",
    "safety",
)

_WORDS = {
    Outcome.FAIL: "fail",
    Outcome.REVIEW: "review",
    Outcome.OPEN: "open",
    Outcome.PASS: "pass",
    Outcome.INFORMATIONAL: "info",
    Outcome.NOT_APPLICABLE: "not applicable",
}

_COLOURS = {
    Outcome.FAIL: "bold yellow",
    Outcome.REVIEW: "bold blue",
    Outcome.OPEN: "bold blue",
    Outcome.PASS: "green",
    Outcome.INFORMATIONAL: "",
    Outcome.NOT_APPLICABLE: "dim",
}

_RANKS = (Outcome.FAIL, Outcome.REVIEW, Outcome.OPEN, Outcome.INFORMATIONAL, Outcome.PASS)

_INDENT = 10
_LABEL = 9
_SHORTEST_BAR = 14
_LONGEST_BAR = 60
_PLACES = 3


def write(reviews: Sequence[Review], stream: TextIO, gate: Gate) -> None:
    """Write the report of `reviews` to `stream`, in colours and characters that the stream can show."""
    coloured = colour.wanted(stream, os.environ)
    sheet = StringIO()
    console = Console(
        file=sheet,
        width=colour.width(stream, os.environ),
        color_system="standard" if coloured else None,
        force_terminal=coloured,
        force_jupyter=False,
        no_color=not coloured,
        legacy_windows=False,
    )
    render(reviews, console, gate, BOX if colour.shows_box_characters(stream) else ASCII)
    stream.write(sheet.getvalue())


def render(reviews: Sequence[Review], console: Console, gate: Gate, glyphs: Glyphs = BOX) -> None:
    """Print the report of `reviews` on a rich console."""
    page = Page(console, glyphs)
    for review in reviews:
        _heading(page, review)
        for controller, verdicts in _sections(review):
            if controller is not None:
                _controller(page, controller)
            elif review.controllers:
                page.heading("the rest of the board", "bold", glyphs.strong, [])
                page.blank()
            _topics(page, verdicts)
        _not_checked(page, review.verdicts)
        _taken_for_granted(page, review.verdicts)
        _cautions(page, review.cautions)
        _not_applicable(page, review.verdicts)
        _answer(page, review, gate)
    if len(reviews) > 1:
        _answer_to_all(page, reviews, gate)
