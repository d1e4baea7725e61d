"""How much of a part's rating may be used, by a named policy. All figures are data, in derating.toml."""

from __future__ import annotations

import tomllib
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from typing import Any

DEFAULT_POLICY = "commercial"

# The row of the capacitors whose dielectric nobody tells.
UNMARKED = "unmarked"


@dataclass(frozen=True, slots=True)
class Derating:
    """The share (0 to 1) of a rating that a policy leaves, and its source."""

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


def resistor_voltage(policy: str = DEFAULT_POLICY) -> Derating:
    """Return the share of a resistor's greatest working voltage that may be used."""
    table = _tables()[policy]["resistor-voltage"]
    return Derating(float(table["factor"]), policy, str(table["source"]))


def capacitor_voltage(
    dielectric: str, ambient: float, rated: float, policy: str = DEFAULT_POLICY
) -> Derating:
    """Return the share of a capacitor's rated voltage that may be used at `ambient` (degC).

    dielectric: a name of dielectrics.toml, or UNMARKED
    rated:      the rated voltage (V): low ones are derated less in some families
    The share is 0 above the temperature up to which the policy allows the family at all.
    """
    table = _tables()[policy]["capacitor"][dielectric]
    share = float(table["factor"])
    if "low_rated" in table and rated <= float(table["low_rated"]):
        share = float(table["factor_low_rated"])
    if "hottest" in table and ambient > float(table["hottest"]):
        share = 0.0
    elif "full_up_to" in table and ambient > float(table["full_up_to"]):
        start, end = float(table["full_up_to"]), float(table["hottest"])
        share += (float(table["factor_when_hot"]) - share) * (ambient - start) / (end - start)
    return Derating(share, policy, str(table["source"]))


def semiconductor(kind: str, quantity: str, policy: str = DEFAULT_POLICY) -> Derating:
    """Return the share of a semiconductor's rating that may be used.

    kind:     "diode", "zener", "transistor", "mosfet", "linear-circuit" or "digital-circuit" ...
    quantity: such as "reverse-voltage", "drain-voltage", "gate-voltage", "current", "power"
    Raises KeyError where the policy has no figure for them.
    """
    table = _tables()[policy]["semiconductor"][kind]
    return Derating(float(table[quantity]), policy, str(table["source"]))


def plastic_supply_limit(nominal: float, maximum: float, kind: str, policy: str) -> float:
    """Return the greatest supply (V) of an integrated circuit in plastic, by its nominal and maximum supply.

    Raises KeyError where the policy has no figure for plastic.
    """
    return nominal + semiconductor(kind, "plastic-supply", policy).share * (maximum - nominal)


def junction_limit(maximum: float, kind: str, policy: str = DEFAULT_POLICY) -> float:
    """Return the junction temperature (degC) that a policy allows a part whose rating is `maximum`.

    kind: "discrete", "linear-circuit" or "digital-circuit"
    """
    table = _tables()[policy]["junction"][kind]
    allowed = min(float(table["factor"]) * maximum, maximum - float(table["below"]))
    return min(allowed, float(table["most"])) if "most" in table else allowed


def ageing_of(kind: str, policy: str = DEFAULT_POLICY) -> float:
    """Return the drift (ratio) over life that a policy adds to the tolerance of a kind of part."""
    return float(_tables()[policy]["ageing"].get(kind, 0.0))


@cache
def _tables() -> dict[str, Any]:
    return tomllib.loads(files("pwmlint.lint").joinpath("derating.toml").read_text(encoding="utf-8"))
