"""The sheet of an orchard's frost fan: a 494-class controller, single-ended, with both loops in use."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint.design import Design

FanOf = Callable[..., Design]

# 5 V out of 2.5 V at both inputs; 1 V across 0.1 ohm: 10 A. After SLVA001 as remembered, but for the parts
# that do not matter to direct current.
FAN = {
    "U1": "U1 SENSE SET COMP DTC CT RT 0 DRIVE 0 0 DRIVE VCC MODE VREF LIMIT SHUNT 494",
    "V1": "V1 VCC 0 32",
    "R3": "R3 VREF SET 5.1k tol=0",
    "R4": "R4 SET 0 5.1k tol=0",
    "R8": "R8 FAN SENSE 5.1k tol=0",
    "R9": "R9 SENSE 0 5.1k tol=0",
    "R5": "R5 VREF LIMIT 4k tol=0",
    "R6": "R6 LIMIT 0 1k tol=0",
    "R13": "R13 SHUNT 0 0.1 tol=0",
    "R7": "R7 DTC 0 1k tol=0",
    "R2": "R2 VREF DTC 10k tol=0",
    "C2": "C2 VREF DTC 2.5u",
    "R1": "R1 RT 0 50k tol=0",
    "C1": "C1 CT 0 1n tol=0",
    "R12": "R12 MODE 0 0",
    "Q1": "Q1 SW DRIVE VCC QP",
    "L1": "L1 SW FAN 140u",
    "D1": "D1 SHUNT SW DS",
    "C3": "C3 FAN 0 220u",
    "models": ".model QP pnp\n.model DS d",
}


@pytest.fixture
def fan_of(design_of: Callable[..., Design]) -> FanOf:
    """Return a function that makes the fan's design, lines left out, replaced or added by name."""

    def make(brief: str = "", **changed: str) -> Design:
        lines = [line for line in (FAN | changed).values() if line]
        return design_of("\n".join(lines), brief=brief)

    return make
