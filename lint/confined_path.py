"""Paths that a file names and that must not lead out of its folder: the file may come from a stranger."""

from __future__ import annotations

from pathlib import Path, PurePosixPath

EXPECTED = "a path below the folder of this file, with / between its words and nothing hidden in it"


class PathRefusedError(Exception):
    """A path that may not be used; the message is the reason, to stand behind the path."""


def confined(folder: Path, text: str) -> Path:
    """Return the path `text` below `folder`; what it leads to need not exist.

    Raises PathRefusedError for a path that is absolute, climbs by "..", leads out by a link, or goes through
    something hidden: such a folder is a tool's own, and what it holds is not for a report.
    """
    if not text.isprintable() or "\\" in text or ":" in text:
        raise PathRefusedError("holds a character that has no place in it")
    words = PurePosixPath(text).parts
    if text.startswith("/"):
        raise PathRefusedError("is absolute")
    if ".." in words:
        raise PathRefusedError("climbs out of its folder")
    path = folder / text
    try:
        tree, real = folder.resolve(), path.resolve()
    except (OSError, RuntimeError, ValueError):  # a name too long, a loop of links
        raise PathRefusedError("cannot be followed") from None
    if not real.is_relative_to(tree):
        raise PathRefusedError("leads out of the folder of this file")
    if any(word.startswith(".") for word in (*words, *real.relative_to(tree).parts)):
        raise PathRefusedError("leads through something hidden")
    return path
