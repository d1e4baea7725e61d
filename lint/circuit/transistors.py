"""Which terminal of a transistor is which, and of what kind it is."""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Literal, TypeAlias

from ...grammar.netlist import Part
from .graph import Circuit
from .potentials import Potential

Polarity: TypeAlias = Literal["N", "P", ""]

_OUTPUT = frozenset({"d", "drain", "c", "collector"})
_COMMON = frozenset({"s", "source", "e", "emitter"})

# What a library calls a transistor of the one kind or the other.
_TEXT_N = re.compile(r"NPN|N-?MOS|N-?FET|N-?CH|NJF", re.IGNORECASE)
_TEXT_P = re.compile(r"PNP|P-?MOS|P-?FET|P-?CH|PJF", re.IGNORECASE)
_TEXT_FIELD_EFFECT = re.compile(r"MOS|FET|[NP]-?CH|JF\b", re.IGNORECASE)
_TEXT_BIPOLAR = re.compile(r"NPN|PNP|BJT", re.IGNORECASE)

# A SPICE-style list states the three nodes in this order, whatever the transistor is made of.
_IN_LIST_ORDER = frozenset({"Q", "M", "J", "Z", "X"})


@dataclass(frozen=True, slots=True)
class Transistor:
    """A transistor with the nets of its terminals.

    control: gate or base; output: drain or collector; common: source or emitter
    field_effect: False for a bipolar one, None where nothing tells
    polarity:     "N" for NPN and N-channel, "P" for PNP and P-channel, empty where nothing tells
    assumption:   a sentence where the polarity was read off the wiring, else empty
    """

    reference: str
    control: str
    output: str
    common: str
    field_effect: bool | None
    polarity: Polarity
    assumption: str = ""

    @property
    def mains(self) -> tuple[str, str]:
        """Return the nets between which the transistor switches."""
        return (self.output, self.common)

    def other(self, net: str) -> str:
        """Return the main terminal's net opposite to `net`."""
        return self.common if net == self.output else self.output

    @property
    def kind(self) -> str:
        """Return what it is, in words: "P-channel MOSFET", "NPN", "transistor"."""
        if self.field_effect:
            return f"{self.polarity}-channel MOSFET" if self.polarity else "MOSFET"
        if self.field_effect is None:
            return "transistor"
        return {"N": "NPN", "P": "PNP", "": "bipolar transistor"}[self.polarity]


def read_transistor(circuit: Circuit, known: Mapping[str, Potential], part: Part) -> Transistor | None:
    """Return a transistor's terminals, None where neither names nor the order of the nodes tell them."""
    terminals = _terminals(part)
    if circuit.kind(part) != "transistor" or terminals is None:
        return None
    control, output, common = terminals
    kind = circuit.netlist.models.get(part.model.casefold(), "")
    text = f"{kind} {part.model} {part.value}"
    polarity = _polarity(text)
    assumption = ""
    if not polarity:
        polarity, assumption = _by_wiring(part.reference, known, output, common)
    return Transistor(
        part.reference, control, output, common, _field_effect(part, text), polarity, assumption
    )


def _terminals(part: Part) -> tuple[str, str, str] | None:
    """Return the nets of control, output and common terminal."""
    named = {pin.name.casefold(): pin.net for pin in part.pins}
    # A MOSFET may name its bulk B, which is a base on a bipolar transistor: the gate goes first.
    found: list[str] = []
    for names in (("g", "gate", "b", "base"), _OUTPUT, _COMMON):
        net = next((named[name] for name in names if name in named), "")
        found.append(net)
    if all(found):
        return (found[0], found[1], found[2])
    if part.element in _IN_LIST_ORDER and part.pins_known == "positions" and len(part.pins) >= 3:
        output, control, common = (pin.net for pin in part.pins[:3])
        return (control, output, common)
    return None


def _polarity(text: str) -> Polarity:
    n_type, p_type = bool(_TEXT_N.search(text)), bool(_TEXT_P.search(text))
    if n_type == p_type:
        return ""
    return "N" if n_type else "P"


def _field_effect(part: Part, text: str) -> bool | None:
    if part.element in ("M", "J", "Z", "Q"):
        return part.element != "Q"
    named = {pin.name.casefold() for pin in part.pins}
    if named & {"g", "gate"} or _TEXT_FIELD_EFFECT.search(text):
        return True
    if named & {"b", "base"} or _TEXT_BIPOLAR.search(text):
        return False
    return None


def _by_wiring(
    reference: str, known: Mapping[str, Potential], output: str, common: str
) -> tuple[Polarity, str]:
    """Tell the polarity from the side that stands on ground or on a supply."""
    if _is_ground(known, common):
        return "N", f"{reference} taken as N type: its source or emitter is at ground"
    if _is_positive(known, common):
        return "P", f"{reference} taken as P type: its source or emitter is on {common}"
    if _is_positive(known, output):
        return "N", f"{reference} taken as N type: its drain or collector is on {output}"
    return "", ""


def _is_ground(known: Mapping[str, Potential], net: str) -> bool:
    return net in known and known[net].origin == "ground"


def _is_positive(known: Mapping[str, Potential], net: str) -> bool:
    return net in known and known[net].spread.minimum > 0
