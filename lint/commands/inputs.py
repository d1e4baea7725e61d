"""The options that tell what is read, for every command that reads a netlist."""

from __future__ import annotations

import argparse
from collections.abc import Iterable
from pathlib import Path

from ...grammar.errors import NetlistError
from ..report import Unread
from .answer import tell

NETLIST = "a netlist, or - for standard input"
NETLISTS = f"{NETLIST}; a folder stands for the netlists in it, a brief for the netlist beside it"


def add_inputs(parser: argparse.ArgumentParser) -> None:
    """Add what is read beside the netlist."""
    parser.add_argument("--parts-list", metavar="FILE", help="the ratings of the parts (CSV)")
    parser.add_argument(
        "--allow-include",
        action="append",
        default=[],
        type=Path,
        metavar="DIR",
        help="a folder besides the netlist's own from which it may include; may be repeated",
    )


def all_netlists(arguments: Iterable[str]) -> tuple[list[str], list[Unread]]:
    """Return the netlists that the arguments stand for, each once; tell of arguments that stand for none."""
    from ..netlist_files import netlists

    found: dict[str, None] = {}
    unread: list[Unread] = []
    for argument in arguments:
        try:
            found |= dict.fromkeys(netlists(argument))
        except NetlistError as error:
            tell(str(error))
            unread.append(Unread.of(argument, error))
    return list(found), unread
