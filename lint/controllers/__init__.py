"""Controller families: what is published of each, as data, and how a part is recognised as one."""

from __future__ import annotations

import re
from functools import cache
from pathlib import Path

from .profile import (
    ROLES,
    DeadTimeModel,
    Figure,
    PinDescription,
    Profile,
    ProfileError,
    parse,
    plain_name,
)

__all__ = [
    "ROLES",
    "DeadTimeModel",
    "Figure",
    "PinDescription",
    "Profile",
    "ProfileError",
    "families",
    "generic_number",
    "load",
    "parse",
    "plain_name",
]

_FOLDER = Path(__file__).parent

# The logic series 54 and 74 count their functions with the same numbers: a 74HC594 is a shift register.
_LOGIC_PART = re.compile(r"(?<![0-9])[57]4[a-z]{1,5}[0-9]+", re.IGNORECASE)


def families() -> tuple[str, ...]:
    """Return the families that have a profile, such as "494", in alphabetical order."""
    return tuple(sorted(path.stem for path in _FOLDER.glob("*.toml")))


@cache
def load(family: str, variant: str | None = None) -> Profile:
    """Return the profile of a family.

    variant: the generic number met on the board, such as "594", whose own figures then take precedence
    Raises ProfileError for a family or a variant that does not exist, and for a faulty file.
    """
    if family not in families():
        raise ProfileError(f"no profile of a family {family!r}; there are: {', '.join(families())}")
    path = _FOLDER / f"{family}.toml"
    return parse(path.read_text(encoding="utf-8"), path.name, variant)


def generic_number(text: str) -> tuple[str, str] | None:
    """Return (family, generic number) when a model name or value holds one as a whole number, else None.

    "xx494CN" holds 494; "4940", "1494" and "4.94" do not, and neither does a logic part such as 74HC594.
    """
    found = _whole_number().search(_LOGIC_PART.sub(" ", text))
    return (_family_by_number()[found[0]], found[0]) if found else None


@cache
def _family_by_number() -> dict[str, str]:
    """Return the family of every generic number; no two families share one."""
    return {number: family for family in families() for number in load(family).generic_numbers}


@cache
def _whole_number() -> re.Pattern[str]:
    """Return the pattern of a generic number: a digit or a decimal on either side makes it another one."""
    numbers = "|".join(_family_by_number())
    return re.compile(rf"(?<![0-9])(?<![0-9]\.)(?:{numbers})(?![0-9]|\.[0-9])")
