"""`pwmlint permit`: writes the deviations that would accept what a review finds, to complete and keep."""

from __future__ import annotations

import argparse

from ..report.delivery import STANDARD_OUTPUT
from .answer import PASSED, TROUBLE, is_taken, tell, write_toml
from .given import add_configuration
from .inputs import NETLIST, add_inputs
from .parser import Commands
from .review import review_each


def add(commands: Commands) -> None:
    """Add the command to the command line."""
    parser = commands.add_parser(
        "permit",
        examples=(("pwmlint permit board.edf >> board.deviations.toml", "then fill in reason and owner"),),
        help="write the deviations that would accept what a review finds",
        description="Writes a deviation (TOML) for every verdict that fails or is for a person to judge and "
        "is not accepted yet. Complete reason and owner and add the entries that you answer for to "
        "board.deviations.toml: an entry without a reason or an owner does not count.",
        epilog="exit status: 0 they were written, or there is nothing to accept, 2 they were not, "
        "130 interrupted",
    )
    parser.add_argument("netlist", metavar="NETLIST", help=NETLIST)
    parser.add_argument("--brief", metavar="FILE", help="what the supply must do (TOML)")
    parser.add_argument("--deviations", metavar="FILE", help="the verdicts that are accepted already (TOML)")
    add_inputs(parser)
    add_configuration(parser)
    parser.add_argument(
        "--strict", action=argparse.BooleanOptionalAction, help="write one for every open verdict, too"
    )
    parser.add_argument(
        "--output",
        metavar="FILE",
        default=STANDARD_OUTPUT,
        help="where they go (-); a file that is there already is not overwritten",
    )
    parser.set_defaults(command=_run, parser=parser)


def _run(options: argparse.Namespace) -> int:
    from ..permit import permit
    from .settle import settle_each

    if is_taken(options.output):
        return TROUBLE
    settled, _ = settle_each([options.netlist], options)
    reviewed, _ = review_each(settled)
    if not reviewed:
        return TROUBLE
    ((found, settings),) = reviewed
    text = permit(found.verdicts, open_too=settings.strict.value)
    if not text:
        tell("pwmlint: there is nothing to accept")
        return PASSED
    return write_toml(text, options.output)
