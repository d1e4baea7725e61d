"""Marking codes of IEC 60062:2016.

The letters and their multipliers are those of the standard's tables for resistance and capacitance; the
tolerance letters are from memory, F for 1 % and K for 10 % seen in a source.
"""

import pytest
from pwmlint.grammar.values import read_tolerance, read_value

RESISTANCES = [
    # code, ohm
    ("R10", 0.1),
    ("R47", 0.47),
    ("4R7", 4.7),
    ("470R", 470.0),
    ("4K7", 4700.0),
    ("4k7", 4700.0),
    ("47K3", 47300.0),
    ("1M0", 1e6),
    ("2M2", 2.2e6),
    ("4M7", 4.7e6),
    ("10G", 10e9),
    ("1T0", 1e12),
    ("4L7", 4.7e-3),
    ("5L00", 5e-3),
]

CAPACITANCES = [
    # code, farad
    ("p10", 0.1e-12),
    ("p47", 0.47e-12),
    ("4p7", 4.7e-12),
    ("100p", 100e-12),
    ("n33", 0.33e-9),
    ("2n2", 2.2e-9),
    ("100n", 100e-9),
    ("2u2", 2.2e-6),
    ("2µ2", 2.2e-6),
    ("1μ0", 1e-6),
    ("1m5", 1.5e-3),
    ("1F0", 1.0),
]

TOLERANCES = [
    # letter, fractions
    ("E", -0.00005, 0.00005),
    ("L", -0.0001, 0.0001),
    ("P", -0.0002, 0.0002),
    ("W", -0.0005, 0.0005),
    ("B", -0.001, 0.001),
    ("C", -0.0025, 0.0025),
    ("D", -0.005, 0.005),
    ("F", -0.01, 0.01),
    ("G", -0.02, 0.02),
    ("H", -0.03, 0.03),
    ("J", -0.05, 0.05),
    ("K", -0.10, 0.10),
    ("M", -0.20, 0.20),
    ("N", -0.30, 0.30),
    ("Q", -0.10, 0.30),
    ("T", -0.10, 0.50),
    ("S", -0.20, 0.50),
    ("Z", -0.20, 0.80),
]

# On capacitors below 10 pF the letter is absolute, in farad (from memory).
SMALL_CAPACITORS = [("B", 0.1e-12), ("C", 0.25e-12), ("D", 0.5e-12), ("F", 1e-12), ("G", 2e-12)]


@pytest.mark.construct("C codes of resistance")
@pytest.mark.parametrize(("code", "ohm"), RESISTANCES)
def test_resistance_codes(code: str, ohm: float) -> None:
    assert read_value(code, "resistance", spice=False).number == ohm


@pytest.mark.construct("C codes of capacitance")
@pytest.mark.parametrize(("code", "farad"), CAPACITANCES)
def test_capacitance_codes(code: str, farad: float) -> None:
    assert read_value(code, "capacitance", spice=False).number == farad


@pytest.mark.construct("C tolerance letters")
@pytest.mark.parametrize(("letter", "low", "high"), TOLERANCES)
def test_tolerance_letters_behind_a_code(letter: str, low: float, high: float) -> None:
    for code, ohm in (("4K7", 4700.0), ("4R7", 4.7), ("R10", 0.1)):
        value = read_value(code + letter, "resistance", spice=False)
        assert value.number == ohm
        assert value.tolerance == pytest.approx((low, high))
    assert read_tolerance(letter) == pytest.approx((low, high))


@pytest.mark.construct("C a letter that multiplies, a further one that is the tolerance")
@pytest.mark.parametrize(
    ("code", "quantity", "number", "tolerance"),
    [
        # A code has one multiplier letter; a further trailing letter is the tolerance.
        ("10K", "resistance", 10e3, None),
        ("10KK", "resistance", 10e3, 0.10),
        ("1K5K", "resistance", 1.5e3, 0.10),
        ("10KF", "resistance", 10e3, 0.01),
        ("4K7F", "resistance", 4.7e3, 0.01),
        ("4K7J", "resistance", 4.7e3, 0.05),
        ("R10F", "resistance", 0.1, 0.01),
        ("470RM", "resistance", 470.0, 0.20),
        ("1R0K", "resistance", 1.0, 0.10),
        ("10MF", "resistance", 10e6, 0.01),
        ("100nK", "capacitance", 100e-9, 0.10),
        ("2n2J", "capacitance", 2.2e-9, 0.05),
        ("100nF", "capacitance", 100e-9, None),  # the unit, not 1 %
        ("4n7F", "capacitance", 4.7e-9, None),
    ],
)
def test_one_letter_multiplies_and_a_further_one_is_the_tolerance(
    code: str, quantity: str, number: float, tolerance: float | None
) -> None:
    value = read_value(code, quantity, spice=False)
    assert value.number == number
    assert value.tolerance == (None if tolerance is None else pytest.approx((-tolerance, tolerance)))


@pytest.mark.parametrize(("letter", "farad"), SMALL_CAPACITORS)
def test_tolerance_letters_of_small_capacitors_are_absolute(letter: str, farad: float) -> None:
    # F is left out of this one: behind a capacitor's code we take it for the unit.
    if letter == "F":
        assert read_value("4p7F", "capacitance", spice=False).tolerance is None
        return
    value = read_value("4p7" + letter, "capacitance", spice=False)
    assert value.tolerance == pytest.approx((-farad / 4.7e-12, farad / 4.7e-12))
    ten = read_value("10p" + letter, "capacitance", spice=False)
    assert ten.tolerance is not None
    assert ten.tolerance[1] < 0.03  # from 10 pF on the letter is a percentage again
