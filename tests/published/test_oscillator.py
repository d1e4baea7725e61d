"""The oscillator against the data sheets of the 494 class."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint import Verdict

Ask = Callable[..., list[Verdict]]


def board(resistor: str, capacitor: str, mode: str) -> str:
    return f"""weather mast
VBAT VBAT 0 15
U1 FB SET COMP 0 CT RT 0 D1 0 0 D2 VBAT {mode} VREF VREF 0 494
R1 RT 0 {resistor}
C1 CT 0 {capacitor}
R2 VREF SET 5k1
R3 SET 0 5k1
R4 OUT FB 5k1
R5 FB 0 5k1
R6 VBAT D1 1k
R7 VBAT D2 1k
.end
"""


def switch(frequency: str) -> str:
    return f'[controllers.U1]\nswitching_frequency = "{frequency}"\n'


@pytest.mark.parametrize(
    ("resistor", "capacitor", "hertz"),
    [
        pytest.param("12k 0%", "10n 0%", 10e3, id="SLVS074 p.4: 12 kohm, 10 nF, 10 kHz typical"),
        pytest.param("30k 0%", "1n 0%", 40e3, id="a second source: 30 kohm, 1 nF, 40 kHz (from memory)"),
        pytest.param("50k 0%", "1n 0%", 20e3, id="SLVS074 p.11: 1 / (50 kohm x 1 nF) = 20 kHz"),
    ],
)
def test_published_points_lie_in_the_band_of_exact_parts(
    ask: Ask, resistor: str, capacitor: str, hertz: float
) -> None:
    (verdict,) = ask("oscillator.frequency", board(resistor, capacitor, "0"))
    assert verdict.measured is not None
    rounding = 1e-9 * hertz
    assert verdict.measured.minimum - rounding <= hertz <= verdict.measured.maximum + rounding


def test_the_band_is_that_of_the_published_constants(ask: Ask) -> None:
    """1 / (RC) in SLVS074 p.11, 1.1 / (RC) in a second source (from memory), 1.2 at the point of p.4."""
    (verdict,) = ask("oscillator.frequency", board("12k 0%", "10n 0%", "0"))
    measured = verdict.measured
    assert measured is not None
    product = 12e3 * 10e-9
    assert (measured.minimum * product, measured.nominal * product, measured.maximum * product) == (
        pytest.approx((1.0, 1.1, 1.2))
    )


@pytest.mark.parametrize(
    ("mode", "share"),
    [
        pytest.param("0", 1.0, id="SLVS074 p.11: 1 / (RC) with the control pin at ground"),
        pytest.param("VREF", 0.5, id="SLVS074 p.11: 1 / (2 RC) with the control pin at the reference"),
    ],
)
def test_the_output_frequency_is_the_oscillators_or_half_of_it(ask: Ask, mode: str, share: float) -> None:
    _, verdict = ask("oscillator.frequency", board("50k 0%", "1n 0%", mode), brief=switch("1 kHz .. 50 kHz"))
    assert verdict.measured is not None
    assert verdict.measured.minimum == pytest.approx(share * 20e3)


@pytest.mark.parametrize(
    ("resistor", "capacitor"),
    [
        pytest.param("1.8k", "470p", id="both at their least: 1.18 MHz by 1 / (RC), above 300 kHz"),
        pytest.param("500k", "10u", id="both at their greatest: 0.2 Hz by 1 / (RC), below 1 kHz"),
    ],
)
def test_the_corners_of_the_recommended_parts_leave_the_recommended_frequency(
    ask: Ask, resistor: str, capacitor: str
) -> None:
    """1 kHz .. 300 kHz: three second sources' data sheets."""
    (verdict,) = ask("oscillator.frequency", board(resistor, capacitor, "0"))
    assert verdict.outcome == "fail"
