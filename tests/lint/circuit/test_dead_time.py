"""Dead time over the voltage of its pin, as a band over the published models."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint.circuit.dead_time import dead_time
from pwmlint.lint.controllers import load
from pwmlint.lint.design import Design
from pwmlint.lint.estimate import Estimate
from pwmlint.lint.quantity import Spread

FanOf = Callable[..., Design]

PROFILE = load("494")


def volts(low: float, nominal: float, high: float) -> Estimate:
    spread = Spread(low, nominal, high, "V")
    return Estimate(spread, spread, parts=("R7",), nets=("DTC",), assumptions=("R7: tolerance 5 % assumed",))


class TestShare:
    def test_at_ground(self):
        # SLVS074: 3 % (p.11) to 5 % (p.1) at 0 V.
        share = dead_time(PROFILE, volts(0, 0, 0), None).share.spread
        assert (share.minimum, share.maximum) == pytest.approx((0.03, 0.05))

    def test_at_3_3_volts(self):
        # SLVS074 p.11: 100 % at 3.3 V.
        share = dead_time(PROFILE, volts(3.3, 3.3, 3.3), None).share.spread
        assert (share.minimum, share.nominal, share.maximum) == pytest.approx((1, 1, 1), abs=1e-4)

    def test_below_ground_it_keeps_its_least(self):
        share = dead_time(PROFILE, volts(-0.2, -0.1, 0), None).share.spread
        assert share.minimum == pytest.approx(0.03)

    def test_grows_with_the_voltage(self):
        shares = [dead_time(PROFILE, volts(v, v, v), None).share.spread.nominal for v in (0.5, 1.0, 2.0, 2.9)]
        assert shares == sorted(shares)

    def test_half_a_volt(self):
        # 0.5 V: 17.7 % by the text's line, 20.3 % by the offset against the ramp (both derived).
        share = dead_time(PROFILE, volts(0.5, 0.5, 0.5), None).share.spread
        assert share.minimum == pytest.approx(0.177, abs=1e-3)
        assert share.maximum == pytest.approx(0.203, abs=1e-3)

    def test_keeps_what_went_into_the_voltage(self):
        found = dead_time(PROFILE, volts(0.4, 0.5, 0.6), None)
        assert found.seconds is None
        assert found.share.parts == ("R7",)


class TestSeconds:
    def test_longest_at_the_lowest_frequency(self):
        spread = Spread(40e3, 50e3, 60e3, "Hz")
        frequency = Estimate(spread, spread, parts=("R1", "R7"), nets=("RT",), assumptions=("C1: ...",))
        found = dead_time(PROFILE, volts(0.4, 0.5, 0.6), frequency)
        assert found.seconds is not None
        seconds, share = found.seconds.spread, found.share.spread
        assert seconds.minimum == pytest.approx(share.minimum / 60e3)
        assert seconds.nominal == pytest.approx(share.nominal / 50e3)
        assert seconds.maximum == pytest.approx(share.maximum / 40e3)
        assert found.seconds.parts == ("R7", "R1")
        assert found.seconds.nets == ("DTC", "RT")
        assert found.seconds.assumptions == ("R7: tolerance 5 % assumed", "C1: ...")


def test_of_the_frost_fan(fan_of: FanOf):
    # SLVA001, from memory: 1 k below 10 k on 5 V leave 0.4545 V on the pin (bias current up to 10 uA aside).
    design = fan_of()
    voltage = design.voltage("DTC")
    assert isinstance(voltage, Estimate)
    assert voltage.spread.nominal == pytest.approx(5 / 11, rel=0.01)
    found = design.dead_time(design.controllers[0], voltage)
    assert found.seconds is not None
    assert found.seconds.spread.nominal == pytest.approx(found.share.spread.nominal / 22e3)
