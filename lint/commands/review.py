"""`pwmlint review`: calls the review, hands it to the reports and the gate, answers by exit status."""

from __future__ import annotations

import argparse
from collections.abc import Iterable, Sequence
from dataclasses import replace
from functools import partial
from typing import TYPE_CHECKING

from ...grammar.errors import NetlistError
from ..estimate import Method
from ..found_files import STANDARD_INPUT
from ..report import FORMATS, GATES, Unread
from ..report.delivery import Target, deliver
from ..verdict import Review
from .answer import EXIT, NOT_PASSED, PASSED, TROUBLE, is_delivered, tell
from .given import add_configuration
from .inputs import NETLISTS, add_inputs, all_netlists
from .parser import Commands
from .progress import with_progress
from .targets import add_targets

if TYPE_CHECKING:
    from ..settings import Settings


def add(commands: Commands) -> None:
    """Add the command to the command line."""
    parser = commands.add_parser(
        "review",
        examples=(
            ("pwmlint review board.edf", "a report in colour; exit status 1 after an error"),
            ("pwmlint review boards --gate warning --strict", "every netlist in a folder, severely"),
            ("pwmlint review board.cir --format sarif --output board.sarif", "for a code host"),
        ),
        help="review netlists",
        description="Reviews netlists. Beside board.edf, board.brief.toml, board.parts.csv and "
        "board.deviations.toml are found by themselves; beside it or above it, up to the repository's root, "
        "pwmlint.toml is.",
        epilog=EXIT,
    )
    parser.add_argument("netlists", nargs="+", metavar="NETLIST", help=NETLISTS)
    add_options(parser)
    parser.set_defaults(command=_run, parser=parser)


def add_options(parser: argparse.ArgumentParser, formats: Iterable[str] = FORMATS) -> None:
    """Add what can be set. No option has a default here: what is not given may be configured."""
    parser.add_argument("--brief", metavar="FILE", help="what the supply must do (TOML)")
    parser.add_argument("--deviations", metavar="FILE", help="the verdicts that are accepted, and why (TOML)")
    add_inputs(parser)
    add_targets(parser, formats)
    parser.add_argument(
        "--gate",
        choices=GATES,
        help="the least level of a failed verdict that gives exit status 1 (error)",
    )
    parser.add_argument(
        "--worst-case",
        choices=[method.value for method in Method],
        help="the analysis that decides: all parameters at their ends, root-sum-square, or draws (extreme)",
    )
    parser.add_argument(
        "--strict",
        action=argparse.BooleanOptionalAction,
        help="let open verdicts, and those for a person to judge, do so too",
    )
    add_configuration(parser)


def _run(options: argparse.Namespace) -> int:
    if options.netlists.count(STANDARD_INPUT) > 1:
        options.parser.error("standard input can be read once only: give - once")
    from ..settings import gate_of
    from .settle import settle_each, targets_of

    netlists, unread = all_netlists(options.netlists)
    settled, unsettled = settle_each(netlists, options)
    try:
        targets = targets_of(settled, options)
    except NetlistError as error:
        tell(str(error))
        return TROUBLE
    reviewed, failed = review_each(settled)
    reviews = [review for review, _ in reviewed]
    gate = replace(gate_of(reviewed), unread=(*unread, *unsettled, *failed))
    if not reviews:  # why has been told already, and a reader at a terminal needs it once
        targets = [target for target in targets if target != Target()]
    written = [is_delivered(partial(deliver, target, reviews, gate)) for target in targets]
    if gate.unread or not all(written):
        return TROUBLE
    return PASSED if gate.passes_all(reviews) else NOT_PASSED


def review_each(
    settled: Sequence[tuple[str, Settings]],
) -> tuple[list[tuple[Review, Settings]], list[Unread]]:
    """Return the reviews of the netlists that can be reviewed, and the others, of each of which it tells."""
    from ..review import review

    reviewed: list[tuple[Review, Settings]] = []
    unread: list[Unread] = []
    for netlist, settings in with_progress(settled):
        try:
            found = review(
                netlist,
                brief=settings.brief.value,
                parts_list=settings.parts_list.value,
                deviations=settings.deviations.value,
                allow_include=settings.allow_include.value,
                method=settings.method,
                rules=settings.asked,
                policy=settings.policy,
            )
        except NetlistError as error:
            tell(str(error))
            unread.append(Unread.of(netlist, error))
        else:
            reviewed.append((found, settings))
    return reviewed, unread
