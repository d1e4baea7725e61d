"""The command line: finds the command, and turns what goes wrong into an exit status.

0: the gate passed; 1: it did not; 2: there was something that could not be reviewed or written;
130: interrupted. Findings go to standard output, everything else to standard error.
"""

from __future__ import annotations

import os
import sys
import traceback
from collections.abc import Sequence
from importlib import import_module
from importlib.metadata import version

from ..grammar.errors import printable
from .commands import COMMANDS
from .commands.answer import EXIT, INTERRUPTED, TRACEBACK, TROUBLE, tell
from .commands.arguments import refusal
from .commands.parser import Commands, Parser
from .report.delivery import DeliveryError


def main(arguments: Sequence[str] | None = None) -> int:
    """Run the command line and return the exit status. Raises SystemExit(2) on wrong usage, as argparse."""
    refused = refusal(sys.argv[1:] if arguments is None else arguments)
    if refused is not None:
        tell(refused)
        return TROUBLE
    try:
        options = command_line().parse_args(arguments)
        return options.command(options)
    except KeyboardInterrupt:
        tell("interrupted")
        return INTERRUPTED
    except DeliveryError as error:
        tell(str(error))
        return TROUBLE
    except Exception as error:
        # The last resort: an error of ours is a line for the user, not a page.
        return _internal(error)


def command_line() -> Parser:
    """Return the parser of the whole command line."""
    parser = Parser(
        prog="pwmlint",
        description="Reviews the schematic netlist around a PWM controller.",
        epilog=EXIT,
        examples=(
            ("pwmlint review board.edf", "is the schematic right?"),
            ("pwmlint brief board.edf --output board.brief.toml", "begin to tell what the supply must do"),
            ("pwmlint rules dead-time.range", "what a rule asks, why, and from which source"),
        ),
    )
    parser.add_argument("--version", action="version", version=f"pwmlint {version('pwmlint')}")
    commands = Commands(parser)
    for name in COMMANDS:
        import_module(f".commands.{name}", __package__).add(commands)
    return parser


def _internal(error: Exception) -> int:
    """Tell of an error that is ours, not the user's."""
    if os.environ.get(TRACEBACK):
        tell("".join(traceback.format_exception(error)).rstrip())
    tell(
        f"pwmlint: internal error: {type(error).__name__}: {printable(str(error))}\n"
        f"  remedy:   a fault of pwmlint: please report it, with the traceback that {TRACEBACK}=1 shows"
    )
    return TROUBLE
