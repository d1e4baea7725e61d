"""`pwmlint brief`: writes a brief with what the netlist already tells, to fill in."""

from __future__ import annotations

import argparse

from ...grammar.errors import NetlistError
from ..report.delivery import STANDARD_OUTPUT
from .answer import TROUBLE, is_taken, tell, write_toml
from .inputs import NETLIST, add_inputs
from .parser import Commands


def add(commands: Commands) -> None:
    """Add the command to the command line."""
    parser = commands.add_parser(
        "brief",
        examples=(("pwmlint brief board.edf --output board.brief.toml", "begin, then fill in"),),
        help="begin a brief for a netlist",
        description="Writes a brief (TOML) with what the netlist already tells, and every key explained. "
        "What it states changes no verdict; the rest is for you to fill in.",
        epilog="exit status: 0 it was written, 2 it was not, 130 interrupted",
    )
    parser.add_argument("netlist", metavar="NETLIST", help=NETLIST)
    add_inputs(parser)
    parser.add_argument(
        "--output",
        metavar="FILE",
        default=STANDARD_OUTPUT,
        help="where the brief goes (-); a file that is there already is not overwritten",
    )
    parser.set_defaults(command=_run)


def _run(options: argparse.Namespace) -> int:
    from ..brief_writer import brief_text
    from ..found_files import PARTS_LIST, beside
    from ..parts_list import read_parts_list
    from ..review import read_netlist

    if is_taken(options.output):
        return TROUBLE
    try:
        parts_path = options.parts_list or beside(options.netlist, PARTS_LIST)
        listed = read_parts_list(parts_path) if parts_path is not None else None
        text = brief_text(read_netlist(options.netlist, options.allow_include), listed)
    except NetlistError as error:
        tell(str(error))
        return TROUBLE
    return write_toml(text, options.output)
