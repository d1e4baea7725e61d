"""`pwmlint settings`: everything that can be set, its value, and who set it."""

from __future__ import annotations

import argparse
import os
import sys
from collections.abc import Iterable, Iterator
from typing import TYPE_CHECKING, TypeAlias

from ...grammar.errors import NetlistError, printable
from ..report import colour
from ..report.delivery import STANDARD_OUTPUT, Target
from .answer import TRACEBACK, TROUBLE, show, tell
from .parser import Commands
from .review import add_options

if TYPE_CHECKING:
    from ..settings import Settings

Row: TypeAlias = tuple[str, str, str]

_HEADINGS: Row = ("setting", "value", "set by")


def add(commands: Commands) -> None:
    """Add the command to the command line."""
    parser = commands.add_parser(
        "settings",
        examples=(("pwmlint settings board.edf", "what holds for this netlist, and who set it"),),
        help="list what is set for a netlist, and where",
        description="Lists what would hold for a review with the same options, and who set each value.",
    )
    parser.add_argument(
        "netlist", nargs="?", default=".", metavar="NETLIST", help="a netlist, or a folder of netlists (.)"
    )
    add_options(parser)
    parser.set_defaults(command=_run, parser=parser)


def _run(options: argparse.Namespace) -> int:
    from .settle import settle_each, targets_of

    settled, _ = settle_each([options.netlist], options)
    try:
        targets_of(settled, options)
    except NetlistError as error:
        tell(str(error))
        return TROUBLE
    if not settled:
        return TROUBLE
    return show(_table([_HEADINGS, *_configured(settled[0][1]), *_environment()]))


def _configured(settings: Settings) -> Iterator[Row]:
    """Yield what a command line or a configuration may set, under the names of the latter."""
    not_loaded = " (not loaded)" if settings.untrusted else ""
    for name, setting in (
        ("configuration", settings.configuration),
        ("gate", settings.gate),
        ("strict", settings.strict),
        ("worst_case", settings.worst_case),
        ("brief", settings.brief),
        ("parts_list", settings.parts_list),
        ("deviations", settings.deviations),
    ):
        yield name, _words(setting.value), setting.source
    folders = ", ".join(map(str, settings.allow_include.value))
    yield "allow_include", folders or "none", settings.allow_include.source
    yield "rules", f"{_words(settings.rules.value)}{not_loaded}", settings.rules.source
    for target in settings.reports.value:
        yield f"reports.{target.format}", _output(target), settings.reports.source
    for table, told in (("topics", settings.topics), ("levels", settings.levels)):
        if not told:
            yield table, "as the rules have it", "default"
        for name, setting in told.items():
            yield f'{table}."{name}"', setting.value, setting.source


def _environment() -> Iterator[Row]:
    """Yield what the environment sets of what is printed on standard output."""
    coloured, variable = colour.decision(sys.stdout, os.environ)
    terminal = "the terminal" if sys.stdout.isatty() else "standard output is no terminal"
    yield "colour", _words(coloured), f"environment {variable}" if variable else terminal
    columns = "environment COLUMNS" if os.environ.get("COLUMNS", "").isdecimal() else terminal
    yield "width", str(colour.width(sys.stdout, os.environ)), columns
    traced = bool(os.environ.get(TRACEBACK))
    yield "traceback", _words(traced), f"environment {TRACEBACK}" if traced else "default"


def _output(target: Target) -> str:
    return "standard output" if target.output == STANDARD_OUTPUT else target.output


def _words(value: object) -> str:
    """Return a value in words."""
    if isinstance(value, bool):
        return "yes" if value else "no"
    return "none" if value is None else str(value)


def _table(rows: Iterable[Row]) -> str:
    """Return the rows in columns as wide as what stands in them."""
    from rich.cells import cell_len

    shown = [tuple(printable(cell) for cell in row) for row in rows]
    first, second = (max(cell_len(row[column]) for row in shown) for column in (0, 1))
    return "\n".join(
        f"{name}{' ' * (first - cell_len(name))}  {value}{' ' * (second - cell_len(value))}  {source}"
        for name, value, source in shown
    )
