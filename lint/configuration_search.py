"""Where `pwmlint.toml` is looked for: beside the netlist, then above it up to the root of its repository."""

from __future__ import annotations

import os
from pathlib import Path

from ..grammar.netlist import Place
from .configuration import ConfigurationError
from .found_files import CONFIGURATION, STANDARD_INPUT, refuse_link_out, root_of


def find_configuration(netlist: str | Path) -> Path | None:
    """Return the nearest configuration of a netlist, or of a folder; None where there is none.

    The search ends at the first folder that holds `.git`. Where no folder above does, nobody knows whose the
    folders above are, and only the netlist's own is looked into. Standard input lies in no folder.
    Raises ConfigurationError for a `pwmlint.toml` that is no file, or a link that leads out of these folders.
    """
    if str(netlist) == STANDARD_INPUT:
        return None
    given = Path(netlist)
    try:
        folder = (given if given.is_dir() else given.parent).resolve()
    except (OSError, RuntimeError, ValueError):  # no such path can be: reading the netlist tells so
        return None
    above, root = (folder, *folder.parents), root_of(folder)
    for one in above[: above.index(root) + 1]:
        found = one / CONFIGURATION
        if os.path.lexists(found):
            return _checked(found, root, _shown(found, given))
    return None


def _checked(found: Path, root: Path, shown: Path) -> Path:
    """Return the path to show, unless what stands there must not be read."""
    if not os.path.isfile(found):
        whole = Place(str(shown), 0, 0)
        raise ConfigurationError("this is no file", whole, remedy="make it a file, or give --no-config")
    remedy = "put the file there itself, or name it by --config"
    refuse_link_out(found, root, remedy=remedy, shown=shown, error=ConfigurationError)
    return shown


def _shown(found: Path, given: Path) -> Path:
    """Return the path as the user would write it: relative where the netlist's is."""
    if given.is_absolute():
        return found
    try:
        return Path(os.path.relpath(found))
    except ValueError:  # on another drive
        return found
