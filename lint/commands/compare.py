"""`pwmlint compare`: what changed between two revisions, and a gate on what is new or worse."""

from __future__ import annotations

import argparse
from pathlib import Path
from typing import TYPE_CHECKING, Any

from ...grammar.errors import NetlistError
from ..estimate import Method
from ..report import COMPARISON_FORMATS, Gate
from ..report.delivery import DeliveryError, Target, deliver_comparison
from ..verdict import Level
from .answer import EXIT, NOT_PASSED, PASSED, TROUBLE, tell
from .targets import add_targets, targets

if TYPE_CHECKING:
    from ..compare.comparison import Comparison

_STANDARD_INPUT = "-"
_NEVER = "never"


def add(commands: argparse._SubParsersAction[Any]) -> None:  # pyright: ignore[reportPrivateUsage]
    """Add the command to the command line."""
    parser = commands.add_parser(
        "compare",
        help="tell what changed between two revisions of a netlist",
        description="Tells what changed between two revisions of a netlist, of one format or of two: in "
        "parts, nets and verdicts. The gate stops at what is new or worse. A revision is a file, - for "
        "standard input, or REV:path, a file as a git revision had it, such as HEAD~1:boards/fan.cir; brief, "
        "parts list and included files are then those of that revision.",
        epilog=EXIT,
    )
    parser.add_argument("old", metavar="OLD", help="the netlist as it was")
    parser.add_argument("new", metavar="NEW", help="the netlist as it is now")
    parser.add_argument("--brief", metavar="FILE", help="what the supply must do (TOML), for both revisions")
    parser.add_argument("--parts-list", metavar="FILE", help="ratings of the parts (CSV), for both revisions")
    parser.add_argument(
        "--allow-include",
        action="append",
        default=[],
        type=Path,
        metavar="DIR",
        help="a folder besides the netlist's own from which it may include; may be repeated",
    )
    add_targets(parser, COMPARISON_FORMATS)
    parser.add_argument(
        "--gate",
        choices=[*(level.value for level in Level), _NEVER],
        default=Level.ERROR.value,
        help="the least level of a new or worse verdict that gives exit status 1 (error)",
    )
    parser.add_argument(
        "--worst-case",
        choices=[method.value for method in Method],
        default=Method.EXTREME.value,
        help="the analysis that decides: all parameters at their ends, root-sum-square, or draws (extreme)",
    )
    parser.add_argument(
        "--strict",
        action="store_true",
        help="let open verdicts, and those for a person to judge, do so too where they are new or worse",
    )
    parser.set_defaults(command=_run, parser=parser)


def _run(options: argparse.Namespace) -> int:
    parser: argparse.ArgumentParser = options.parser
    if options.old == options.new == _STANDARD_INPUT:
        parser.error("standard input can be read once only: give - once")
    wanted = targets(options, (options.old, options.new, options.brief, options.parts_list))
    gate = Gate(None if options.gate == _NEVER else Level(options.gate), options.strict)
    try:
        comparison = _compare(options)
    except NetlistError as error:
        tell(str(error))
        return TROUBLE
    written = [_deliver(target, comparison, gate) for target in wanted]
    if not all(written):
        return TROUBLE
    return PASSED if comparison.passes(gate.level, strict=gate.strict) else NOT_PASSED


def _compare(options: argparse.Namespace) -> Comparison:
    from ..compare import compare

    return compare(
        options.old,
        options.new,
        brief=options.brief,
        parts_list=options.parts_list,
        allow_include=options.allow_include,
        method=Method(options.worst_case),
    )


def _deliver(target: Target, comparison: Comparison, gate: Gate) -> bool:
    """Write one report and tell whether it could be written; the others are wanted all the same."""
    try:
        deliver_comparison(target, comparison, gate)
    except DeliveryError as error:
        tell(str(error))
        return False
    return True
