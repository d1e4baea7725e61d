"""The text of a file that a person wrote, with an error of its own kind for all that can be wrong."""

from __future__ import annotations

from pathlib import Path

from ..grammar.errors import NetlistError
from ..grammar.netlist import Place
from ..grammar.text import decode


def read_text(path: str | Path, error: type[NetlistError], *, limit: int) -> str:
    """Return the text of a file of at most `limit` bytes, CR and CRLF made LF; else raise `error`."""
    file = str(path)
    whole = Place(file, 0, 0)
    try:
        with Path(path).open("rb") as stream:
            data = stream.read(limit + 1)
    except FileNotFoundError:
        raise error("there is no such file", whole, remedy="check the path") from None
    except IsADirectoryError:
        raise error("this is a folder", whole, expected="a file", remedy="name the file in it") from None
    except (OSError, ValueError) as problem:  # ValueError: a NUL character in the path
        reason = problem.strerror if isinstance(problem, OSError) and problem.strerror else str(problem)
        raise error(f"the file cannot be read: {reason}", whole) from None
    if len(data) > limit:
        raise error(f"the file is larger than {limit:,} bytes", whole, remedy="name the right file")
    try:
        return decode(data, file)
    except NetlistError as problem:
        raise error(
            problem.message,
            problem.place,
            excerpt=problem.excerpt,
            expected="plain text",
            remedy="save the file as UTF-8 text",
        ) from None
