"""Completion scripts for shells, made from the parser of the command line itself.

Commands, options, choices, files and folders; and whatever words a caller gives for a name such as ID. A new
command or option is completed without a line here.
"""

from __future__ import annotations

import argparse
from collections.abc import Mapping, Sequence

from .commands.parser import Parser
from .shells import SHELLS, Argument, Command

Words = Mapping[str, Sequence[str]]

# What the names of arguments stand for, as help spells them.
_FILES = frozenset({"FILE", "NETLIST", "OLD", "NEW"})
_FOLDERS = frozenset({"DIR"})


def script(shell: str, parser: Parser, words: Words) -> str:
    """Return the completion script of a shell, one of SHELLS.

    words: what an argument may be by the name that help gives it, such as ID
    """
    return "\n".join([*SHELLS[shell](parser.prog, commands_of(parser, words)), ""])


def commands_of(parser: Parser, words: Words) -> tuple[Command, ...]:
    """Return the program itself, then its commands, as the parser has them."""
    options = tuple(_argument(one, parser, words) for one in parser.arguments if one.option_strings)
    below = (
        Command(name, one.summary, tuple(_argument(action, one, words) for action in one.arguments))
        for name, one in parser.commands.items()
    )
    return (Command("", "", options), *below)


def _argument(action: argparse.Action, parser: Parser, words: Words) -> Argument:
    name = action.metavar if isinstance(action.metavar, str) else action.dest.upper()
    choices = tuple(map(str, action.choices)) if action.choices is not None else tuple(words.get(name, ()))
    named = {**vars(action), "choices": ", ".join(choices), "prog": parser.prog}
    says = " ".join(((action.help or "") % named).split())
    if action.nargs == 0:
        wants = "nothing"
    elif choices:
        wants = "word"
    else:
        wants = "file" if name in _FILES else "folder" if name in _FOLDERS else "text"
    return Argument(tuple(action.option_strings), wants, name, says, choices)
