"""Files that are found, not named: what a message quotes of them must not be a stranger's choice.

A netlist may come with a change that nobody has read, and a link beside it may lead to any file there is.
A file that the user names is read wherever it lies.
"""

from __future__ import annotations

import os
from pathlib import Path

from ..grammar.errors import NetlistError
from ..grammar.netlist import Place

STANDARD_INPUT = "-"

BRIEF, PARTS_LIST, DEVIATIONS = BESIDE = (".brief.toml", ".parts.csv", ".deviations.toml")
"""The endings of what is found beside a netlist of the same name."""

CONFIGURATION = "pwmlint.toml"
"""The name of what is found beside it or above it, up to the folder that holds REPOSITORY."""

REPOSITORY = ".git"


def beside(netlist: str | Path, ending: str) -> Path | None:
    """Return the file beside the netlist that has its name and another ending, where there is one.

    Raises NetlistError for a link that leads out of the repository, or of the folder where there is none.
    """
    path = Path(netlist)
    if str(netlist) == STANDARD_INPUT or not path.name:  # "." has no name
        return None
    found = path.with_name(path.stem + ending)
    if not os.path.isfile(found):
        return None
    remedy = "put the file there itself, or name it on the command line"
    refuse_link_out(found, root_of(found.parent.resolve()), remedy=remedy)
    return found


def root_of(folder: Path) -> Path:
    """Return the root of the repository that a folder, resolved, lies in; the folder itself where in none."""
    above = (folder, *folder.parents)
    return next((one for one in above if os.path.lexists(one / REPOSITORY)), folder)


def refuse_link_out(
    found: Path,
    root: Path,
    *,
    remedy: str,
    shown: Path | None = None,
    error: type[NetlistError] = NetlistError,
) -> None:
    """Raise `error` for a file that a link leads out of `root` to; `shown` is the path to tell of."""
    # Unlike the method of a path it also answers for links that lead in a ring; reading tells of these.
    if not Path(os.path.realpath(found)).is_relative_to(root):
        raise error(f"this link leads out of {root}", Place(str(shown or found), 0, 0), remedy=remedy)
