"""Where reports go: to standard output, or whole into a file."""

from __future__ import annotations

import os
import sys
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, TextIO

from ...grammar.errors import printable
from ..verdict import Review
from . import Gate, comparison_writer, writer

if TYPE_CHECKING:
    from ..compare.comparison import Comparison

STANDARD_OUTPUT = "-"


@dataclass(frozen=True, slots=True)
class Target:
    """One report that was asked for: its format, and the path of its file or "-" for standard output."""

    format: str = "text"
    output: str = STANDARD_OUTPUT


class DeliveryError(Exception):
    """A report that could not be written; the message says where, why and what to do."""


def deliver(target: Target, reviews: Sequence[Review], gate: Gate) -> None:
    """Write one report of `reviews`. Raises DeliveryError where it cannot be written."""
    write = writer(target.format)
    send(lambda stream: write(reviews, stream, gate), target.output)


def deliver_comparison(target: Target, comparison: Comparison, gate: Gate) -> None:
    """Write one report of a comparison. Raises DeliveryError where it cannot be written."""
    write = comparison_writer(target.format)
    send(lambda stream: write(comparison, stream, gate), target.output)


def send(write: Callable[[TextIO], object], output: str = STANDARD_OUTPUT) -> None:
    """Let `write` write to standard output or to the file `output`. Raises DeliveryError where it cannot."""
    try:
        if output == STANDARD_OUTPUT:
            _print(write)
        else:
            _save(Path(output), write)
    except OSError as error:
        where = "standard output" if output == STANDARD_OUTPUT else printable(output)
        reason = error.strerror or str(error)
        raise DeliveryError(
            f"{where}: the report cannot be written: {reason}\n"
            "  remedy:   check the path, the permission to write there and the room on the disk"
        ) from error


def _print(write: Callable[[TextIO], object]) -> None:
    """Write to standard output; a reader who has read enough and closed the pipe is no error."""
    try:
        write(sys.stdout)
        sys.stdout.flush()
    except OSError as error:
        # What is still buffered must not fail a second time when the interpreter ends.
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        if not isinstance(error, BrokenPipeError):
            raise


def _save(path: Path, write: Callable[[TextIO], object]) -> None:
    """Write a file in one go: readers see the old report or the new one, never half of it."""
    if path.exists() and not path.is_file():
        # A device or a named pipe is written to; replacing it would destroy it.
        with path.open("w", encoding="utf-8", newline="\n") as stream:
            write(stream)
        return
    path = path.resolve()
    draft = path.with_name(f".{path.name}.{os.getpid()}")
    try:
        with draft.open("x", encoding="utf-8", newline="\n") as stream:
            write(stream)
        draft.replace(path)
    finally:
        draft.unlink(missing_ok=True)
