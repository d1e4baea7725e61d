"""What a chip resistor usually stands, by the code of its case: a hint, never a rating that someone told."""

from __future__ import annotations

import re
import tomllib
from dataclasses import dataclass
from functools import cache
from importlib.resources import files

# A code of four digits that is no piece of a longer number.
_CODE = re.compile(r"(?<![0-9])[0-9]{4}(?![0-9])")

# Smaller ones are chosen for want of room, and by their name (common practice, no source).
_SMALLEST_USUAL = "0402"

SOURCE = "thick-film chip resistors of this case, common makers' data"


@dataclass(frozen=True, slots=True)
class Package:
    """A chip resistor's case: its code in hundredths of an inch, power in W at 70 degC, voltage in V."""

    code: str
    power: float
    voltage: float


def package_of(text: str) -> Package | None:
    """Return the case that a package or footprint name contains, None where it contains no known code.

    "0805", "R_0603_1608Metric" and "RES1206" are read by their first code; a code that stands for two cases,
    such as 0603, is taken in hundredths of an inch.
    """
    for code in _CODE.findall(text):
        found = _packages().get(code) or _packages().get(_inch_codes().get(code, ""))
        if found is not None:
            return found
    return None


def smallest_usual() -> Package:
    """Return the smallest case that is fitted without being asked for: what it stands, a resistor stands."""
    return _packages()[_SMALLEST_USUAL]


@cache
def _packages() -> dict[str, Package]:
    return {code: Package(code, float(row["power"]), float(row["voltage"])) for code, row in _table().items()}


@cache
def _inch_codes() -> dict[str, str]:
    return {str(row["metric"]): code for code, row in _table().items()}


@cache
def _table() -> dict[str, dict[str, str | float]]:
    return tomllib.loads(files("pwmlint.lint").joinpath("packages.toml").read_text(encoding="utf-8"))
