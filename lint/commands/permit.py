"""`pwmlint permit`: writes the deviations that would accept what a review finds, to complete and keep."""

from __future__ import annotations

import argparse
from typing import Any

from ...grammar.errors import NetlistError
from ..report.delivery import STANDARD_OUTPUT
from .answer import PASSED, TROUBLE, is_taken, tell, write_toml
from .inputs import NETLIST, add_inputs


def add(commands: argparse._SubParsersAction[Any]) -> None:  # pyright: ignore[reportPrivateUsage]
    """Add the command to the command line."""
    parser = commands.add_parser(
        "permit",
        help="write the deviations that would accept what a review finds",
        description="Writes a deviation (TOML) for every verdict that fails or is for a person to judge and "
        "is not accepted yet. Complete reason and owner and add the entries that you answer for to "
        "board.deviations.toml: an entry without a reason or an owner does not count.",
        epilog="exit status: 0 they were written, or there is nothing to accept, 2 they were not, "
        "130 interrupted",
    )
    parser.add_argument("netlist", metavar="NETLIST", help=NETLIST)
    parser.add_argument("--brief", metavar="FILE", help="what the supply must do (TOML)")
    add_inputs(parser)
    parser.add_argument("--deviations", metavar="FILE", help="the verdicts that are accepted already (TOML)")
    parser.add_argument("--strict", action="store_true", help="write one for every open verdict, too")
    parser.add_argument("--output", metavar="FILE", default=STANDARD_OUTPUT, help="where they go (-)")
    parser.set_defaults(command=_run)


def _run(options: argparse.Namespace) -> int:
    from ..permit import permit
    from ..review import review

    if is_taken(options.output):
        return TROUBLE
    try:
        found = review(
            options.netlist,
            brief=options.brief,
            parts_list=options.parts_list,
            deviations=options.deviations,
            allow_include=options.allow_include,
        )
    except NetlistError as error:
        tell(str(error))
        return TROUBLE
    text = permit(found.verdicts, open_too=options.strict)
    if not text:
        tell("pwmlint: there is nothing to accept")
        return PASSED
    return write_toml(text, options.output)
