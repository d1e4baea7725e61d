import time

import pwmlint.grammar.values
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pwmlint.grammar.values import Value, ValueTextError, read_tolerance, read_value, says_not_fitted

QUANTITIES = (
    "resistance",
    "capacitance",
    "inductance",
    "voltage",
    "current",
    "power",
    "ratio",
    "temperature coefficient",
)


def read(text: str, quantity: str = "resistance") -> Value:
    return read_value(text, quantity, spice=False)


def simulate(text: str, quantity: str = "resistance") -> Value:
    return read_value(text, quantity, spice=True)


@pytest.mark.parametrize(
    ("text", "quantity", "number", "unit"),
    [
        ("10", "resistance", 10.0, "ohm"),
        ("0", "resistance", 0.0, "ohm"),
        ("0R", "resistance", 0.0, "ohm"),
        ("10k", "resistance", 10e3, "ohm"),
        ("10K", "resistance", 10e3, "ohm"),
        ("1M", "resistance", 1e6, "ohm"),
        ("1m", "resistance", 1e-3, "ohm"),
        ("1.5MEG", "resistance", 1.5e6, "ohm"),
        ("10mR", "resistance", 10e-3, "ohm"),
        ("10 mΩ", "resistance", 10e-3, "ohm"),
        ("4k7Ω", "resistance", 4700.0, "ohm"),
        ("4k7 ohm", "resistance", 4700.0, "ohm"),
        ("100 \N{OHM SIGN}", "resistance", 100.0, "ohm"),
        ("10kOhms", "resistance", 10e3, "ohm"),
        ("2_OHM", "resistance", 2.0, "ohm"),
        ("3M4", "resistance", 3.4e6, "ohm"),
        ("33,0402", "resistance", 33.0, "ohm"),
        ("1,5k", "resistance", 1500.0, "ohm"),
        ("1e3", "resistance", 1000.0, "ohm"),
        ("1e3k", "resistance", 1e6, "ohm"),
        ("4u7", "capacitance", 4.7e-6, "F"),
        ("0.1 µF", "capacitance", 0.1e-6, "F"),
        ("0.1 \N{GREEK SMALL LETTER MU}F", "capacitance", 0.1e-6, "F"),
        ("680UF", "capacitance", 680e-6, "F"),
        ("4700PF", "capacitance", 4700e-12, "F"),
        (".22uF", "capacitance", 0.22e-6, "F"),
        ("1.0UF", "capacitance", 1e-6, "F"),
        ("100 NF", "capacitance", 100e-9, "F"),
        ("0,01uF", "capacitance", 0.01e-6, "F"),
        ("1e-7", "capacitance", 1e-7, "F"),
        ("1 farad", "capacitance", 1.0, "F"),
        ("47uH", "inductance", 47e-6, "H"),
        ("4N7", "inductance", 4.7e-9, "H"),
        ("3u3H", "inductance", 3.3e-6, "H"),
        ("5V1", "voltage", 5.1, "V"),
        ("-12 V", "voltage", -12.0, "V"),
        ("24 VDC", "voltage", 24.0, "V"),
        ("16", "voltage", 16.0, "V"),
        ("800mA", "current", 0.8, "A"),
        ("2,5 A", "current", 2.5, "A"),
        ("1/4 W", "power", 0.25, "W"),
        ("250mW", "power", 0.25, "W"),
        ("0W5", "power", 0.5, "W"),
        ("5 %", "ratio", 0.05, ""),
        ("-5 %", "ratio", -0.05, ""),
        ("0.45", "ratio", 0.45, ""),
        ("100 ppm/K", "temperature coefficient", 100.0, "ppm/K"),
        ("±50ppm/°C", "temperature coefficient", 50.0, "ppm/K"),
        ("-30 ppm", "temperature coefficient", -30.0, "ppm/K"),
    ],
)
def test_property_text(text: str, quantity: str, number: float, unit: str) -> None:
    value = read(text, quantity)
    assert (value.number, value.unit) == (number, unit)


@pytest.mark.parametrize(
    ("text", "quantity", "expected"),
    [
        ("0.01uf,16V", "capacitance", Value(0.01e-6, "F", voltage=16.0)),
        ("10K,1%", "resistance", Value(10e3, "ohm", (-0.01, 0.01))),
        ("100K,1%,DNI", "resistance", Value(100e3, "ohm", (-0.01, 0.01), fitted=False)),
        ("0,DNI", "resistance", Value(0.0, "ohm", fitted=False)),
        ("10,1%,DNI", "resistance", Value(10.0, "ohm", (-0.01, 0.01), fitted=False)),
        ("10k (not fitted)", "resistance", Value(10e3, "ohm", fitted=False)),
        ("10k-1%", "resistance", Value(10e3, "ohm", (-0.01, 0.01))),
        ("2.2uH,2.6A", "inductance", Value(2.2e-6, "H", current=2.6)),
        ("150OHM800mA", "resistance", Value(150.0, "ohm", current=0.8)),
        ("150UF 35V", "capacitance", Value(150e-6, "F", voltage=35.0)),
        ("3.9 1W", "resistance", Value(3.9, "ohm", power=1.0)),
        ("10k 0,1% 1/4W", "resistance", Value(10e3, "ohm", (-0.001, 0.001), power=0.25)),
        ("100u/25V X7R +80/-20%", "capacitance", Value(100e-6, "F", (-0.2, 0.8), 25.0, dielectric="X7R")),
        ("1n NP0", "capacitance", Value(1e-9, "F", dielectric="C0G")),
        ("1n COG 50V 100V", "capacitance", Value(1e-9, "F", voltage=50.0, dielectric="C0G")),
        ("1u film +10%", "capacitance", Value(1e-6, "F", (0.0, 0.1), dielectric="film")),
        ("2p ±0.5pF", "capacitance", Value(2e-12, "F", (-0.25, 0.25))),
        ("2p +/- 10 %", "capacitance", Value(2e-12, "F", (-0.1, 0.1))),
        ("2p ±0.5V", "capacitance", Value(2e-12, "F")),
        ("10k 100%", "resistance", Value(10e3, "ohm")),
        ("10u -10/+100%", "capacitance", Value(10e-6, "F", (-0.1, 1.0))),
        ("RES 10k 0805 50ppm", "resistance", Value(10e3, "ohm")),
    ],
)
def test_what_stands_beside_the_value(text: str, quantity: str, expected: Value) -> None:
    value = read(text, quantity)
    assert value.tolerance == (None if expected.tolerance is None else pytest.approx(expected.tolerance))
    for name in ("number", "unit", "voltage", "power", "current", "fitted", "dielectric", "ambiguous"):
        assert getattr(value, name) == getattr(expected, name), name


@pytest.mark.parametrize(
    ("text", "quantity"),
    [
        ("", "resistance"),
        ("   ", "resistance"),
        ("open", "resistance"),
        ("C-POL", "capacitance"),
        ("0805-NC", "resistance"),
        ("*NOTE1", "resistance"),
        ("3PINH", "inductance"),
        ("RESH", "resistance"),
        ("10uF", "resistance"),
        ("10k", "capacitance"),
        ("10-20p", "capacitance"),
        ("B10K", "resistance"),
        ("10kX", "resistance"),
        ("nan", "resistance"),
        ("inf", "resistance"),
        ("{R0*2}", "resistance"),
    ],
)
def test_no_value(text: str, quantity: str) -> None:
    with pytest.raises(ValueTextError, match="no ") as caught:
        read(text, quantity)
    assert caught.value.expected


@pytest.mark.parametrize(("text", "quantity"), [(".1,0805", "capacitance"), ("33", "inductance")])
def test_a_capacitance_without_a_unit_is_not_guessed(text: str, quantity: str) -> None:
    with pytest.raises(ValueTextError, match="without a unit"):
        read(text, quantity)


@pytest.mark.parametrize(
    ("text", "column", "message"),
    [
        ("1e400", 1, "not finite"),
        ("  1e308T", 3, "not finite"),
        ("10k 1e999V", 1, "not finite"),
        ("-10k", 1, "negative resistance"),
        ("about -4k7", 7, "negative resistance"),
        ("9" * 401, 1, "too long"),
    ],
)
def test_impossible_values(text: str, column: int, message: str) -> None:
    for spice in (False, True):
        if message != "negative resistance" and spice and "T" not in text:
            continue
        with pytest.raises(ValueTextError, match=message) as caught:
            read_value(text, "resistance", spice=spice)
        assert caught.value.column == column


@pytest.mark.parametrize(
    ("text", "quantity"), [("1e13", "voltage"), ("-1e300", "voltage"), ("2e12", "current")]
)
def test_a_source_beyond_anything_on_a_board_is_refused(text: str, quantity: str) -> None:
    with pytest.raises(ValueTextError, match="beyond anything on a board"):
        simulate(text, quantity)


def test_a_rating_beyond_anything_on_a_board_is_refused() -> None:
    with pytest.raises(ValueTextError, match="beyond anything on a board"):
        read("10k 1e13V", "resistance")


@pytest.mark.parametrize("quantity", ["resistance", "capacitance", "inductance", "power"])
def test_negative_values_of_parts_are_errors(quantity: str) -> None:
    with pytest.raises(ValueTextError, match="negative"):
        simulate("-1e-3", quantity)


@pytest.mark.parametrize(
    ("text", "number"),
    [
        ("10", 10.0),
        ("10kOhm", 10e3),
        ("10 ohm", 10.0),
        ("1MEG", 1e6),
        ("1meg", 1e6),
        ("1MEGOHM", 1e6),
        ("1m", 1e-3),
        ("1T", 1e12),
        ("1g", 1e9),
        ("1e-3wwww", 1e-3),
        ("1d3", 1000.0),
        ("1.5D-3", 1.5e-3),
        ("100mil", 100 * 25.4e-6),
        ("+5", 5.0),
        ("1p", 1e-12),
        ("1n", 1e-9),
        ("1u", 1e-6),
        ("1µ", 1e-6),
    ],
)
def test_text_of_a_spice_list(text: str, number: float) -> None:
    value = simulate(text)
    assert value.number == pytest.approx(number, rel=1e-15)
    assert value.ambiguous == ""


@pytest.mark.parametrize(
    ("text", "quantity", "number", "sentence"),
    [
        ("4k7", "resistance", 4700.0, "read 4000 ohm"),
        ("4k7ohm", "resistance", 4700.0, "read 4000 ohm"),
        ("4R7", "resistance", 4.7, "read 4 ohm"),
        ("R47", "resistance", 0.47, "a model name"),
        ("2meg5", "resistance", 2.5e6, "read 2e+06 ohm"),
        ("4M7", "resistance", 4.7e6, "read 0.004 ohm"),
        ("4m7", "resistance", 4.7e-3, "read 0.004 ohm"),
        ("15n9", "capacitance", 15.9e-9, "read 1.5e-08 F"),
        ("4F7", "capacitance", 4.7e-15, "read 4e-15 F"),
        ("4R7", "inductance", 4.7e-6, "read 4 H"),
        ("1M", "resistance", 1e-3, "mega is written MEG"),
        ("1Mohm", "resistance", 1e-3, "mega is written MEG"),
        ("10milliohm", "resistance", 254e-6, "MIL as 25.4e-6"),
        ("1F", "capacitance", 1e-15, "F is femto"),
        ("5A", "current", 5.0, "atto"),
        ("1,5k", "resistance", 1.0, "comma"),
        ("10 k", "resistance", 10e3, "ends the value at the blank"),
        ("4.7 kohms 5%", "resistance", 4.7e3, "ends the value at the blank"),
        ("0.1 uF", "capacitance", 0.1e-6, "ends the value at the blank"),
        ("100 uH 3A", "inductance", 100e-6, "ends the value at the blank"),
        ("10 M", "resistance", 10e-3, "mega is written MEG"),
    ],
)
def test_traps_of_a_spice_list_are_said(text: str, quantity: str, number: float, sentence: str) -> None:
    value = simulate(text, quantity)
    assert value.number == pytest.approx(number, rel=1e-12)
    assert sentence in value.ambiguous


@pytest.mark.parametrize(
    ("text", "quantity", "number", "sentence"),
    [
        ("4R7", "inductance", 4.7e-6, "custom outside IEC 60062"),
        ("10MF", "capacitance", 10e-6, "microfarad"),
        ("1,5", "resistance", 1.0, "comma"),
    ],
)
def test_traps_of_property_text_are_said(text: str, quantity: str, number: float, sentence: str) -> None:
    value = read(text, quantity)
    assert value.number == number
    assert sentence in value.ambiguous


def test_a_spice_list_without_a_millihenry_trap() -> None:
    """Milli is what both the standard and the simulators read on inductors and capacitors."""
    assert simulate("10mH", "inductance") == Value(10e-3, "H")
    assert simulate("10000mF", "capacitance") == Value(10.0, "F")


def test_ratings_stand_beside_the_value_of_a_spice_list_too() -> None:
    assert simulate("10u,25V", "capacitance") == Value(10e-6, "F", voltage=25.0)
    assert simulate("10k 1%") == Value(10e3, "ohm", (-0.01, 0.01))
    with pytest.raises(ValueTextError, match="no capacitance"):
        simulate("4R7", "capacitance")


@pytest.mark.parametrize(
    ("text", "low", "high"),
    [
        ("5 %", -0.05, 0.05),
        ("±5%", -0.05, 0.05),
        ("+/- 5 %", -0.05, 0.05),
        ("+5%", 0.0, 0.05),
        ("-20/+80 %", -0.2, 0.8),
        ("+80%/-20%", -0.2, 0.8),
        ("J", -0.05, 0.05),
        ("Z", -0.2, 0.8),
        (" 5 ", -0.05, 0.05),
        ("0,5 %", -0.005, 0.005),
    ],
)
def test_tolerances(text: str, low: float, high: float) -> None:
    assert read_tolerance(text) == pytest.approx((low, high))


@pytest.mark.parametrize(
    "text", ["", "X", "loose", "-5", "100", "150 %", "1e400 %", "+1e400%", "5 V", "5 % 1 W", "9" * 500]
)
def test_no_tolerance(text: str) -> None:
    with pytest.raises(ValueTextError, match="not a tolerance"):
        read_tolerance(text)


@pytest.mark.parametrize(
    "text", ["DNP", "10K,1%,DNI", "dnf", "open", "0805-NC", "do not fit", "10k unpopulated"]
)
def test_not_fitted(text: str) -> None:
    assert says_not_fitted(text)


@pytest.mark.parametrize("text", ["", "10k", "100 NF", "no name", "X7R", "DNPX"])
def test_fitted(text: str) -> None:
    assert not says_not_fitted(text)


SCALES = {"p": -12, "n": -9, "u": -6, "m": -3, "": 0, "k": 3}


@settings(deadline=None, max_examples=200)
@given(st.integers(1, 999_999), st.integers(0, 5), st.sampled_from(sorted(SCALES)), st.sampled_from("FHV"))
def test_printed_values_are_read_back_to_the_bit(digits: int, point: int, prefix: str, unit: str) -> None:
    quantity = {"F": "capacitance", "H": "inductance", "V": "voltage"}[unit]
    if (unit == "H" and prefix == "p") or (unit in "FH" and prefix == "k") or (unit == "V" and prefix == "p"):
        prefix = "n"
    number = float(f"{digits}e{-point}")
    text = f"{number!r}".removesuffix(".0")
    expected = float(f"{text}e{SCALES[prefix]}") if "e" not in text else number * 10.0 ** SCALES[prefix]
    assert read(f"{text}{prefix}{unit}", quantity).number == expected
    assert read(f"{text} {prefix}{unit}", quantity).number == expected


@settings(deadline=None, max_examples=200)
@given(st.integers(1, 999), st.integers(1, 99), st.sampled_from(["R", "K", "M", "G", "k"]))
def test_a_code_and_its_decimal_reading_agree(whole: int, fraction: int, letter: str) -> None:
    factor = {"R": "", "K": "k", "k": "k", "M": "M", "G": "G"}[letter]
    assert read(f"{whole}{letter}{fraction}").number == read(f"{whole}.{fraction}{factor}Ω").number


@settings(deadline=None, max_examples=300)
@given(
    st.text(alphabet="0123456789.,+-±/%()_ \tkKmMuµnpFRHVWAΩeEgGXdDJ\x00é", max_size=40)
    | st.text(max_size=40),
    st.sampled_from(QUANTITIES),
    st.booleans(),
)
def test_no_text_does_harm(text: str, quantity: str, spice: bool) -> None:
    says_not_fitted(text)
    try:
        value = read_value(text, quantity, spice=spice)
    except ValueTextError as error:
        refusal = error
    else:
        assert abs(value.number) < float("inf")
        assert value == read_value(text, quantity, spice=spice)
        return
    assert 1 <= refusal.column <= len(text) + 1
    assert str(refusal)
    assert refusal.expected


@pytest.mark.parametrize(
    "filler", ["1", " ", "+1", "-", "1,", "µ", "k", ".", "5%", "±", "/", "1e", "_", "no "]
)
def test_hostile_texts_cost_little(filler: str) -> None:
    text = ("1" + filler * 400)[:400]
    start = time.process_time()
    for quantity in QUANTITIES:
        for spice in (False, True):
            try:
                read_value(text, quantity, spice=spice)
            except ValueTextError:
                continue
    assert time.process_time() - start < 2.0


def _parsed_again(word: str, kind: str) -> None:
    pytest.fail(f"{word} parsed again as {kind}")


def test_a_text_is_parsed_once(monkeypatch: pytest.MonkeyPatch) -> None:
    read("4k7 1% 77V")
    monkeypatch.setattr(pwmlint.grammar.values, "read_word", _parsed_again)
    assert read("4k7 1% 77V").voltage == 77.0
    with pytest.raises(ValueTextError):
        read("")
