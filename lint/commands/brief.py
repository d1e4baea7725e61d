"""`pwmlint brief`: writes a brief with what the netlist already tells, to fill in."""

from __future__ import annotations

import argparse
from pathlib import Path
from typing import Any, TextIO

from ...grammar.errors import NetlistError, printable
from ..report.colour import shows_box_characters
from ..report.delivery import STANDARD_OUTPUT, send
from .answer import PASSED, TROUBLE, tell
from .inputs import NETLIST, add_inputs


def add(commands: argparse._SubParsersAction[Any]) -> None:  # pyright: ignore[reportPrivateUsage]
    """Add the command to the command line."""
    parser = commands.add_parser(
        "brief",
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
    from ..parts_list import read_parts_list
    from ..review import beside, read_netlist
    from ..toml_text import in_ascii

    # A device or a named pipe holds nothing that could be lost.
    if options.output != STANDARD_OUTPUT and Path(options.output).is_file():
        tell(
            f"{printable(options.output)}: this file is there already, and is not overwritten\n"
            "  remedy:   remove it first, or name another with --output"
        )
        return TROUBLE
    try:
        parts_path = options.parts_list or beside(options.netlist, ".parts.csv")
        listed = read_parts_list(parts_path) if parts_path is not None else None
        text = brief_text(read_netlist(options.netlist, options.allow_include), listed)
    except NetlistError as error:
        tell(str(error))
        return TROUBLE

    def write(stream: TextIO) -> None:
        stream.write(text if shows_box_characters(stream) else in_ascii(text))

    send(write, options.output)
    return PASSED
