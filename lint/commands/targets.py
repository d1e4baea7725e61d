"""The options that say which reports a command writes, and where they go."""

from __future__ import annotations

import argparse
import os
from collections.abc import Iterable, Sequence
from typing import Any

from ..report.delivery import STANDARD_OUTPUT, Target


def add_targets(parser: argparse.ArgumentParser, formats: Iterable[str]) -> None:
    """Add --format and --output, which go in pairs."""
    parser.add_argument(
        "--format",
        action=_Pairs,
        dest="pairs",
        const="format",
        choices=list(formats),
        help="the report's format (text); repeat --format and --output in pairs for several reports",
    )
    parser.add_argument(
        "--output",
        action=_Pairs,
        dest="pairs",
        const="output",
        metavar="FILE",
        help="where the report goes (-)",
    )


class _Pairs(argparse.Action):
    """Collects --format and --output into pairs, in the order given: one completes what the other began."""

    def __call__(
        self,
        parser: argparse.ArgumentParser,
        namespace: argparse.Namespace,
        values: str | Sequence[Any] | None,
        option_string: str | None = None,
    ) -> None:
        pairs: list[dict[str, Any]] = getattr(namespace, self.dest) or [{}]
        if self.const in pairs[-1]:
            pairs.append({})
        pairs[-1][self.const] = values
        setattr(namespace, self.dest, pairs)


def targets(options: argparse.Namespace, inputs: Iterable[str | None]) -> list[Target]:
    """Return the reports that are asked for; wrong usage ends here.

    inputs: the files that are read, which no report may overwrite
    """
    parser: argparse.ArgumentParser = options.parser
    pairs: list[dict[str, str]] = options.pairs or [{}]
    wanted = [Target(**pair) for pair in pairs]
    outputs = [target.output for target in wanted]
    read = [path for path in inputs if path]
    for output in outputs:
        where = "standard output" if output == STANDARD_OUTPUT else output
        if outputs.count(output) > 1:
            parser.error(f"two reports would go to {where}: give each --format its own --output")
        if output != STANDARD_OUTPUT and any(_same_file(output, path) for path in read):
            parser.error(f"the report would overwrite what is reviewed: {where}")
    return wanted


def _same_file(one: str, other: str) -> bool:
    """Tell whether two paths lead to one file; what does not exist yet is no other's file."""
    return os.path.exists(one) and os.path.exists(other) and os.path.samefile(one, other)
