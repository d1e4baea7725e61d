"""`pwmlint controllers`: the families that have a profile, and all figures of one with their sources."""

from __future__ import annotations

import argparse

from .answer import show, unknown
from .parser import Commands


def add(commands: Commands) -> None:
    """Add the command to the command line."""
    parser = commands.add_parser(
        "controllers",
        examples=(("pwmlint controllers 494", "its pins and figures with their sources"),),
        help="list the controller families, or tell all about one",
    )
    parser.add_argument("family", nargs="?", metavar="FAMILY", help="a family, such as 494")
    parser.set_defaults(command=_run)


def _run(options: argparse.Namespace) -> int:
    from ..controllers import families, load
    from ..report.reference import describe_family, list_families

    if options.family is None:
        return show(list_families(load(family) for family in families()))
    if options.family not in families():
        return unknown("controller family", options.family, families())
    return show(describe_family(load(options.family)))
