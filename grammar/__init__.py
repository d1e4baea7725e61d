"""Text to netlist: `read` takes a file in any of the formats and returns what is written in it."""

from __future__ import annotations

import stat
from collections.abc import Callable, Sequence
from pathlib import Path

from .errors import NetlistError
from .netlist import Netlist, Part, Pin, Place

__all__ = ["Netlist", "NetlistError", "Part", "Pin", "Place", "read", "read_bytes"]


def read(
    path: str | Path,
    *,
    keep: Callable[[str], bool] | None = None,
    allow_include: Sequence[Path] = (),
) -> Netlist:
    """Read a netlist file, EDIF 2 0 0 or a SPICE-style list, told apart by its first character.

    keep:          tells by its name whether a subcircuit stays one part instead of being flattened
    allow_include: folders besides the file's own from which a list may include
    Raises NetlistError for whatever cannot be read: no such file, a folder, a file that is no netlist.
    """
    file = str(path)
    return read_bytes(
        _bytes_of(Path(path)), file, keep=keep, include_root=Path(path).parent, allow_include=allow_include
    )


def read_bytes(
    data: bytes,
    file: str,
    *,
    keep: Callable[[str], bool] | None = None,
    include_root: Path | None = None,
    allow_include: Sequence[Path] = (),
) -> Netlist:
    """Read a netlist that is already in memory, from standard input for one; `file` is the name to show.

    include_root: the folder tree from which a list may include; None: it may not
    """
    from .text import decode

    text = decode(data, file)
    if text.lstrip().startswith("("):
        from .edif import read_edif

        return read_edif(text, file)
    from .spice import read_spice

    return read_spice(text, file, keep=keep, include_root=include_root, allow_include=allow_include)


def _bytes_of(path: Path) -> bytes:
    try:
        _refuse_endless(path)
        return path.read_bytes()
    except OSError as error:
        raise NetlistError(
            _REASONS.get(type(error), f"cannot be read: {error.strerror}"),
            Place(str(path), 0, 0),
            expected=_EXPECTED,
            remedy="check the path and the permission to read it",
        ) from error


def _refuse_endless(path: Path) -> None:
    """Raise NetlistError for a path, or a link, that leads to a device or to a file beyond all size."""
    status = path.stat()
    device = stat.S_ISCHR(status.st_mode) or stat.S_ISBLK(status.st_mode)
    if device or status.st_size > _LARGEST_FILE:
        message = "this is a device" if device else f"the file is larger than {_LARGEST_FILE:,} bytes"
        raise NetlistError(message, Place(str(path), 0, 0), expected=_EXPECTED, remedy="name the right file")


_LARGEST_FILE = 500_000_000
_EXPECTED = "a netlist file: EDIF 2 0 0 or a SPICE-style list"

_REASONS: dict[type[OSError], str] = {
    FileNotFoundError: "there is no such file",
    IsADirectoryError: "this is a folder, not a file",
    PermissionError: "you may not read this file",
}
