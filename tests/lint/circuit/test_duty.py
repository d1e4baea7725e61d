"""The duty that a power stage needs, against the volt-second balance of its inductor."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pwmlint.lint.circuit.duty import needed_duty
from pwmlint.lint.quantity import Spread


def volts(minimum: float, nominal: float, maximum: float) -> Spread:
    return Spread(minimum, nominal, maximum, "V")


def exact(value: float) -> Spread:
    return Spread.exact(value, "V")


@pytest.mark.parametrize(
    ("topology", "supply", "output", "duty"),
    [
        pytest.param("buck", 32, 5, 0.15625, id="SLVA001, from memory: 5 V of 32 V"),
        pytest.param("boost", 12, 24, 0.5, id="twice the input: half of the period"),
        pytest.param("inverting", 12, -12, 0.5, id="as much below ground: half of the period"),
        pytest.param("inverting", 5, -15, 0.75, id="three times below ground"),
    ],
)
def test_exact_voltages(topology: str, supply: float, output: float, duty: float):
    found = needed_duty(topology, exact(supply), exact(output))
    assert found is not None
    assert (found.minimum, found.nominal, found.maximum) == pytest.approx((duty, duty, duty))
    assert found.unit == ""


def test_the_band_runs_from_the_easiest_corner_to_the_hardest():
    found = needed_duty("buck", volts(20, 24, 28), volts(11.4, 12, 12.6))
    assert found is not None
    assert (found.minimum, found.nominal, found.maximum) == pytest.approx((11.4 / 28, 0.5, 12.6 / 20))
    found = needed_duty("inverting", volts(10, 12, 15), volts(-13, -12, -11))
    assert found is not None
    assert (found.minimum, found.nominal, found.maximum) == pytest.approx((11 / 26, 0.5, 13 / 23))


@pytest.mark.parametrize(
    ("topology", "supply", "output"),
    [
        pytest.param("push-pull", exact(12), exact(24), id="turns ratio not told"),
        pytest.param("buck", exact(0), exact(5), id="no supply"),
        pytest.param("buck", exact(12), volts(0, 5, 6), id="an output that may be nothing"),
        pytest.param("inverting", exact(12), volts(-1, 0, 1), id="an output about nothing"),
    ],
)
def test_where_the_voltages_tell_no_duty_there_is_none(topology: str, supply: Spread, output: Spread):
    assert needed_duty(topology, supply, output) is None


def test_what_a_stage_cannot_do_comes_out_as_it_is():
    buck = needed_duty("buck", volts(10, 24, 28), volts(11, 12, 13))
    assert buck is not None
    assert buck.maximum == pytest.approx(1.3)  # it would have to raise 10 V to 13 V
    boost = needed_duty("boost", volts(10, 12, 30), exact(24))
    assert boost is not None
    assert boost.minimum == pytest.approx(-0.25)  # it would have to lower 30 V to 24 V


@settings(deadline=None, max_examples=60)
@given(
    topology=st.sampled_from(["buck", "boost", "inverting"]),
    supply=st.lists(st.floats(1, 100), min_size=3, max_size=3),
    output=st.lists(st.floats(1, 100), min_size=3, max_size=3),
)
def test_the_corners_hold_every_duty_between(topology: str, supply: list[float], output: list[float]):
    found = needed_duty(topology, volts(*sorted(supply)), volts(*sorted(output)))
    assert found is not None
    for vi in supply:
        for vo in output:
            inside = needed_duty(topology, exact(vi), exact(vo))
            assert inside is not None
            assert found.minimum - 1e-12 <= inside.nominal <= found.maximum + 1e-12
