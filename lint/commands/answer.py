"""How a command answers: by exit status, on standard output, and to the user on standard error."""

from __future__ import annotations

import os
import sys
from collections.abc import Callable, Iterable
from contextlib import suppress
from difflib import get_close_matches

from ...grammar.errors import NetlistError, printable
from ..report.colour import shows_box_characters
from ..report.delivery import STANDARD_OUTPUT, DeliveryError, send

PASSED, NOT_PASSED, TROUBLE, INTERRUPTED = 0, 1, 2, 130

TRACEBACK = "PWMLINT_TRACEBACK"
"""The variable of the environment that asks where an error of ours came from."""

EXIT = """exit status: 0 the gate passed, 1 it did not, 2 something could not be reviewed or written,
130 interrupted"""


def tell(message: str) -> None:
    """Print a message on standard error; where nobody listens any more there is nobody to tell."""
    with suppress(OSError):  # a closed pipe, a full disk
        print(message, file=sys.stderr)  # noqa: T201 - standard error is where messages go


def tell_once(trouble: NetlistError, told: list[NetlistError]) -> None:
    """Tell of what several netlists may share, a mistake in their configuration, but not for each of them."""
    if not any(trouble is one for one in told):
        told.append(trouble)
        tell(str(trouble))


def is_delivered(deliver: Callable[[], None]) -> bool:
    """Let one report be written and tell whether it could be; the others are wanted all the same."""
    try:
        deliver()
    except DeliveryError as error:
        tell(str(error))
        return False
    return True


def is_taken(output: str) -> bool:
    """Tell whether there is a file already that must not be overwritten, and tell the user so.

    A device or a named pipe holds nothing that could be lost.
    """
    taken = output != STANDARD_OUTPUT and os.path.isfile(output)
    if taken:
        tell(
            f"{printable(output)}: this file is there already, and is not overwritten\n"
            "  remedy:   remove it first, or name another with --output"
        )
    return taken


def write_toml(text: str, output: str) -> int:
    """Write a TOML document in characters that the output can carry, and return the exit status."""
    from ..toml_text import in_ascii

    send(lambda stream: stream.write(text if shows_box_characters(stream) else in_ascii(text)), output)
    return PASSED


def show(text: str) -> int:
    """Print a text on standard output, in characters that it can carry, and return the exit status."""
    from ..report.glyphs import shown

    send(lambda stream: stream.write(shown(text, stream)))
    return PASSED


def unknown(kind: str, name: str, known: Iterable[str]) -> int:
    """Tell that there is no such thing, name the nearest ones, and return the exit status."""
    near = get_close_matches(name, known := list(known), n=3)
    tell(f"pwmlint: there is no {kind} {printable(name)}\n  known:    {', '.join(near or known)}")
    return TROUBLE
