"""Whether a stream gets colours, and how wide its lines are.

The order is the one that satisfies the published conventions together (no-color.org, force-color.org, the
variables CLICOLOR and CLICOLOR_FORCE): NO_COLOR, then FORCE_COLOR and CLICOLOR_FORCE, then TERM=dumb and
CLICOLOR=0, then whether the stream is a terminal.
"""

from __future__ import annotations

import os
import sys
from collections.abc import Mapping
from typing import TextIO

# A width where none is known, and its bounds: a report needs the narrowest, and nobody reads wider lines.
USUAL, NARROWEST, WIDEST = 80, 50, 120


def wanted(stream: TextIO, environment: Mapping[str, str]) -> bool:
    """Tell whether `stream` is to be coloured under the variables of `environment`."""
    return decision(stream, environment)[0]


def decision(stream: TextIO, environment: Mapping[str, str]) -> tuple[bool, str]:
    """Tell whether `stream` is to be coloured, and which variable decides; empty where none does.

    FORCE_COLOR and CLICOLOR_FORCE speak of what the run prints: a report in a file stays free of escapes.
    """
    if environment.get("NO_COLOR"):
        return False, "NO_COLOR"
    if stream is sys.stdout:
        if environment.get("FORCE_COLOR"):
            return True, "FORCE_COLOR"
        if environment.get("CLICOLOR_FORCE", "0") not in ("", "0"):
            return True, "CLICOLOR_FORCE"
    if environment.get("TERM") == "dumb":
        return False, "TERM"
    if environment.get("CLICOLOR") == "0":
        return False, "CLICOLOR"
    return stream.isatty(), ""


def width(stream: TextIO, environment: Mapping[str, str]) -> int:
    """Return the width of a line in cells: that of the terminal within 50 .. 120, 80 elsewhere.

    COLUMNS overrules the terminal, as it does for other programs.
    """
    columns = environment.get("COLUMNS", "")
    if columns.isdecimal() and len(columns) <= len(str(WIDEST)):
        found = int(columns)
    elif stream.isatty():
        found = os.get_terminal_size(stream.fileno()).columns
    else:
        found = USUAL
    return max(NARROWEST, min(WIDEST, found))


def shows_box_characters(stream: TextIO) -> bool:
    """Tell whether `stream` can carry every character; a StringIO, without an encoding, can."""
    encoding = getattr(stream, "encoding", None)
    return encoding is None or encoding.lower().replace("-", "").startswith("utf")
