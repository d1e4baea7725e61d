"""The rules on the dead time, on the board of an irrigation pump.

Dead time over the pin's voltage: SLVS074 p.11 (0.03 + 0.97 V / 3.3 V, and an offset of 0.11 V against a ramp
of 3 V) and p.1 (5 % at 0 V). The oscillator runs at 1.1 / (12 kohm x 10 nF) = 9.167 kHz, the middle of what
the makers print.
"""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint import Outcome, Verdict

Ask = Callable[..., list[Verdict]]
Board = Callable[..., str]

FREQUENCY = 1.1 / (12e3 * 10e-9)
GROUNDED = "FB SET COMP 0 CT RT 0 DRN 0 0 DRN VBAT 0 REF LIM SNS 494"
PUSH_PULL = "FB SET COMP DTC CT RT 0 DA 0 0 DB VBAT REF REF LIM SNS 494"
RAILS = """
[rails.VBAT]
voltage = "20 V .. 28 V"
[rails.VOUT]
voltage = "12 V"
tolerance = "10 %"
"""
WITHOUT = {"R2": None, "R3": None, "C2": None}


def told(line: str) -> str:
    return f"[controllers.U1]\n{line}\n"


def shares(volts: float) -> list[float]:
    """Return the dead time as a share of the period by each published model."""
    return [0.03 + 0.97 / 3.3 * volts, 0.05 + 0.95 / 3.3 * volts, (volts + 0.11) / 3.0]


# ----------------------------------------------------------------------------------------------- driven


@pytest.mark.parametrize(
    "changes",
    [
        pytest.param({}, id="divider from the reference"),
        pytest.param({"U1": GROUNDED, **WITHOUT}, id="straight to ground"),
        pytest.param({**WITHOUT, "R3": "DTC 0 47k"}, id="pull-down alone"),
        pytest.param({**WITHOUT, "RV1": "REF DTC 0 10k"}, id="trimmer"),
    ],
)
def test_a_pin_with_a_path_is_driven(ask: Ask, pump: Board, changes: dict[str, str]) -> None:
    (verdict,) = ask("dead-time.driven", pump(**changes))
    assert verdict.outcome is Outcome.PASS


@pytest.mark.parametrize(
    "changes",
    [
        pytest.param(WITHOUT, id="open"),
        pytest.param({**WITHOUT, "C2": "REF DTC 6.8u"}, id="capacitor to the reference alone"),
        pytest.param({**WITHOUT, "C2": "DTC 0 6.8u"}, id="capacitor to ground alone"),
    ],
)
def test_a_pin_without_a_path_fails(ask: Ask, pump: Board, changes: dict[str, str]) -> None:
    (verdict,) = ask("dead-time.driven", pump(**changes))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "error")
    assert "10.0 µA" in verdict.message  # SLVS074 p.5
    assert "divider from the reference" in verdict.remedy


# ------------------------------------------------------------------------------------------------ range


def test_the_voltage_is_that_of_the_divider_and_the_bias_current(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("dead-time.range", pump())
    assert verdict.outcome is Outcome.PASS
    assert verdict.measured is not None
    # SLVS074 p.5: 2 uA typical, 10 uA at most out of the pin; 10 kohm and 1 kohm make 909 ohm.
    assert verdict.measured.nominal == pytest.approx(5 / 11 + 2e-6 * 10e3 / 11, rel=1e-6)
    # p.4: the reference is 4.75 V to 5.25 V, and 40 mV more of line and load regulation to either side.
    low = 4.71 * 990 / (990 + 10.1e3)
    high = 5.29 * 1010 / (1010 + 9.9e3) + 10e-6 * 1010 * 9.9e3 / (1010 + 9.9e3)
    assert (verdict.measured.minimum, verdict.measured.maximum) == pytest.approx((low, high), rel=1e-6)
    assert verdict.limit is not None
    assert (verdict.limit.minimum, verdict.limit.maximum) == (0.0, 3.3)  # SLVS074 p.11


def test_a_divider_the_wrong_way_round_holds_the_outputs_off(ask: Ask, pump: Board) -> None:
    # 5 V x 10 / 11 = 4.55 V: above the 3.3 V at which no pulse is left
    (verdict,) = ask("dead-time.range", pump(R2="REF DTC 1k 1%", R3="DTC 0 10k 1%"))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "error")
    assert verdict.measured is not None
    assert verdict.measured.nominal == pytest.approx(4.547, abs=0.001)
    assert "below 3.30 V" in verdict.remedy


def test_a_pin_below_ground_is_beyond_what_it_stands(ask: Ask, pump: Board) -> None:
    # (5 V / 10 kohm - 5 V / 1 kohm) x 909 ohm = -4.09 V; a second source's data sheet: -0.3 V at the least
    (verdict,) = ask("dead-time.range", pump("V5 NEG 0 -5", R3="DTC NEG 1k 1%"))
    assert verdict.outcome is Outcome.FAIL
    assert verdict.measured is not None
    assert verdict.measured.nominal == pytest.approx(-45 / 11, abs=0.01)
    assert "beyond what the pin stands" in verdict.message


def test_a_trimmer_from_end_to_end_is_for_a_person_unless_the_brief_wants_it(ask: Ask, pump: Board) -> None:
    netlist = pump("RV1 REF DTC 0 10k", **WITHOUT)
    (verdict,) = ask("dead-time.range", netlist)
    assert (verdict.outcome, verdict.level) == (Outcome.REVIEW, None)
    assert "no pulse is left" in verdict.message
    (verdict,) = ask("dead-time.range", netlist, brief=told("shut_off_by_dead_time = true"))
    assert verdict.outcome is Outcome.PASS
    assert "as the brief wants" in verdict.message


def test_a_trimmer_with_a_resistor_on_top_stays_in_range(ask: Ask, pump: Board) -> None:
    # 5.29 V x 12 kohm / (12 kohm + 9.5 kohm) = 2.95 V, and 10 uA x 5.3 kohm = 0.05 V
    (verdict,) = ask("dead-time.range", pump("RV1 TOP DTC 0 10k", **{**WITHOUT, "R2": "REF TOP 10k"}))
    assert verdict.outcome is Outcome.PASS


def test_a_shut_down_transistor_on_the_pin_is_taken_as_off(ask: Ask, pump: Board) -> None:
    shut_down = ("Q5 DTC EN REF QP", "R21 EN REF 10k", "R22 EN ON 10k", "J5 ON 0 SWITCH", ".model QP PNP")
    (verdict,) = ask("dead-time.range", pump(*shut_down))
    assert verdict.outcome is Outcome.PASS
    assert any("Q5 taken as off" in assumption for assumption in verdict.assumptions)


@pytest.mark.parametrize(
    ("more", "changes", "need"),
    [
        pytest.param((), {"R2": "REF DTC"}, "a value for R2", id="no value"),
        pytest.param(
            ("D6 SD DTC DS", "J5 SD 0 SWITCH"), {}, "[rails.SD] voltage", id="a wire to the outside"
        ),
    ],
)
def test_a_voltage_that_cannot_be_had_is_open_and_says_what_is_missing(
    ask: Ask, pump: Board, more: tuple[str, ...], changes: dict[str, str], need: str
) -> None:
    (verdict,) = ask("dead-time.range", pump(*more, **changes))
    assert verdict.outcome is Outcome.OPEN
    assert need in verdict.needs[0]


# ---------------------------------------------------------------------------------------------- minimum


def test_without_a_brief_percent_and_seconds_are_told(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("dead-time.minimum", pump())
    assert verdict.outcome is Outcome.INFORMATIONAL
    assert verdict.measured is not None
    share = sum(shares(5 / 11 + 2e-6 * 10e3 / 11)) / 3
    assert verdict.measured.nominal == pytest.approx(share / FREQUENCY, rel=1e-3)
    assert "17.8 %" in verdict.message


def test_a_timing_capacitor_without_a_value_leaves_the_percentage(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("dead-time.minimum", pump(C1="CT 0"))
    assert verdict.outcome is Outcome.INFORMATIONAL
    assert verdict.measured is not None
    assert verdict.measured.unit == ""
    assert verdict.message.endswith("of the period")


def test_the_wanted_band_is_met(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("dead-time.minimum", pump(), brief=told('dead_time = "10 us .. 30 us"'))
    assert verdict.outcome is Outcome.PASS


def test_a_dead_time_too_short_fails_and_the_voltage_that_mends_it_is_right(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("dead-time.minimum", pump(), brief=told('dead_time = "25 us .. 35 us"'))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "error")
    # 30 us at 9.167 kHz is a share of 0.275: 0.834 V, 0.782 V and 0.715 V by the three models
    assert verdict.remedy == "about 777 mV on DTC makes 30.0 µs"
    assert sum(shares(0.777)) / 3 / FREQUENCY == pytest.approx(30e-6, rel=5e-3)


def test_a_dead_time_that_no_voltage_makes_is_said_so(ask: Ask, pump: Board) -> None:
    # 1 us of 109 us is less than the controller's own 3 %
    (verdict,) = ask("dead-time.minimum", pump(), brief=told('dead_time = "0.5 us .. 1.5 us"'))
    assert verdict.outcome is Outcome.FAIL
    assert verdict.remedy == "1.00 µs cannot be set at this frequency: change the timing parts"


def test_two_alternating_outputs_at_the_least_dead_time_are_for_a_person(ask: Ask, pump: Board) -> None:
    both = PUSH_PULL.replace("DTC", "0")
    (verdict,) = ask("dead-time.minimum", pump(U1=both, **WITHOUT))
    assert (verdict.outcome, verdict.level) == (Outcome.REVIEW, None)
    assert "(3 % .. 5 %)" in verdict.message  # SLVS074 p.11 and p.1
    (raised,) = ask("dead-time.minimum", pump(U1=PUSH_PULL))
    assert raised.outcome is Outcome.INFORMATIONAL
    (alone,) = ask("dead-time.minimum", pump(U1=GROUNDED, **WITHOUT))
    assert alone.outcome is Outcome.INFORMATIONAL


def test_a_trimmer_that_can_be_set_to_the_wanted_dead_time_passes(ask: Ask, pump: Board) -> None:
    netlist = pump("RV1 TOP DTC 0 10k", **{**WITHOUT, "R2": "REF TOP 10k"})
    (verdict,) = ask("dead-time.minimum", netlist, brief=told('dead_time = "25 us .. 35 us"'))
    assert verdict.outcome is Outcome.PASS
    assert "RV1 set on the bench for 30.0 µs" in verdict.assumptions
    (beyond,) = ask("dead-time.minimum", netlist, brief=told('dead_time = "200 us .. 300 us"'))
    assert beyond.outcome is Outcome.FAIL


# ----------------------------------------------------------------------------------------------- source


def test_a_divider_from_the_reference_is_the_right_source(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("dead-time.source", pump())
    assert verdict.outcome is Outcome.PASS


def test_a_divider_from_the_supply_is_for_a_person(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("dead-time.source", pump(R2="VBAT DTC 100k"), brief=RAILS)
    assert verdict.outcome is Outcome.REVIEW
    assert "VBAT" in verdict.message
    assert "reference pin" in verdict.remedy


def test_a_supply_that_no_rail_tells_is_left_to_the_range(ask: Ask, pump: Board) -> None:
    assert ask("dead-time.source", pump(R2="VBAT DTC 100k")) == []
    (verdict,) = ask("dead-time.range", pump(R2="VBAT DTC 100k"))
    assert verdict.outcome is Outcome.OPEN


# ------------------------------------------------------------------------------------------ duty-headroom


def test_the_dead_time_leaves_the_duty_that_the_buck_needs(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("dead-time.duty-headroom", pump(), brief=RAILS)
    assert verdict.outcome is Outcome.PASS
    assert verdict.limit is not None
    assert verdict.limit.minimum == pytest.approx(13.2 / 20)  # Vo / Vi at 12 V + 10 % and the lowest battery
    assert verdict.measured is not None
    assert verdict.measured.nominal == pytest.approx(1 - sum(shares(5 / 11 + 2e-6 * 10e3 / 11)) / 3, abs=1e-4)


def test_too_much_dead_time_fails(ask: Ask, pump: Board) -> None:
    # 5 V x 4.7 / 14.7 = 1.6 V: about half of the period is left, two thirds are needed
    (verdict,) = ask("dead-time.duty-headroom", pump(R3="DTC 0 4.7k 1%"), brief=RAILS)
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "error")
    assert verdict.remedy == "lower the voltage on DTC"


def test_each_of_two_alternating_outputs_has_half_of_what_is_left(ask: Ask, pump: Board) -> None:
    netlist = pump(U1=PUSH_PULL)
    (verdict,) = ask("dead-time.duty-headroom", netlist, brief=told('maximum_duty = "38 %"'))
    assert verdict.outcome is Outcome.PASS
    assert verdict.source == "brief: maximum_duty"
    assert verdict.measured is not None
    assert verdict.measured.nominal == pytest.approx((1 - sum(shares(0.4564)) / 3) / 2, abs=1e-3)
    (verdict,) = ask("dead-time.duty-headroom", netlist, brief=told('maximum_duty = "45 %"'))
    assert verdict.outcome is Outcome.FAIL


def test_a_trimmer_that_can_leave_the_duty_is_no_false_alarm(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("dead-time.duty-headroom", pump("RV1 REF DTC 0 10k", **WITHOUT), brief=RAILS)
    assert verdict.outcome is Outcome.PASS
    assert "RV1 set on the bench for 66 %" in verdict.assumptions


def test_where_nothing_tells_the_duty_the_rule_is_silent(ask: Ask, pump: Board) -> None:
    assert ask("dead-time.duty-headroom", pump()) == []


# ----------------------------------------------------------------------------------------------- absence


def test_a_dead_time_pin_that_is_not_mapped_is_left_to_the_rule_that_says_so(ask: Ask, pump: Board) -> None:
    pins = ["1IN+", "1IN-", "FEEDBACK", "-", "CT", "RT", "GND", "C1", "E1", "E2", "C2", "VCC", "OUTPUT CTRL"]
    names = ", ".join(f'"{name}"' for name in [*pins, "REF", "2IN-", "2IN+"])
    for rule in ("driven", "range", "minimum", "source", "duty-headroom"):
        assert ask(f"dead-time.{rule}", pump(), brief=told(f"pins = [{names}]")) == []
