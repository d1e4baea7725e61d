"""The options that tell what is read, for every command that reads a netlist."""

from __future__ import annotations

import argparse
from pathlib import Path

NETLIST = "a netlist, or - for standard input"


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
