"""`pwmlint rules`: the reference of the rules, from their docstrings."""

from __future__ import annotations

import argparse

from ...grammar.errors import NetlistError
from .answer import TROUBLE, show, tell, unknown
from .given import add_rules
from .parser import Commands


def add(commands: Commands) -> None:
    """Add the command to the command line."""
    parser = commands.add_parser(
        "rules",
        examples=(
            ("pwmlint rules", "every question, by topic"),
            ("pwmlint rules dead-time.range", "all about one"),
        ),
        help="list the rules, or tell all about one",
    )
    parser.add_argument("id", nargs="?", metavar="ID", help="a rule, such as dead-time.range")
    add_rules(parser)
    parser.set_defaults(command=_run)


def _run(options: argparse.Namespace) -> int:
    from ..house_rules import load_folder
    from ..report.reference import describe_rule, list_rules
    from ..rule import load_rules

    rules = list(load_rules())
    try:
        rules += load_folder(options.rules, rules) if options.rules is not None else ()
    except NetlistError as error:
        tell(str(error))
        return TROUBLE
    if options.id is None:
        return show(list_rules(rules))
    by_id = {one.id: one for one in rules}
    if options.id not in by_id:
        return unknown("rule", options.id, by_id)
    return show(describe_rule(by_id[options.id]))
