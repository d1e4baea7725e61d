"""Which netlists an argument of the command line stands for.

A file stands for itself, a folder for the netlists in it and below it, and a brief, a parts list or a file
of deviations for the netlists that it lies beside: whoever is told which files have changed, as a hook is,
need not know which netlist a changed brief belongs to.
"""

from __future__ import annotations

import os
from collections.abc import Iterator
from pathlib import Path

from ..grammar.errors import NetlistError
from ..grammar.netlist import Place
from .found_files import BESIDE, refuse_link_out, root_of
from .wording import one_of

# The endings of netlists that are looked for in a folder; a file that is named may have any.
ENDINGS = (".edf", ".edif", ".edn", ".cir", ".ckt", ".sp", ".spi", ".spice")

_MOST = 10_000
_EXPECTED = "a netlist, a folder of netlists, or a file beside one, such as board.brief.toml"


def netlists(argument: str) -> list[str]:
    """Return the paths of the netlists that `argument` stands for, in a fixed order.

    Hidden folders and links to folders are not entered. Raises NetlistError where there is none, or far too
    many.
    """
    path = Path(argument)
    if os.path.isdir(path):  # unlike the method of a path, it answers whatever the path is
        return _in_folder(path)
    ending = next((one for one in BESIDE if path.name.casefold().endswith(one)), None)
    if ending is not None and os.path.isfile(path):
        return _beside(path, path.name[: -len(ending)])
    return [argument]


def _in_folder(folder: Path) -> list[str]:
    found: list[str] = []
    for file in _files(folder):
        found.append(str(file))
        if len(found) > _MOST:
            raise _error(folder, f"more than {_MOST:,} netlists in this folder", "name a folder further down")
    if not found:
        raise _error(
            folder, "no netlist in this folder", f"name the file, or let it end in {one_of(ENDINGS)}"
        )
    return found


def _files(folder: Path) -> Iterator[Path]:
    """Yield the netlists of a folder tree, those of each folder by name before those of its folders."""
    root = root_of(folder.resolve())

    def refuse(error: OSError) -> None:
        reason = error.strerror or str(error)
        raise _error(Path(error.filename), f"cannot be looked into: {reason}", "check the permission")

    for where, folders, names in os.walk(folder, onerror=refuse):
        folders[:] = sorted(name for name in folders if not name.startswith("."))
        for name in sorted(names):
            if Path(name).suffix.casefold() in ENDINGS and not name.startswith("."):
                found = Path(where, name)
                refuse_link_out(found, root, remedy="take the link out, or name the netlist itself")
                _refuse_pipe(found)
                yield found


def _refuse_pipe(found: Path) -> None:
    """Raise NetlistError for what is no file: nobody writes into a pipe that is merely there."""
    if os.path.exists(found) and not os.path.isfile(found):
        raise _error(found, "this is no file", "take it out of the folder, or name it itself")


def _beside(path: Path, stem: str) -> list[str]:
    files = (path.with_name(stem + ending) for ending in ENDINGS)
    found = [str(file) for file in files if os.path.isfile(file)]
    if not found:
        remedy = f"name the netlist itself, or let it be called {stem} with {one_of(ENDINGS)}"
        raise _error(path, "there is no netlist beside this file", remedy)
    return found


def _error(path: Path, message: str, remedy: str) -> NetlistError:
    return NetlistError(message, Place(str(path), 0, 0), expected=_EXPECTED, remedy=remedy)
