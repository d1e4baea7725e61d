"""The rules on where the feedback senses and what one failed resistor does, on an irrigation pump's board."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint import Outcome, Verdict

Ask = Callable[..., list[Verdict]]
Board = Callable[..., str]

OUTPUT = '[controllers.U1]\noutput = "VOUT"\n'
BATTERY = '[rails.VBAT]\nvoltage = "20 V .. 28 V"\n'


# ------------------------------------------------------------------------------------------- sense-point


@pytest.mark.parametrize(
    ("changes", "senses"),
    [
        pytest.param({}, "VOUT", id="divider on the output"),
        pytest.param({"R6": "VS FB 3.83k 1%", "R20": "VOUT VS 10"}, "VOUT", id="through a resistor"),
        pytest.param(
            {"R6": "VS FB 3.83k", "R20": "VOUT VS 10", "J3": "VS 0 SENSE"}, "VOUT", id="remote sense"
        ),
    ],
)
def test_a_divider_on_the_output_senses_the_right_point(
    ask: Ask, pump: Board, changes: dict[str, str], senses: str
) -> None:
    (verdict,) = ask("feedback.sense-point", pump(**changes))
    assert verdict.outcome is Outcome.PASS
    assert verdict.message == f"1IN+ senses {senses}"


@pytest.mark.parametrize(
    ("net", "what"),
    [
        pytest.param("VBAT", "the converter's input", id="input"),
        pytest.param("SW", "the switching node", id="ahead of the filter"),
    ],
)
def test_a_divider_on_what_is_no_output_fails(ask: Ask, pump: Board, net: str, what: str) -> None:
    (verdict,) = ask("feedback.sense-point", pump(R6=f"{net} FB 3.83k 1%"), brief=OUTPUT + BATTERY)
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "error")
    assert verdict.message == f"1IN+ senses {net}, {what}"
    assert "behind the filter" in verdict.remedy


def test_a_divider_on_the_controllers_supply_fails(ask: Ask, pump: Board) -> None:
    # The power stage is not recognised without its switch: the supply is known all the same.
    (verdict,) = ask("feedback.sense-point", pump(R6="VBAT FB 3.83k 1%", M1=None), brief=BATTERY)
    assert verdict.outcome is Outcome.FAIL
    assert verdict.message == "1IN+ senses VBAT, the controller's supply"


def test_an_amplifier_beside_the_regulating_one_may_watch_the_input(ask: Ask, pump: Board) -> None:
    """False alarm guarded against: it shortens the pulse where a solar panel gives way."""
    panel = {
        "U1": "FB SET COMP DTC CT RT 0 DRN 0 0 DRN VBAT 0 REF PANEL SET 494",
        "R9": "VBAT PANEL 54.9k 1%",
        "R10": "PANEL 0 10k 1%",
        "R11": "COMP CP 47k",
        "C9": "CP PANEL 47n",
    }
    brief = '[rails.VBAT]\nvoltage = "15 V .. 23 V"\n[controllers.U1]\noutput = "VOUT"\n'
    (verdict,) = ask("feedback.sense-point", pump(**panel), brief=brief)
    assert (verdict.outcome, verdict.message) == (Outcome.PASS, "1IN+ senses VOUT")
    assert ask("amplifier.unused", pump(**panel), brief=brief) == []


def test_an_unused_amplifier_tied_to_the_reference_senses_nothing(ask: Ask, pump: Board) -> None:
    """False alarm guarded against: the reference and ground are no wrong points."""
    unused = "FB SET COMP DTC CT RT 0 DRN 0 0 DRN VBAT 0 REF REF 0 494"
    verdicts = ask("feedback.sense-point", pump(U1=unused, R11=None), brief=OUTPUT + BATTERY)
    assert [verdict.outcome for verdict in verdicts] == [Outcome.PASS]


# --------------------------------------------------------------------------------------------- impedance


def test_the_source_resistance_is_that_of_the_divider(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("feedback.impedance", pump())
    assert verdict.outcome is Outcome.PASS
    assert verdict.measured is not None
    assert verdict.measured.nominal == pytest.approx(3830 * 1000 / 4830)
    assert verdict.limit is not None
    assert verdict.limit.maximum == 100e3  # common practice, no source


def test_a_weak_divider_is_noted(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("feedback.impedance", pump(R6="VOUT FB 3.83MEG 1%", R7="FB 0 1MEG 1%"))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "note")
    assert verdict.measured is not None
    assert verdict.measured.nominal == pytest.approx(793e3, rel=1e-3)


def test_a_divider_without_a_value_is_left_to_the_output_voltage(ask: Ask, pump: Board) -> None:
    assert ask("feedback.impedance", pump(R7="FB 0")) == []


# ------------------------------------------------------------------------------------------- single-fault


def test_every_resistor_that_lifts_the_output_is_named_with_where_to(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("feedback.single-fault", pump())
    assert (verdict.outcome, verdict.level) == (Outcome.REVIEW, None)
    # R4 shorted puts in- on 5 V: 5 V x 4.83 = 24.2 V; R5 open likewise. R6 open or R7 shorted: nothing
    # lifts in+ any more, the duty goes as far as it can.
    assert verdict.message == (
        "VOUT rises with R4 shorted to 24.1 V; R5 open to 24.2 V; R6 open as far as the duty goes; "
        "R7 shorted as far as the duty goes"
    )
    assert verdict.parts == ("R4", "R5", "R6", "R7")
    assert verdict.remedy == "put a suppressor or a crowbar across VOUT"


def test_a_zener_across_the_output_takes_it(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("feedback.single-fault", pump("D8 0 VOUT 15V"))
    assert verdict.outcome is Outcome.PASS
    assert "D8 across VOUT takes it" in verdict.message
    assert verdict.remedy == ""


def test_a_zener_above_the_fault_takes_nothing(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("feedback.single-fault", pump("D8 0 VOUT 39V"))
    assert verdict.outcome is Outcome.REVIEW


def test_a_diode_that_may_be_a_suppressor_is_named(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("feedback.single-fault", pump("D8 0 VOUT DS"))
    assert verdict.outcome is Outcome.REVIEW
    assert "D8" in verdict.message


def test_an_output_at_the_reference_itself_cannot_rise_far(ask: Ask, pump: Board) -> None:
    # In- straight on the reference, the output straight on in+: no resistor is left to fail.
    straight = "VOUT REF COMP DTC CT RT 0 DRN 0 0 DRN VBAT 0 REF LIM SNS 494"
    netlist = pump(U1=straight, R4=None, R5=None, R6=None, R7=None, C3="CZ REF 10n")
    (verdict,) = ask("feedback.single-fault", netlist)
    assert verdict.outcome is Outcome.PASS
    assert verdict.message == "no single resistor lifts VOUT above 6.00 V"  # 1.2 x 5 V


def test_without_a_loop_there_is_no_fault_to_try(ask: Ask, pump: Board) -> None:
    assert ask("feedback.single-fault", pump(R6=None)) == []
