import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pwmlint.lint.quantity import Spread
from pwmlint.lint.units import QuantityTextError, quantity, read_range, registry


@pytest.mark.parametrize(
    ("text", "unit", "minimum", "maximum"),
    [
        ("12 V", "V", 12.0, 12.0),
        ("12V", "V", 12.0, 12.0),
        ("-5 mV", "V", -0.005, -0.005),
        ("10 V .. 15 V", "V", 10.0, 15.0),
        ("10 .. 15 V", "V", 10.0, 15.0),
        ("10..15V", "V", 10.0, 15.0),
        ("10 V … 15 V", "V", 10.0, 15.0),
        ("900 mV ... 1.1 V", "V", 0.9, 1.1),
        ("-10 degC .. 50 degC", "degC", -10.0, 50.0),
        ("-10 .. 50 °C", "degC", -10.0, 50.0),
        ("273.15 K", "degC", 0.0, 0.0),
        ("45 kHz .. 55 kHz", "Hz", 45e3, 55e3),
        ("1.5 us .. 4 µs", "s", 1.5e-6, 4e-6),
        ("4 \N{GREEK SMALL LETTER MU}s", "s", 4e-6, 4e-6),
        ("2 min", "s", 120.0, 120.0),
        ("4.7 kohm", "ohm", 4700.0, 4700.0),
        ("4.7 kΩ", "ohm", 4700.0, 4700.0),
        ("4.7 k\N{OHM SIGN}", "ohm", 4700.0, 4700.0),
        ("100 nF", "F", 100e-9, 100e-9),
        ("47 uH", "H", 47e-6, 47e-6),
        ("250 mW", "W", 0.25, 0.25),
        ("2 volts", "V", 2.0, 2.0),
        ("3 A", "A", 3.0, 3.0),
        ("20 mJ", "J", 0.02, 0.02),
        ("45 %", "", 0.45, 0.45),
        ("40 .. 45 %", "", 0.40, 0.45),
        ("0.45", "", 0.45, 0.45),
        (".5e1 V", "V", 5.0, 5.0),
    ],
)
def test_quantities_and_ranges(text: str, unit: str, minimum: float, maximum: float) -> None:
    spread = read_range(text, unit)
    assert spread.unit == unit
    assert (spread.minimum, spread.maximum) == pytest.approx((minimum, maximum), rel=1e-12)
    assert spread.nominal == pytest.approx((minimum + maximum) / 2, rel=1e-12)


@pytest.mark.parametrize(
    ("text", "unit", "column", "message"),
    [
        ("12", "V", 1, "no unit"),
        ("12 s", "V", 1, "no unit of this quantity"),
        ("10 V .. 15 s", "V", 9, "no unit of this quantity"),
        ("10 s .. 15 V", "V", 1, "no unit of this quantity"),
        ("12 parsec", "V", 1, "unknown unit"),
        ("12 Vs", "V", 1, "unknown unit"),
        ("12 Mhz", "Hz", 1, "unknown unit"),
        ("45", "Hz", 1, "no unit"),
        ("5 V", "", 1, "no unit of this quantity"),
        ("15 V .. 10 V", "V", 1, "backwards"),
        ("", "V", 1, "nothing"),
        ("10 V ..", "V", 8, "nothing"),
        (".. 10 V", "V", 1, "nothing"),
        ("1 V .. 2 V .. 3 V", "V", 8, "not a number"),
        ("__import__('os')", "V", 1, "not a number"),
        ("2*6 V", "V", 1, "not a number"),
        ("1.2.3 V", "V", 1, "not a number"),
        ("nan V", "V", 1, "not a number"),
        ("1e999 V", "V", 1, "not finite"),
        ("1e308 kV", "V", 1, "not finite"),
        ("1" * 201, "V", 1, "too long"),
    ],
)
def test_unreadable_quantities(text: str, unit: str, column: int, message: str) -> None:
    with pytest.raises(QuantityTextError, match=message) as caught:
        read_range(text, unit)
    assert caught.value.column == column
    assert caught.value.expected


def test_a_wrong_dimension_says_what_is_expected() -> None:
    with pytest.raises(QuantityTextError) as caught:
        read_range("50 V", "Hz")
    assert caught.value.expected == "a frequency such as 50 kHz"


def test_the_registry_is_ours_and_made_once() -> None:
    assert registry() is registry()
    assert "parsec" not in registry()
    assert quantity(12.0, "V") * quantity(2.0, "A") == quantity(24.0, "W")
    assert quantity(0.45, "").dimensionless


def test_a_spread_as_pint_quantities() -> None:
    assert Spread(4.9, 5.0, 5.1, "V").quantities == (
        quantity(4.9, "V"),
        quantity(5.0, "V"),
        quantity(5100.0, "mV"),
    )
    assert [one.magnitude for one in Spread(-10.0, 20.0, 50.0, "degC").quantities] == [-10.0, 20.0, 50.0]
    assert Spread.exact(0.5, "").quantities[0].dimensionless


@settings(deadline=None, max_examples=200)
@given(
    st.text(max_size=30) | st.text(alphabet="0123456789.-+eE VAsHzmkµ%°C\t", max_size=30),
    st.sampled_from(["V", "Hz", "degC", ""]),
)
def test_no_text_does_harm(text: str, unit: str) -> None:
    try:
        spread = read_range(text, unit)
    except QuantityTextError as error:
        refusal = error
    else:
        assert spread.minimum <= spread.nominal <= spread.maximum
        return
    assert 1 <= refusal.column <= len(text) + 1
    assert refusal.expected


@settings(deadline=None, max_examples=100)
@given(st.floats(-1e6, 1e6), st.floats(0, 1e6), st.sampled_from(["", "m", "k", "u"]))
def test_a_written_range_is_read_back(low: float, width: float, prefix: str) -> None:
    factor = {"": 1.0, "m": 1e-3, "k": 1e3, "u": 1e-6}[prefix]
    spread = read_range(f"{low!r} {prefix}V .. {low + width!r} {prefix}V", "V")
    assert spread.minimum == pytest.approx(low * factor, rel=1e-12)
    assert spread.maximum == pytest.approx((low + width) * factor, rel=1e-12)
