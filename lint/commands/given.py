"""What the command line says of a review, for `settings` to weigh against the configuration."""

from __future__ import annotations

import argparse
from typing import TYPE_CHECKING

from ..report.delivery import Target

if TYPE_CHECKING:
    from ..settings import Given


def add_configuration(parser: argparse.ArgumentParser) -> None:
    """Add the options that say which configuration holds, and which house rules."""
    which = parser.add_mutually_exclusive_group()
    which.add_argument("--config", metavar="FILE", help="the configuration to take for every netlist")
    which.add_argument("--no-config", action="store_true", help="take no configuration")
    parser.add_argument(
        "--trust-config",
        action="store_true",
        help="load the house rules that the configuration names: they are programs",
    )
    add_rules(parser)


def add_rules(parser: argparse.ArgumentParser) -> None:
    """Add the option that names a folder of house rules."""
    parser.add_argument("--rules", metavar="DIR", help="a folder of house rules, .py files that are executed")


def given(options: argparse.Namespace) -> Given:
    """Return what the command line says; what an option is not given for, the configuration may tell."""
    from ..settings import Given

    # A command that has no gate or no report has no such options.
    pairs: list[dict[str, str]] | None = getattr(options, "pairs", None)
    return Given(
        gate=getattr(options, "gate", None),
        strict=options.strict,
        worst_case=getattr(options, "worst_case", None),
        brief=options.brief,
        parts_list=options.parts_list,
        deviations=options.deviations,
        allow_include=tuple(options.allow_include) if options.allow_include else None,
        rules=options.rules,
        reports=tuple(Target(**pair) for pair in pairs) if pairs else None,
        config=options.config,
        no_config=options.no_config,
        trust_config=options.trust_config,
    )
