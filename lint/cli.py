"""The command line: reads the arguments, calls the review, hands it to the reports, answers by exit status.

0: the gate passed; 1: it did not; 2: there was something that could not be reviewed or written;
130: interrupted. Findings go to standard output, everything else to standard error.
"""

from __future__ import annotations

import argparse
import os
import sys
import traceback
from collections.abc import Iterable, Sequence
from contextlib import suppress
from difflib import get_close_matches
from importlib.metadata import version
from pathlib import Path
from typing import Any

from ..grammar.errors import NetlistError, printable
from .estimate import Method
from .report import FORMATS, Gate
from .report.delivery import STANDARD_OUTPUT, DeliveryError, Target, deliver, send
from .verdict import Level, Review

PASSED, NOT_PASSED, TROUBLE, INTERRUPTED = 0, 1, 2, 130

STANDARD_INPUT = "-"
NEVER = "never"
TRACEBACK = "PWMLINT_TRACEBACK"

_EXIT = """exit status: 0 the gate passed, 1 it did not, 2 something could not be reviewed or written,
130 interrupted"""


def main(arguments: Sequence[str] | None = None) -> int:
    """Run the command line and return the exit status. Raises SystemExit(2) on wrong usage, as argparse."""
    try:
        options = _parser().parse_args(arguments)
        return options.command(options)
    except KeyboardInterrupt:
        _tell("interrupted")
        return INTERRUPTED
    except DeliveryError as error:
        _tell(str(error))
        return TROUBLE
    except Exception as error:
        # The last resort: an error of ours is a line for the user, not a page.
        return _internal(error)


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


def _parser() -> argparse.ArgumentParser:
    parser = argparse.ArgumentParser(
        prog="pwmlint", description="Reviews the schematic netlist around a PWM controller.", epilog=_EXIT
    )
    parser.add_argument("--version", action="version", version=f"pwmlint {version('pwmlint')}")
    commands = parser.add_subparsers(title="commands", required=True, metavar="COMMAND")
    review = commands.add_parser(
        "review",
        help="review netlists",
        description="Reviews netlists. Beside board.edf, board.brief.toml and board.parts.csv are found by "
        "themselves.",
        epilog=_EXIT,
    )
    _add_review_options(review)
    review.set_defaults(command=_review, parser=review)
    rules = commands.add_parser("rules", help="list the rules, or tell all about one")
    rules.add_argument("id", nargs="?", metavar="ID", help="a rule, such as dead-time.range")
    rules.set_defaults(command=_rules)
    controllers = commands.add_parser(
        "controllers", help="list the controller families, or tell all about one"
    )
    controllers.add_argument("family", nargs="?", metavar="FAMILY", help="a family, such as 494")
    controllers.set_defaults(command=_controllers)
    return parser


def _add_review_options(parser: argparse.ArgumentParser) -> None:
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


def _review(options: argparse.Namespace) -> int:
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
    inputs = [path for path in (*options.netlists, options.brief, options.parts_list) if path]
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
    from .review import review

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
            _tell(str(error))
    return reviews


def _deliver(target: Target, reviews: Sequence[Review], gate: Gate) -> bool:
    """Write one report and tell whether it could be written; the others are wanted all the same."""
    try:
        deliver(target, reviews, gate)
    except DeliveryError as error:
        _tell(str(error))
        return False
    return True


def _rules(options: argparse.Namespace) -> int:
    from .report.reference import describe_rule, list_rules
    from .rule import load_rules

    rules = {one.id: one for one in load_rules()}
    if options.id is None:
        return _print(list_rules(list(rules.values())))
    if options.id not in rules:
        return _unknown("rule", options.id, rules)
    return _print(describe_rule(rules[options.id]))


def _controllers(options: argparse.Namespace) -> int:
    from .controllers import families, load
    from .report.reference import describe_family, list_families

    if options.family is None:
        return _print(list_families(load(family) for family in families()))
    if options.family not in families():
        return _unknown("controller family", options.family, families())
    return _print(describe_family(load(options.family)))


def _print(text: str) -> int:
    from .report.reference import shown

    send(lambda stream: stream.write(shown(text, stream)))
    return PASSED


def _unknown(kind: str, name: str, known: Iterable[str]) -> int:
    near = get_close_matches(name, known := list(known), n=3)
    _tell(f"pwmlint: there is no {kind} {printable(name)}\n  known:    {', '.join(near or known)}")
    return TROUBLE


def _internal(error: Exception) -> int:
    """Tell of an error that is ours, not the user's."""
    if os.environ.get(TRACEBACK):
        _tell("".join(traceback.format_exception(error)).rstrip())
    _tell(
        f"pwmlint: internal error: {type(error).__name__}: {printable(str(error))}\n"
        f"  remedy:   a fault of pwmlint: please report it, with the traceback that {TRACEBACK}=1 shows"
    )
    return TROUBLE


def _tell(message: str) -> None:
    """Print a message on standard error; where nobody listens any more there is nobody to tell."""
    with suppress(BrokenPipeError):
        print(message, file=sys.stderr)  # noqa: T201 - standard error is where messages go
