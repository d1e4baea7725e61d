"""How much of a part's rating may be used, by a named policy."""

from __future__ import annotations

import tomllib
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from typing import Any

DEFAULT_POLICY = "commercial"


@dataclass(frozen=True, slots=True)
class Derating:
    """The share (0 to 1) of a rating that a policy leaves at an ambient temperature, and its source."""

    share: float
    policy: str
    source: str


def policies() -> tuple[str, ...]:
    """Return the names of the policies that a brief may choose."""
    return tuple(_tables())


def resistor_power(ambient: float, policy: str = DEFAULT_POLICY) -> Derating:
    """Return the share of a resistor's rated power that may be used at `ambient` (degC).

    Raises KeyError for a policy that is not among `policies()`.
    """
    table = _tables()[policy]["resistor"]
    full, zero = float(table["full_up_to"]), float(table["zero_at"])
    left = 1.0 if ambient <= full else max(0.0, (zero - ambient) / (zero - full))
    return Derating(float(table["factor"]) * left, policy, str(table["source"]))


def ageing_of(kind: str, policy: str = DEFAULT_POLICY) -> float:
    """Return the drift (ratio) over life that a policy adds to the tolerance of a kind of part."""
    return float(_tables()[policy]["ageing"].get(kind, 0.0))


@cache
def _tables() -> dict[str, Any]:
    return tomllib.loads(files("pwmlint.lint").joinpath("derating.toml").read_text(encoding="utf-8"))
