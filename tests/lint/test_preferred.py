from math import log

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pwmlint.lint.preferred import is_preferred, nearest, nearest_pair, neighbours, next_wattage, series

NAMES = ("E3", "E6", "E12", "E24", "E48", "E96", "E192")
names = st.sampled_from(NAMES)
values = st.floats(1e-12, 1e9)


def all_values(name: str) -> list[float]:
    return [float(f"{value}e{decade}") for decade in range(-13, 11) for value in series(name)]


@settings(deadline=None, max_examples=100)
@given(values, names)
def test_nearest_is_really_nearest(value: float, name: str) -> None:
    best = min(abs(log(one / value)) for one in all_values(name))
    assert abs(log(nearest(value, name) / value)) == pytest.approx(best, abs=2e-6)


@settings(deadline=None, max_examples=100)
@given(values, names)
def test_neighbours_enclose_the_value_and_nothing_lies_between(value: float, name: str) -> None:
    below, above = neighbours(value, name)
    assert below <= value * (1 + 1e-6)
    assert above >= value * (1 - 1e-6)
    assert not [one for one in all_values(name) if below < one < above]


@pytest.mark.parametrize("name", NAMES)
def test_a_preferred_value_is_its_own_neighbour(name: str) -> None:
    for value in all_values(name):
        assert neighbours(value, name) == (value, value)
        assert neighbours(value * (1 + 1e-12), name) == (value, value)
        assert is_preferred(value, (name,))


def test_values_at_the_edge_of_a_decade() -> None:
    assert neighbours(999.9999999999999, "E24") == (1000.0, 1000.0)
    assert neighbours(950.0, "E24") == (910.0, 1000.0)
    assert nearest(98.0, "E6") == 100.0
    assert nearest(4.7e-9, "E6") == 4.7e-9


def test_union_of_two_series() -> None:
    """1 % resistors are sold in E24 as well as in E96, which does not hold 4.7 (IEC 60063)."""
    assert not is_preferred(4700.0, ("E96",))
    assert is_preferred(4700.0, ("E96", "E24"))
    assert not is_preferred(4800.0, ("E96", "E24"))


@pytest.mark.parametrize("value", [0.0, -1.0, float("inf"), float("nan"), 1e-300])
def test_what_has_no_preferred_value(value: float) -> None:
    assert not is_preferred(value, ("E24",))
    with pytest.raises(ValueError, match="no preferred value"):
        neighbours(value, "E24")


def test_unknown_series() -> None:
    with pytest.raises(KeyError):
        series("E25")


@settings(deadline=None, max_examples=50)
@given(st.floats(0.01, 100.0), st.sampled_from(["E6", "E24"]), st.floats(1e2, 1e6))
def test_no_pair_near_the_total_is_nearer_to_the_ratio(ratio: float, name: str, total: float) -> None:
    top, bottom = nearest_pair(ratio, name, total)
    assert is_preferred(top, (name,))
    assert is_preferred(bottom, (name,))
    ideal = total / (1 + ratio)
    every = all_values(name)
    reach = [one for one in every if ideal / 2 <= one <= ideal * 2]
    best = min(abs(log(a / b / ratio)) for b in reach for a in every if 0.2 < a / (b * ratio) < 5)
    assert abs(log(top / bottom / ratio)) == pytest.approx(best, abs=2e-6)


def test_of_equal_pairs_the_one_nearest_to_the_total_is_taken() -> None:
    assert nearest_pair(1.0, "E24", 20e3) == (10e3, 10e3)
    assert nearest_pair(10.0, "E12", 1.1e6) == (1e6, 100e3)


@pytest.mark.parametrize(("ratio", "total"), [(0.0, 1e3), (-1.0, 1e3), (1.0, 0.0), (float("nan"), 1e3)])
def test_no_pair(ratio: float, total: float) -> None:
    with pytest.raises(ValueError, match="no "):
        nearest_pair(ratio, "E24", total)


@pytest.mark.parametrize(
    ("power", "rating"),
    [
        (0.0, 0.0625),
        (0.0625, 0.0625),
        (0.07, 0.1),
        (0.6, 1.0),
        (2.1, 3.0),
        (10.1, 15.0),
        (50.0, 50.0),
        (51.0, 100.0),
        (100.1, 200.0),
        (700.0, 1000.0),
        (float("inf"), float("inf")),
    ],
)
def test_next_wattage(power: float, rating: float) -> None:
    """The ratings are common practice, no source."""
    assert next_wattage(power) == rating
