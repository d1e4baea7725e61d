"""The rules on what the error amplifiers drive, and on the error that they make.

SLVS074 p.4: offset 10 mV, bias current 0.2 uA typical and 1 uA at most, reference 4.75 V to 5.25 V.
"""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint import Outcome, Verdict

Ask = Callable[..., list[Verdict]]
Board = Callable[..., str]
Mapping = Callable[..., str]


# ------------------------------------------------------------------------------------------ compensation


def test_a_resistor_and_a_capacitor_in_series_have_a_corner(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("amplifier.compensation", pump())
    assert verdict.outcome is Outcome.PASS
    # 1 / (2 pi x 47 kohm x 10 nF) = 338.6 Hz
    assert verdict.message == "R8, C3 from FEEDBACK to 1IN-, integrating; corner of R8 and C3 at 339 Hz"


@pytest.mark.parametrize(
    ("changes", "says"),
    [
        pytest.param({"R8": "COMP SET 51k", "C3": None}, "finite gain at rest", id="resistor alone"),
        pytest.param({"R8": None, "C3": "COMP SET 10n"}, "integrating", id="capacitor alone"),
        pytest.param({"C20": "COMP SET 100p"}, "R8, C3, C20", id="second capacitor"),
    ],
)
def test_other_paths_pass(ask: Ask, pump: Board, changes: dict[str, str], says: str) -> None:
    (verdict,) = ask("amplifier.compensation", pump(**changes))
    assert verdict.outcome is Outcome.PASS
    assert all(word in verdict.message for word in says.split(", "))


@pytest.mark.parametrize(
    "changes",
    [
        pytest.param({"R8": None, "C3": None}, id="nothing"),
        pytest.param({"R8": None, "C3": "SET 0 10n"}, id="capacitor from the summing node to ground"),
        pytest.param({"C3": "CZ 0 10n"}, id="path to ground"),
        pytest.param({"C3": "CZ FB 10n"}, id="path to the wrong input"),
    ],
)
def test_no_path_to_the_inverting_input_fails(ask: Ask, pump: Board, changes: dict[str, str]) -> None:
    (verdict,) = ask("amplifier.compensation", pump(**changes))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "warning")
    assert "full gain" in verdict.message
    assert "from FEEDBACK to 1IN-" in verdict.remedy


def test_a_second_amplifier_that_limits_the_voltage_needs_no_path(
    ask: Ask, pump: Board, over_voltage: dict[str, str]
) -> None:
    """False alarm guarded against: an over-voltage limit on the second amplifier works at full gain."""
    loop, limit = ask("amplifier.compensation", pump(**over_voltage))
    assert loop.outcome is Outcome.PASS
    assert (limit.outcome, limit.remedy) == (Outcome.INFORMATIONAL, "")


# ------------------------------------------------------------------------------------------ feedback-pin


@pytest.mark.parametrize(
    ("part", "ends", "outcome"),
    [
        # 0.5 V to 3.5 V (SLVA001, from memory); 2 mA out (SLVS052 p.4), 0.3 mA in (7500 class)
        pytest.param("COMP 0 10k 0%", (0.5 / 10e3, 3.5 / 10e3), Outcome.PASS, id="pull-down"),
        pytest.param("COMP 0 1k 0%", (0.5e-3, 3.5e-3), Outcome.FAIL, id="pull-down too strong"),
        pytest.param("REF COMP 47k 0%", (-4.79 / 47e3, -1.21 / 47e3), Outcome.PASS, id="pull-up"),
        pytest.param("REF COMP 10k 0%", (-4.79 / 10e3, -1.21 / 10e3), Outcome.FAIL, id="pull-up too strong"),
    ],
)
def test_what_hangs_on_the_feedback_pin_is_held_to_its_currents(
    ask: Ask, pump: Board, part: str, ends: tuple[float, float], outcome: Outcome
) -> None:
    (verdict,) = ask("amplifier.feedback-pin", pump(R20=part))
    assert verdict.outcome is outcome
    assert verdict.measured is not None
    # The reference has 4.71 V to 5.29 V
    assert (verdict.measured.minimum, verdict.measured.maximum) == pytest.approx(ends, rel=1e-6)


def test_capacitors_on_the_feedback_pin_draw_nothing(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("amplifier.feedback-pin", pump("C20 COMP 0 10n"))
    assert verdict.outcome is Outcome.PASS
    assert verdict.measured is not None
    assert verdict.measured.maximum == pytest.approx(0.0, abs=1e-15)


def test_a_supervisor_on_the_feedback_pin_is_open(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("amplifier.feedback-pin", pump("D9 OVP COMP DS", "J9 OVP 0 X"))
    assert verdict.outcome is Outcome.OPEN
    assert verdict.needs == ('brief: [rails.OVP] voltage = "..."',)


def test_a_coupler_on_the_feedback_pin_leaves_its_load_open(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("amplifier.feedback-pin", pump("XU9 LED 0 COMP REF COUPLER"))
    assert verdict.outcome is Outcome.OPEN
    assert "what U9 (integrated circuit) draws from COMP is not known" in verdict.message
    (overloaded,) = ask("amplifier.feedback-pin", pump("XU9 LED 0 COMP REF COUPLER", R20="REF COMP 4.7k"))
    assert overloaded.outcome is Outcome.FAIL


# ------------------------------------------------------------------------------------------- input-error


def test_bias_currents_through_low_resistances_do_no_harm(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("amplifier.input-error", pump())
    assert verdict.outcome is Outcome.PASS
    # 1 uA x (2.55 kohm + 0.79 kohm) / 2.5 V = 0.13 %; 10 mV / 2.5 V = 0.4 %
    assert "by up to 0.13" in verdict.message
    assert "the offset by 0.4 %" in verdict.message


def test_bias_currents_through_high_resistances_are_noted(ask: Ask, pump: Board) -> None:
    # 1 uA x 79.3 kohm / 2.5 V = 3.2 %, and 0.1 % of the other input
    (verdict,) = ask("amplifier.input-error", pump(R6="VOUT FB 383k 1%", R7="FB 0 100k 1%"))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "note")
    assert verdict.measured is not None
    assert verdict.measured.nominal == pytest.approx((79.3e-3 + 2.55e-3) / 2.5, rel=0.02)


def test_a_loop_that_regulates_to_nothing_has_no_error_to_share(ask: Ask, pump: Board) -> None:
    assert ask("amplifier.input-error", pump(R5="SET 0 0")) == []


# ----------------------------------------------------------------------------------------------- absence


@pytest.mark.parametrize("rule", ["compensation", "feedback-pin"])
def test_a_feedback_pin_that_is_not_mapped_is_left_to_the_rule_that_says_so(
    ask: Ask, pump: Board, without_pins: Mapping, rule: str
) -> None:
    assert ask(f"amplifier.{rule}", pump(), brief=without_pins(3)) == []
