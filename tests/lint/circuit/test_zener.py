"""A zener's voltage is read from its value or model; a rectifier's rating is none."""

from __future__ import annotations

import pytest
from pwmlint.grammar import Part, Place
from pwmlint.lint.circuit.diodes import zener_voltage


def diode(value: str, model: str = "") -> Part:
    return Part("D1", "D", value, model, (), Place("weather-mast.cir", 2, 1))


@pytest.mark.parametrize(
    ("text", "volts"),
    [("15V", 15.0), ("5V1", 5.1), ("12V 1W", 12.0), ("zener 5V1", 5.1), ("DZ12", 12.0), ("TVS 16V", 16.0)],
)
def test_a_zener_states_its_voltage(text: str, volts: float) -> None:
    assert zener_voltage(diode(text)) == volts
    assert zener_voltage(diode("", text)) == volts


@pytest.mark.parametrize("text", ["", "SCHOTTKY 1A 40V", "40V 1A", "DSCH", "DTVS", "QZ", "4148"])
def test_other_diodes_are_not_taken_for_zeners(text: str) -> None:
    assert zener_voltage(diode(text)) is None
