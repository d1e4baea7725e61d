"""The parser of a command: argparse's, with examples before everything else, as one looks for them first.

It also tells what it knows, which completion asks and argparse keeps to itself.
"""

from __future__ import annotations

import argparse
from collections.abc import Sequence
from typing import Any, NoReturn

from ...grammar.errors import printable


class Parser(argparse.ArgumentParser):
    """A parser whose help begins with examples.

    examples: each a command line and what it is for
    summary:  what the list of commands says of this one
    commands: the parsers of its own commands by name, where it has some
    """

    def __init__(self, *arguments: Any, examples: Sequence[tuple[str, str]] = (), **more: Any) -> None:
        super().__init__(*arguments, **more)
        self.examples = tuple(examples)
        self.summary = ""
        self.commands: dict[str, Parser] = {}

    @property
    def arguments(self) -> tuple[argparse.Action, ...]:
        """Return the options, and what stands on the command line without one."""
        return tuple(self._actions)

    def error(self, message: str) -> NoReturn:
        """End with the usage and `message`, which may quote an argument that a stranger has chosen."""
        super().error(printable(message))

    def format_help(self) -> str:
        """Return the help: examples, then what argparse makes of the rest."""
        if not self.examples:
            return super().format_help()
        width = max(len(line) for line, _ in self.examples)
        lines = [f"  {line:<{width}}  {purpose}".rstrip() for line, purpose in self.examples]
        return "\n".join(["examples:", *lines, "", super().format_help()])


class Commands:
    """Where the commands of a program are added, each by its module."""

    def __init__(self, program: Parser) -> None:
        self._program = program
        self._added = program.add_subparsers(title="commands", required=True, metavar="COMMAND")

    def add_parser(self, name: str, **more: Any) -> Parser:
        """Add a command and return its parser; `more` is what argparse takes for one."""
        parser = self._added.add_parser(name, **more)
        parser.summary = more.get("help", "")
        self._program.commands[name] = parser
        return parser
