"""Diodes: which end is which, how much drops across them, and at which voltage a zener breaks down."""

from __future__ import annotations

import re
from dataclasses import dataclass

from ...grammar.netlist import Part
from ..quantity import Spread
from .parts import defaults


@dataclass(frozen=True, slots=True)
class Diode:
    """A diode on the network: whether it conducts is for the solution to tell."""

    part: str
    anode: str
    cathode: str


def diode_nets(part: Part) -> tuple[str, str]:
    """Return the anode's and the cathode's net: by pin name where given, else anode first as in a list."""
    first, second = part.pins
    if first.name.casefold() in ("k", "c", "cathode") or second.name.casefold() in ("a", "anode"):
        return second.net, first.net
    return first.net, second.net


def forward_drop() -> Spread:
    """Return the forward voltage (V) of a junction that conducts, whatever it is made of."""
    row = defaults()["junction"]["forward-drop"]
    return Spread(float(row["minimum"]), float(row["typical"]), float(row["maximum"]), "V")


# Reference designators that say zener (common practice, no source).
_ZENER_REFERENCE = re.compile(r"(?:ZD|DZ|VZ|Z)\d", re.IGNORECASE)

_VOLTS = r"(\d{1,3})(?:V(\d{1,2})|\.(\d{1,2})V?|V)?"

# A zener says so in words with its voltage (zener 5V1, TVS 16V, DZ12), or is a voltage and a power alone (15V
# 1W). A voltage beside a current is the reverse rating of a rectifier.
_NAMED_ZENER = re.compile(rf"(?<![A-Z])(?:ZENER|TVS|SUPPRESSOR|D?Z)[ _-]?{_VOLTS}(?![0-9A-Z])", re.IGNORECASE)
_BARE_ZENER = re.compile(r"(\d{1,3})(?:V(\d{1,2})|\.(\d{1,2})V|V)(?:[ ,/]*[0-9./]+ ?m?W)?", re.IGNORECASE)


def is_zener_by_name(part: Part) -> bool:
    """Tell whether a diode's reference designator says that it is a zener."""
    return _ZENER_REFERENCE.match(part.reference.rpartition("/")[2]) is not None


def zener_voltage(part: Part) -> float | None:
    """Return the zener voltage (V) that a diode's value or model states, None where neither does."""
    for text in (part.value.strip(), part.model.strip()):
        match = _NAMED_ZENER.search(text) or _BARE_ZENER.fullmatch(text)
        if match is not None:
            return float(f"{match[1]}.{match[2] or match[3] or '0'}")
    return None
