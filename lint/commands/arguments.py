"""What a command line must not hold, whichever the command is: it is refused before it is understood.

A shell replaces `*` by names that a change may have chosen, and a variable that is not set by nothing at all.
"""

from __future__ import annotations

import os
import re
from collections.abc import Sequence

from ...grammar.errors import printable

_EMPTY_VALUE = re.compile(r"--[\w-]+=")


def refusal(arguments: Sequence[str]) -> str | None:
    """Return what to tell of the first argument that must not be taken, None where all may be."""
    ended = arguments.index("--") if "--" in arguments else len(arguments)
    for number, argument in enumerate(arguments):
        if not argument or (number < ended and _EMPTY_VALUE.fullmatch(argument)):
            after = f" after {printable(arguments[number - 1])}" if number and not argument else ""
            named = f"{argument.removesuffix('=')} is empty" if argument else f"an empty argument{after}"
            return f"pwmlint: {named}\n  remedy:   give a path; is a variable not set?"
        if number < ended and argument.startswith("-") and len(argument) > 1 and os.path.lexists(argument):
            return (
                f"{printable(argument)}: this file has the name of an option\n"
                f"  remedy:   write ./{printable(argument)} where the file is meant, or put -- before the "
                "files; rename it where the option is"
            )
    return None
