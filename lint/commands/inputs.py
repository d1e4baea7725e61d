"""The options that tell what is read, for every command that reads a netlist."""

from __future__ import annotations

import argparse
import os
from collections.abc import Iterable
from pathlib import Path

from ...grammar.errors import NetlistError
from ..found_files import STANDARD_INPUT
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
        type=_folder,
        metavar="DIR",
        help="a folder besides the netlist's own from which it may include; may be repeated",
    )


def all_netlists(arguments: Iterable[str]) -> tuple[list[str], list[Unread]]:
    """Return the netlists that the arguments stand for, each once; tell of arguments that stand for none."""
    from ..netlist_files import netlists

    found: dict[str, str] = {}
    unread: list[Unread] = []
    for argument in arguments:
        try:
            for netlist in netlists(argument):
                found.setdefault(_identity(netlist), netlist)
        except NetlistError as error:
            tell(str(error))
            unread.append(Unread.of(argument, error))
    return list(found.values()), unread


def _identity(netlist: str) -> str:
    """Return what two spellings of a path have in common; a link has files of its own beside it."""
    return netlist if netlist == STANDARD_INPUT else str(Path(netlist).absolute())


def _folder(text: str) -> Path:
    if not os.path.isdir(text):
        raise argparse.ArgumentTypeError(f"there is no folder {text}")
    return Path(text)
