"""Completion scripts for shells, made from the parser of the command line itself.

Commands, options, choices, files and folders; and whatever words a caller gives for a name such as ID. A new
command or option is completed without a line here.
"""

from __future__ import annotations

import argparse
from collections.abc import Iterator, Mapping, Sequence
from typing import Any, cast

from .shells import SHELLS, Argument, Command

Words = Mapping[str, Sequence[str]]

# What the names of arguments stand for, as help spells them.
_FILES = frozenset({"FILE", "NETLIST", "OLD", "NEW"})
_FOLDERS = frozenset({"DIR"})


def script(shell: str, parser: argparse.ArgumentParser, words: Words) -> str:
    """Return the completion script of a shell, one of SHELLS.

    words: what an argument may be by the name that help gives it, such as ID
    """
    return "\n".join([*SHELLS[shell](parser.prog, commands_of(parser, words)), ""])


# What there is to complete


def commands_of(parser: argparse.ArgumentParser, words: Words) -> tuple[Command, ...]:
    """Return the program itself, then its commands, as the parser has them."""
    # argparse keeps its actions to itself, but nothing else tells them, and their names have never changed.
    actions = parser._actions  # pyright: ignore[reportPrivateUsage]
    found = [Command("", "", tuple(_argument(one, parser, words) for one in actions if one.option_strings))]
    for action in actions:
        if isinstance(action, argparse._SubParsersAction):  # pyright: ignore[reportPrivateUsage]
            found += _below(cast("argparse._SubParsersAction[Any]", action), words)  # pyright: ignore[reportPrivateUsage]
    return tuple(found)


def _below(
    commands: argparse._SubParsersAction[Any],  # pyright: ignore[reportPrivateUsage]
    words: Words,
) -> Iterator[Command]:
    parsers = cast("dict[str, argparse.ArgumentParser]", commands.choices)
    says = {one.dest: one.help or "" for one in commands._choices_actions}  # pyright: ignore[reportPrivateUsage]
    for name, parser in parsers.items():
        actions = parser._actions  # pyright: ignore[reportPrivateUsage]
        yield Command(name, says.get(name, ""), tuple(_argument(one, parser, words) for one in actions))


def _argument(action: argparse.Action, parser: argparse.ArgumentParser, words: Words) -> Argument:
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
