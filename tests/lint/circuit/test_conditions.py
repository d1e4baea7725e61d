"""Under which conditions parts are judged."""

from __future__ import annotations

import pytest
from pwmlint.lint.circuit.conditions import STANDARD_CONDITIONS, Conditions
from pwmlint.lint.estimate import Method
from pwmlint.lint.quantity import Spread


@pytest.mark.parametrize(
    ("least", "most", "kelvin"),
    [
        pytest.param(-10, 50, 35, id="the cold end is further from 25 degC"),
        pytest.param(0, 85, 60, id="the hot end is further"),
        pytest.param(25, 25, 0, id="a laboratory"),
        pytest.param(40, 60, 35, id="wholly above"),
    ],
)
def test_the_excursion_goes_to_the_further_end(least: float, most: float, kelvin: float):
    ambient = Spread(least, (least + most) / 2, most, "degC")
    assert Conditions(ambient=ambient).excursion == kelvin


def test_an_ambient_that_nobody_told_makes_no_drift():
    assert STANDARD_CONDITIONS.excursion == 0
    assert STANDARD_CONDITIONS.method is Method.EXTREME
