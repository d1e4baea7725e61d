"""The options that say which reports a command writes, and where they go."""

from __future__ import annotations

import argparse
from collections.abc import Iterable, Sequence
from typing import Any


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
