import re

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pwmlint.lint.quantity import Spread, engineering, percent

PREFIXES = {"p": 1e-12, "n": 1e-9, "µ": 1e-6, "m": 1e-3, "": 1.0, "k": 1e3, "M": 1e6, "G": 1e9}


@pytest.mark.parametrize(
    ("value", "unit", "text"),
    [
        (4700.0, "ohm", "4.70 kΩ"),
        (0.0, "V", "0 V"),
        (-0.0, "V", "0 V"),
        (0.0, "", "0"),
        (1.0, "V", "1.00 V"),
        (999.4, "V", "999 V"),
        (999.6, "V", "1.00 kV"),
        (-1.5e-6, "s", "-1.50 µs"),
        (47e-12, "F", "47.0 pF"),
        (1e-15, "F", "0.00100 pF"),
        (2.5e13, "ohm", "25000 GΩ"),
        (9e17, "ohm", "900000000 GΩ"),
        (-1e300, "ohm", "-1.00e+300 Ω"),
        (50.0, "degC", "50.0 °C"),
        (1234.0, "degC", "1230 °C"),
        (0.0451, "", "0.0451"),
        (12345.0, "", "12300"),
        (float("inf"), "A", "∞ A"),
        (float("-inf"), "A", "-∞ A"),
    ],
)
def test_engineering_notation(value: float, unit: str, text: str) -> None:
    assert engineering(value, unit) == text


def test_digits() -> None:
    assert engineering(1234.5, "Hz", 4) == "1.234 kHz"  # half to even, as the decimal text has it
    assert engineering(1234.5, "Hz", 2) == "1.2 kHz"
    assert engineering(1e3, "Hz", 1) == "1 kHz"


def test_not_a_number_is_no_quantity() -> None:
    with pytest.raises(ValueError, match="not a number"):
        engineering(float("nan"), "V")


@settings(deadline=None, max_examples=300)
@given(st.floats(1e-12, 9.99e11) | st.floats(-9.99e11, -1e-12), st.integers(1, 6))
def test_engineering_notation_reads_back_within_its_digits(value: float, digits: int) -> None:
    match = re.fullmatch(r"(-?[0-9.]+) ([pnµmkMG]?)V", engineering(value, "V", digits))
    assert match
    read = float(match[1]) * PREFIXES[match[2]]
    assert abs(read - value) <= abs(value) * 0.5 * 10 ** (1 - digits) * (1 + 1e-9)
    assert 1 <= abs(float(match[1])) <= 1000 or abs(value) >= 1e12


@pytest.mark.parametrize(
    ("ratio", "digits", "text"),
    [
        (0.0451, 3, "4.51 %"),
        (0.05, 3, "5 %"),
        (0.105, 3, "10.5 %"),
        (1.0, 3, "100 %"),
        (-0.21, 2, "-21 %"),
        (12.345, 3, "1230 %"),
        (0.0, 3, "0 %"),
        (float("inf"), 3, "∞ %"),
    ],
)
def test_percent(ratio: float, digits: int, text: str) -> None:
    assert percent(ratio, digits) == text


def test_a_spread_is_ordered() -> None:
    with pytest.raises(ValueError, match="not a spread"):
        Spread(2.0, 1.0, 3.0, "V")
    with pytest.raises(ValueError, match="not a spread"):
        Spread(1.0, float("nan"), 3.0, "V")
    assert Spread(1.0, 2.0, float("inf"), "A").maximum == float("inf")


def test_a_spread_in_words() -> None:
    assert str(Spread.exact(5.0, "V")) == "5.00 V"
    assert str(Spread(4.9, 5.0, 5.1, "V")) == "5.00 V (4.90 .. 5.10 V)"
    assert str(Spread(0.9, 1.0, 1.1, "V")) == "1.00 V (900 mV .. 1.10 V)"
    assert str(Spread(0.4, 0.45, 0.5, "")) == "0.450 (0.400 .. 0.500)"
    assert str(Spread(1.0, 2.0, float("inf"), "A")) == "2.00 A (1.00 .. ∞ A)"
    assert Spread(4.9, 5.0, 5.1, "V").text(2) == "5.0 V (4.9 .. 5.1 V)"
