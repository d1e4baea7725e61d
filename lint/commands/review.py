"""`pwmlint review`: calls the review, hands it to the reports and the gate, answers by exit status."""

from __future__ import annotations

import argparse
import os
from collections.abc import Iterable, Sequence
from typing import Any

from ...grammar.errors import NetlistError
from ..estimate import Method
from ..report import FORMATS, Gate
from ..report.delivery import STANDARD_OUTPUT, DeliveryError, Target, deliver
from ..verdict import Level, Review
from .answer import EXIT, NOT_PASSED, PASSED, TROUBLE, tell
from .inputs import NETLIST, add_inputs

STANDARD_INPUT = "-"
NEVER = "never"


def add(commands: argparse._SubParsersAction[Any]) -> None:  # pyright: ignore[reportPrivateUsage]
    """Add the command to the command line."""
    parser = commands.add_parser(
        "review",
        help="review netlists",
        description="Reviews netlists. Beside board.edf, board.brief.toml, board.parts.csv and "
        "board.deviations.toml are found by themselves.",
        epilog=EXIT,
    )
    _add_options(parser)
    parser.set_defaults(command=_run, parser=parser)


class _Pairs(argparse.Action):
    """Collects --format and --output into pairs, in the order given: one completes what the other began."""

    def __call__(
        self,
        parser: argparse.ArgumentParser,
        namespace: argparse.Namespace,
        values: str | Sequence[Any] | None,
        option_string: str | None = None,
    ) -> None:
        pairs: list[dict[str, Any]] = getattr(namespace, self.dest) or [{}]
        if self.const in pairs[-1]:
            pairs.append({})
        pairs[-1][self.const] = values
        setattr(namespace, self.dest, pairs)


def _add_options(parser: argparse.ArgumentParser) -> None:
    parser.add_argument("netlists", nargs="+", metavar="NETLIST", help=NETLIST)
    parser.add_argument("--brief", metavar="FILE", help="what the supply must do (TOML)")
    parser.add_argument("--deviations", metavar="FILE", help="the verdicts that are accepted, and why (TOML)")
    add_inputs(parser)
    parser.add_argument(
        "--format",
        action=_Pairs,
        dest="pairs",
        const="format",
        choices=list(FORMATS),
        help="the report's format (text); repeat --format and --output in pairs for several reports",
    )
    parser.add_argument(
        "--output",
        action=_Pairs,
        dest="pairs",
        const="output",
        metavar="FILE",
        help="where the report goes (-)",
    )
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
    targets = _targets(options)
    gate = Gate(None if options.gate == NEVER else Level(options.gate), options.strict)

    reviews = _review_each(netlists, options)
    written = [_deliver(target, reviews, gate) for target in targets] if reviews else []
    if len(reviews) < len(netlists) or not all(written):
        return TROUBLE
    return PASSED if all(gate.passes(review) for review in reviews) else NOT_PASSED


def _targets(options: argparse.Namespace) -> list[Target]:
    """Return the reports that are asked for; wrong usage ends here."""
    parser: argparse.ArgumentParser = options.parser
    if options.netlists.count(STANDARD_INPUT) > 1:
        parser.error("standard input can be read once only: give - once")
    pairs: list[dict[str, str]] = options.pairs or [{}]
    targets = [Target(**pair) for pair in pairs]
    outputs = [target.output for target in targets]
    inputs = [
        path for path in (*options.netlists, options.brief, options.parts_list, options.deviations) if path
    ]
    for output in outputs:
        where = "standard output" if output == STANDARD_OUTPUT else output
        if outputs.count(output) > 1:
            parser.error(f"two reports would go to {where}: give each --format its own --output")
        if output != STANDARD_OUTPUT and any(_same_file(output, path) for path in inputs):
            parser.error(f"the report would overwrite what is reviewed: {where}")
    return targets


def _same_file(one: str, other: str) -> bool:
    """Tell whether two paths lead to one file; what does not exist yet is no other's file."""
    return os.path.exists(one) and os.path.exists(other) and os.path.samefile(one, other)


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
                    deviations=options.deviations,
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
