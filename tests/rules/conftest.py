"""A sound board for the rules: an irrigation pump's supply, 12 V from a battery by a buck around a 494."""

from __future__ import annotations

from collections.abc import Callable

import pytest

Board = Callable[..., str]

_PARTS = {
    "U1": "FB SET COMP DTC CT RT 0 DRN 0 0 DRN VBAT 0 REF LIM SNS 494",
    "R1": "RT 0 12k 1%",
    "C1": "CT 0 10n 5%",
    "R2": "REF DTC 10k 1%",
    "R3": "DTC 0 1k 1%",
    "C2": "REF DTC 6.8u 10%",
    "R4": "REF SET 5.1k 1%",
    "R5": "SET 0 5.1k 1%",
    "R6": "VOUT FB 3.83k 1%",
    "R7": "FB 0 1k 1%",
    "R8": "COMP CZ 47k",
    "C3": "CZ SET 10n",
    "R9": "REF LIM 9.1k 1%",
    "R10": "LIM 0 1k 1%",
    "R11": "RTN SNS 1k",
    "R12": "RTN 0 0.1 1%",
    "R13": "VBAT GATE 1k",
    "R14": "GATE DRN 100",
    "M1": "SW GATE VBAT VBAT PM",
    "D1": "0 SW DS",
    "L1": "SW VOUT 100u",
    "C4": "VOUT 0 470u",
    "J1": "VBAT 0 BATTERY",
    "J2": "VOUT RTN PUMP",
}


@pytest.fixture
def pump() -> Board:
    """Return a function that writes the pump's board as a SPICE-style list.

    Positional arguments are lines to add; keywords change parts (`R6="VOUT FB 5.1k"`), None takes one out.
    """

    def write(*more: str, **changes: str | None) -> str:
        parts = {**_PARTS, **changes}
        lines = [f"{reference} {text}" for reference, text in parts.items() if text is not None]
        return "\n".join(["irrigation pump", *lines, *more, ".model PM PMOS", ".model DS D", ".end", ""])

    return write


@pytest.fixture
def without_pins() -> Callable[..., str]:
    """Return a function that writes the lines of a brief which map U1's pins, but not the numbers given."""
    functions = ["1IN+", "1IN-", "FEEDBACK", "DTC", "CT", "RT", "GND", "C1", "E1", "E2", "C2", "VCC"]
    functions += ["OUTPUT CTRL", "REF", "2IN-", "2IN+"]

    def write(*numbers: int) -> str:
        pins = ["-" if number in numbers else name for number, name in enumerate(functions, start=1)]
        return f"\n[controllers.U1]\npins = {pins}\n"

    return write


@pytest.fixture
def over_voltage() -> dict[str, str]:
    """What makes the second amplifier of the pump take over at 2.5 V x 5.7 = 14.25 V of the same output."""
    return {
        "R9": "REF LIM 5.1k 1%",
        "R10": "LIM 0 5.1k 1%",
        "R11": "VOUT SNS 4.7k 1%",
        "R12": "SNS 0 1k 1%",
        "J2": "VOUT 0 PUMP",
    }
