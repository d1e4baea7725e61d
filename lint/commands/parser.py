"""The parser of a command: argparse's, with examples before everything else, as one looks for them first."""

from __future__ import annotations

import argparse
from collections.abc import Sequence
from typing import Any, NoReturn

from ...grammar.errors import printable


class Parser(argparse.ArgumentParser):
    """A parser whose help begins with examples, each a command line and what it is for."""

    def __init__(self, *arguments: Any, examples: Sequence[tuple[str, str]] = (), **more: Any) -> None:
        super().__init__(*arguments, **more)
        self.examples = tuple(examples)

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
