"""A line of a SPICE-style list, read by itself."""

from __future__ import annotations

from pwmlint.grammar.netlist import Part
from pwmlint.grammar.spice import read_spice

MODELS = """
.model RMOD R
.model DX D(Is=1e-14)
.model QX NPN(Bf=200)
.model MX NMOS
.model VX VDMOS(Rds=1m)
.model JX NJF
.model ZX NMF
.model SX SW(Ron=1)
.model OX LTRA
"""


def part(line: str, reference: str = "", cards: str = "") -> Part:
    netlist = read_spice(f"irrigation pump\n{line}\n{cards}\n", "pump.cir")
    return netlist.parts[reference] if reference else next(iter(netlist.parts.values()))


def shape(line: str, cards: str = MODELS) -> tuple[str, str, str, str]:
    found = part(line, cards=cards)
    return found.element, " ".join(pin.net for pin in found.pins), found.value, found.model
