"""`pwmlint rules`: the reference of the rules, from their docstrings."""

from __future__ import annotations

import argparse
from typing import Any

from .answer import show, unknown


def add(commands: argparse._SubParsersAction[Any]) -> None:  # pyright: ignore[reportPrivateUsage]
    """Add the command to the command line."""
    parser = commands.add_parser("rules", help="list the rules, or tell all about one")
    parser.add_argument("id", nargs="?", metavar="ID", help="a rule, such as dead-time.range")
    parser.set_defaults(command=_run)


def _run(options: argparse.Namespace) -> int:
    from ..report.reference import describe_rule, list_rules
    from ..rule import load_rules

    rules = {one.id: one for one in load_rules()}
    if options.id is None:
        return show(list_rules(list(rules.values())))
    if options.id not in rules:
        return unknown("rule", options.id, rules)
    return show(describe_rule(rules[options.id]))
