"""`pwmlint review`: calls the review, hands it to the reports and the gate, answers by exit status."""

from __future__ import annotations

import argparse
from collections.abc import Iterable, Sequence
from pathlib import Path
from typing import Any

from ...grammar.errors import NetlistError
from ..estimate import Method
from ..report import FORMATS, Gate
from ..report.delivery import DeliveryError, Target, deliver
from ..verdict import Level, Review
from .answer import EXIT, NOT_PASSED, PASSED, TROUBLE, tell
from .targets import add_targets, targets

STANDARD_INPUT = "-"
NEVER = "never"


def add(commands: argparse._SubParsersAction[Any]) -> None:  # pyright: ignore[reportPrivateUsage]
    """Add the command to the command line."""
    parser = commands.add_parser(
        "review",
        help="review netlists",
        description="Reviews netlists. Beside board.edf, board.brief.toml and board.parts.csv are found by "
        "themselves.",
        epilog=EXIT,
    )
    _add_options(parser)
    parser.set_defaults(command=_run, parser=parser)


def _add_options(parser: argparse.ArgumentParser) -> None:
    parser.add_argument("netlists", nargs="+", metavar="NETLIST", help="a netlist, or - for standard input")
    parser.add_argument("--brief", metavar="FILE", help="what the supply must do (TOML)")
    parser.add_argument("--parts-list", metavar="FILE", help="the ratings of the parts (CSV)")
    parser.add_argument(
        "--allow-include",
        action="append",
        default=[],
        type=Path,
        metavar="DIR",
        help="a folder besides the netlist's own from which it may include; may be repeated",
    )
    add_targets(parser, FORMATS)
    parser.add_argument(
        "--gate",
        choices=[*(level.value for level in Level), NEVER],
        default=Level.ERROR.value,
        help="the least level of a failed verdict that gives exit status 1 (error)",
    )
    parser.add_argument(
        "--worst-case",
        choices=[method.value for method in Method],
        default=Method.EXTREME.value,
        help="the analysis that decides: all parameters at their ends, root-sum-square, or draws (extreme)",
    )
    parser.add_argument(
        "--strict", action="store_true", help="let open verdicts, and those for a person to judge, do so too"
    )


def _run(options: argparse.Namespace) -> int:
    netlists: list[str] = options.netlists
    wanted = _targets(options)
    gate = Gate(None if options.gate == NEVER else Level(options.gate), options.strict)

    reviews = _review_each(netlists, options)
    written = [_deliver(target, reviews, gate) for target in wanted] if reviews else []
    if len(reviews) < len(netlists) or not all(written):
        return TROUBLE
    return PASSED if all(gate.passes(review) for review in reviews) else NOT_PASSED


def _targets(options: argparse.Namespace) -> list[Target]:
    """Return the reports that are asked for; wrong usage ends here."""
    parser: argparse.ArgumentParser = options.parser
    if options.netlists.count(STANDARD_INPUT) > 1:
        parser.error("standard input can be read once only: give - once")
    return targets(options, (*options.netlists, options.brief, options.parts_list))


def _review_each(netlists: Iterable[str], options: argparse.Namespace) -> list[Review]:
    """Return the reviews of the netlists that can be reviewed; tell of each that cannot."""
    from ..review import review

    reviews: list[Review] = []
    for netlist in netlists:
        try:
            reviews.append(
                review(
                    netlist,
                    brief=options.brief,
                    parts_list=options.parts_list,
                    allow_include=options.allow_include,
                    method=Method(options.worst_case),
                )
            )
        except NetlistError as error:
            tell(str(error))
    return reviews


def _deliver(target: Target, reviews: Sequence[Review], gate: Gate) -> bool:
    """Write one report and tell whether it could be written; the others are wanted all the same."""
    try:
        deliver(target, reviews, gate)
    except DeliveryError as error:
        tell(str(error))
        return False
    return True
