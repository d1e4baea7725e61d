"""What published figures of the 494 class give on small boards: inputs, expected, and the source beside them.

Each board is the controller with the parts of one figure; everything else hangs open and is not asked.
"""

from __future__ import annotations

import pytest
from pwmlint.grammar import read_bytes
from pwmlint.lint.circuit.controllers import Controller
from pwmlint.lint.circuit.loops import Regulation, Trip
from pwmlint.lint.circuit.reference_load import ReferenceLoad
from pwmlint.lint.circuit.timing import Timing
from pwmlint.lint.design import Design
from pwmlint.lint.estimate import Estimate, Unsolved
from pwmlint.lint.quantity import Spread

CONTROLLER = "U1 FB INV COMP DTC CT RT 0 C1 0 0 C1 VI MODE REF LIM SNS 494"


def board(*lines: str) -> tuple[Design, Controller]:
    text = "\n".join(["published figure", CONTROLLER, *lines, ".end", ""])
    design = Design(read_bytes(text.encode(), "figure.cir"))
    return design, design.controllers[0]


def spread(found: Estimate | Unsolved) -> Spread:
    assert isinstance(found, Estimate), found
    return found.spread


def frequency(resistor: str, capacitor: str) -> Spread:
    design, controller = board(f"R1 RT 0 {resistor} tol=0", f"C1 CT 0 {capacitor} tol=0")
    timing = design.timing(controller)
    assert isinstance(timing, Timing)
    return timing.frequency.spread


def dead_time(volts: str) -> Spread:
    design, controller = board(f"V1 DTC 0 {volts}")
    voltage = design.voltage("DTC")
    assert isinstance(voltage, Estimate)
    return design.dead_time(controller, voltage).share.spread


def test_12_kilohm_and_10_nanofarad_make_10_kilohertz() -> None:
    # SLVS074 p.4: 10 kHz typical at 12 kohm, 10 nF; p.11: 1 / (R C) gives 8.33 kHz. The band holds both.
    band = frequency("12k", "10n")
    assert band.minimum == pytest.approx(8.333e3, rel=1e-3)
    assert band.minimum <= 10e3 <= band.maximum * (1 + 1e-9)


def test_50_kilohm_and_1_nanofarad_make_20_kilohertz_by_the_formula() -> None:
    # SLVS074 p.11: 1 / (R C)
    assert frequency("50k", "1n").minimum == pytest.approx(20e3, rel=1e-6)


@pytest.mark.parametrize(("resistor", "capacitor"), [("1.8k", "470p"), ("500k", "10u")])
def test_the_ends_of_the_recommended_parts_leave_the_frequency_range(resistor: str, capacitor: str) -> None:
    # 7500 class data sheet of a second source: 1 kHz to 300 kHz; 1 / (R C) gives 1.18 MHz and 0.2 Hz
    band = frequency(resistor, capacitor)
    assert band.minimum > 300e3 or band.maximum < 1e3


def test_dead_time_at_0_v_is_3_to_5_percent() -> None:
    # SLVS074 p.11 (3 %) and p.1 (5 %)
    least = dead_time("0")
    assert (least.minimum, least.maximum) == pytest.approx((0.03, 0.05), abs=1e-3)


def test_dead_time_at_3_3_v_is_100_percent() -> None:
    # SLVS074 p.5 and p.11
    assert dead_time("3.3").nominal == pytest.approx(1.0, abs=1e-3)


def test_half_a_volt_leaves_17_7_to_20_3_percent() -> None:
    # derived from SLVS074 p.11: 3 % + 97 % x 0.5 / 3.3, and (0.5 + 0.11) / 3.0
    band = dead_time("0.5")
    assert band.minimum == pytest.approx(0.177, abs=1e-3)
    assert band.maximum >= 0.203


def test_equal_resistors_halve_the_reference() -> None:
    # SLVA001, from memory: 5.1 k / 5.1 k from 5 V is 2.5 V
    design, _ = board("R3 REF INV 5.1k tol=0", "R4 INV 0 5.1k tol=0")
    assert spread(design.voltage("INV")).nominal == pytest.approx(2.5, rel=1e-3)


def test_1_volt_across_100_milliohm_is_10_amperes() -> None:
    # SLVA001, from memory: 1 k and 4 k from 5 V make 1 V; 0.1 ohm. 10 A, and 10 W in the resistor.
    design, controller = board("R1 LIM 0 1k tol=0", "R2 REF LIM 4k tol=0", "R13 SNS 0 0.1 tol=0")
    trip = design.trip(controller)
    assert isinstance(trip, Trip)
    assert trip.current.spread.nominal == pytest.approx(10.0, rel=1e-3)
    assert trip.dissipation.spread.nominal == pytest.approx(10.0, rel=2e-3)


def test_1_kilohm_and_2_5_microfarad_are_2_5_milliseconds() -> None:
    # SLVA001, from memory: 50 cycles of 20 kHz
    design, _ = board("R6 DTC 0 1k tol=0", "C2 REF DTC 2.5u tol=0")
    constant = spread(design.time_constant(design.part("C2"))).nominal
    assert constant == pytest.approx(2.5e-3, rel=1e-6)
    assert constant * 20e3 == pytest.approx(50, rel=1e-6)


def test_two_dividers_and_the_mode_pin_take_4_99_milliamperes() -> None:
    # 5 V / 10.2 k and 5 V / 5 k, and 3.5 mA into the output-control pin (SLVS074 p.5): 4.99 mA of 10 mA.
    # At the reference's upper end, regulation included, the dividers take more in proportion.
    design, controller = board(
        "R1 REF A 5.1k tol=0", "R2 A 0 5.1k tol=0", "R3 REF B 4k tol=0", "R4 B 0 1k tol=0", "R5 MODE REF 0"
    )
    load = design.reference_load(controller)
    assert isinstance(load, ReferenceLoad)
    reference = controller.profile.figure("reference.voltage").spread()
    dividers = 5 / 10.2e3 + 5 / 5e3
    top = spread(design.voltage("REF")).maximum / reference.nominal
    assert load.total.spread.maximum == pytest.approx(top * dividers + 3.5e-3, rel=1e-6)
    assert dividers + 3.5e-3 == pytest.approx(4.99e-3, abs=0.01e-3)


def test_5_volts_from_equal_dividers() -> None:
    # SLVA001, from memory: 5.1 k / 5.1 k on both sides regulate to the reference itself
    design, controller = board(
        "R3 REF INV 5.1k tol=0",
        "R4 INV 0 5.1k tol=0",
        "R8 VO FB 5.1k tol=0",
        "R9 FB 0 5.1k tol=0",
        "L1 SW VO 140u",
    )
    found = design.regulation(controller)
    assert isinstance(found, Regulation)
    assert found.output.spread.nominal == pytest.approx(5.0, rel=1e-3)
