"""The rules on the error amplifiers, on the board of an irrigation pump.

SLVS074 p.4: offset 10 mV, bias current 0.2 uA typical and 1 uA at most, common mode -0.3 V to VCC - 2 V,
reference 4.75 V to 5.25 V (40 mV of line and load regulation to either side).
"""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint import Outcome, Verdict

Ask = Callable[..., list[Verdict]]
Board = Callable[..., str]
Mapping = Callable[..., str]

AMPLIFIER_INPUTS = (1, 2, 15, 16)

RAILS = """
[rails.VBAT]
voltage = "20 V .. 28 V"
[rails.VOUT]
voltage = "12 V"
tolerance = "10 %"
load = "0 A .. 4 A"
"""
NO_LIMIT = {**dict.fromkeys(("R9", "R10", "R11", "R12")), "J2": "VOUT 0 PUMP"}

# Sensed on the way out of the filter: in+ on a divider behind the inductor, in- on the output itself.
HIGH_SIDE = {
    "L1": "SW VX 100u",
    "R12": "VX VOUT 0.1 1%",
    "J2": "VOUT 0 PUMP",
    "R9": "VOUT LIM 1k 1%",
    "R10": "SNS 0 23.7k 1%",
    "R11": "VX SNS 1k 1%",
}


def inputs(*, plus: str, minus: str) -> str:
    """Return the pins of the controller with its second amplifier's inputs on other nets."""
    return f"FB SET COMP DTC CT RT 0 DRN 0 0 DRN VBAT 0 REF {minus} {plus} 494"


# -------------------------------------------------------------------------------------------- input-open


def test_driven_inputs_pass(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("amplifier.input-open", pump())
    assert verdict.outcome is Outcome.PASS
    assert len(verdict.pins) == 4


@pytest.mark.parametrize(
    ("plus", "minus", "open_pins"),
    [
        pytest.param("0", "NC", ["2IN-"], id="in- open"),
        pytest.param("NC", "REF", ["2IN+"], id="in+ open"),
        pytest.param("NP", "NM", ["2IN+", "2IN-"], id="both open"),
        pytest.param("JOINED", "JOINED", ["2IN+", "2IN-"], id="joined and open"),
    ],
)
def test_an_input_without_a_path_fails(
    ask: Ask, pump: Board, plus: str, minus: str, open_pins: list[str]
) -> None:
    verdicts = ask("amplifier.input-open", pump(**{**NO_LIMIT, "U1": inputs(plus=plus, minus=minus)}))
    assert [verdict.outcome for verdict in verdicts] == [Outcome.FAIL] * len(open_pins)
    assert [verdict.message.partition(" ")[0] for verdict in verdicts] == open_pins


def test_an_input_on_a_capacitor_alone_fails(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("amplifier.input-open", pump("C20 SNS 0 1n", R11=None))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "error")
    assert verdict.remedy == "join SNS to a defined potential by a resistor"


@pytest.mark.parametrize("minus", ["COMP", "LIM"])
def test_an_unused_amplifier_as_a_follower_is_driven_by_its_own_output(
    ask: Ask, pump: Board, minus: str
) -> None:
    """False alarm guarded against: in- on FEEDBACK, straight or through 10 kohm, in+ on ground."""
    changes = {**NO_LIMIT, "U1": inputs(plus="0", minus=minus), "R9": "COMP LIM 10k"}
    (verdict,) = ask("amplifier.input-open", pump(**changes))
    assert verdict.outcome is Outcome.PASS


# ------------------------------------------------------------------------------------------------ unused


@pytest.mark.parametrize(
    ("plus", "minus", "more", "volts"),
    [
        pytest.param("0", "REF", (), 5.0, id="ground and reference"),
        pytest.param("0", "SET", (), 2.5, id="ground and the loop's divider"),
        pytest.param(
            "0", "HALF", ("R20 REF HALF 10k 1%", "R21 HALF 0 10k 1%"), 2.5, id="ground and a divider"
        ),
        pytest.param("LOW", "HIGH", ("R20 REF HIGH 10k", "R21 LOW 0 10k"), 5.0, id="both through resistors"),
    ],
)
def test_the_usual_ways_to_tie_off_an_amplifier_pass(
    ask: Ask, pump: Board, plus: str, minus: str, more: tuple[str, ...], volts: float
) -> None:
    netlist = pump(*more, **{**NO_LIMIT, "U1": inputs(plus=plus, minus=minus)})
    (verdict,) = ask("amplifier.unused", netlist)
    assert verdict.outcome is Outcome.PASS
    assert verdict.measured is not None
    assert verdict.measured.nominal == pytest.approx(volts, abs=0.01)


@pytest.mark.parametrize(
    ("plus", "minus", "volts"),
    [
        pytest.param("0", "0", 0.0, id="both at ground"),
        pytest.param("REF", "REF", 0.0, id="both at the reference"),
        pytest.param("SET", "SET", 0.0, id="joined on a divider"),
        pytest.param("REF", "0", -5.0, id="the wrong way round"),
    ],
)
def test_an_amplifier_whose_offset_decides_or_that_is_on_fails(
    ask: Ask, pump: Board, plus: str, minus: str, volts: float
) -> None:
    (verdict,) = ask("amplifier.unused", pump(**{**NO_LIMIT, "U1": inputs(plus=plus, minus=minus)}))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "error")
    assert verdict.measured is not None
    assert verdict.measured.nominal == pytest.approx(volts, abs=1e-9)
    assert verdict.remedy == "tie 2IN+ to ground and 2IN- to the reference"


@pytest.mark.parametrize(("top", "outcome"), [("82k", Outcome.PASS), ("120k", Outcome.FAIL)])
def test_the_difference_must_be_five_offsets(ask: Ask, pump: Board, top: str, outcome: Outcome) -> None:
    # 5 V / 83 = 60 mV and 5 V / 121 = 41 mV against 5 x 10 mV
    changes = {
        **NO_LIMIT,
        "U1": inputs(plus="0", minus="LIM"),
        "R9": f"REF LIM {top} 1%",
        "R10": "LIM 0 1k 1%",
    }
    (verdict,) = ask("amplifier.unused", pump(**changes))
    assert verdict.outcome is outcome
    assert verdict.limit is not None
    assert verdict.limit.minimum == pytest.approx(50e-3)


def test_two_amplifiers_in_use_leave_none_to_tie_off(
    ask: Ask, pump: Board, over_voltage: dict[str, str]
) -> None:
    assert ask("amplifier.unused", pump()) == []
    assert ask("amplifier.unused", pump(**over_voltage)) == []


def test_a_signal_is_not_compared_with_ground(ask: Ask, pump: Board) -> None:
    over_voltage = {**NO_LIMIT, "U1": inputs(plus="OVER", minus="LEVEL"), "D9": "OVER VOUT DS"}
    (verdict,) = ask("amplifier.unused", pump("R20 OVER 0 10k", "R21 LEVEL 0 10k", **over_voltage))
    assert verdict.outcome is Outcome.REVIEW
    assert verdict.message.endswith("the offset decides")
    assert ask("amplifier.unused", pump("R20 OVER 0 10k", "R21 LEVEL REF 10k", **over_voltage)) == []


def test_a_tie_off_of_unknown_voltage_is_open(ask: Ask, pump: Board) -> None:
    (verdict,) = ask(
        "amplifier.unused", pump("J9 AUX 0 X", **{**NO_LIMIT, "U1": inputs(plus="0", minus="AUX")})
    )
    assert verdict.outcome is Outcome.OPEN
    assert verdict.needs == ('brief: [rails.AUX] voltage = "..."',)


# ------------------------------------------------------------------------------------------- common-mode


def test_every_input_is_inside_in_every_regime(ask: Ask, pump: Board) -> None:
    verdicts = ask("amplifier.common-mode", pump(), brief=RAILS)
    assert [verdict.outcome for verdict in verdicts] == [Outcome.PASS] * 4
    for verdict in verdicts:
        assert verdict.limit is not None
        assert (verdict.limit.minimum, verdict.limit.maximum) == (-0.3, 18.0)  # 20 V - 2 V
    sense = next(verdict for verdict in verdicts if verdict.message.startswith("2IN+"))
    assert sense.measured is not None
    assert sense.measured.maximum == pytest.approx(0.546, abs=0.002)  # the threshold at its worst
    assert "highest at current limit" in sense.message


def test_high_side_sensing_under_a_high_supply_is_inside(ask: Ask, pump: Board) -> None:
    """False alarm guarded against: 12 V on both inputs, 18 V allowed."""
    verdicts = ask("amplifier.common-mode", pump(**HIGH_SIDE), brief=RAILS)
    assert {verdict.outcome for verdict in verdicts} == {Outcome.PASS}


def test_high_side_sensing_near_the_supply_fails(ask: Ask, pump: Board) -> None:
    # 13 V - 2 V = 11 V, the inputs stand at 11.6 V and 12 V
    brief = RAILS.replace("20 V .. 28 V", "13 V .. 28 V")
    failed = [
        v for v in ask("amplifier.common-mode", pump(**HIGH_SIDE), brief=brief) if v.outcome is Outcome.FAIL
    ]
    assert [verdict.message[:4] for verdict in failed] == ["2IN+", "2IN-"]
    assert {verdict.level for verdict in failed} == {"error"}
    assert failed[0].remedy == "divide SNS down, or sense on the low side"


# The load returns to the battery's minus through the sense resistor: current pulls NEG below ground.
BELOW_GROUND = {
    "U1": inputs(plus="0", minus="SNS"),
    "R9": "REF SNS 10k 1%",
    "R10": "SNS NEG 1k 1%",
    "R11": None,
    "R12": "NEG 0 0.1 1%",
    "J1": "VBAT NEG BATTERY",
    "J2": "VOUT 0 PUMP",
}


def test_sensing_below_ground_with_the_input_lifted_is_inside(ask: Ask, pump: Board) -> None:
    """False alarm guarded against: in- falls from 5 V / 11 = 0.455 V to 0 V as the limit takes over."""
    verdicts = ask("amplifier.common-mode", pump(**BELOW_GROUND), brief=RAILS)
    sense = next(verdict for verdict in verdicts if verdict.message.startswith("2IN-"))
    assert sense.outcome is Outcome.PASS
    assert sense.measured is not None
    assert sense.measured.minimum == pytest.approx(0.0, abs=0.1)
    assert sense.measured.maximum == pytest.approx(0.49, abs=0.02)


def test_a_sense_voltage_far_below_ground_fails(ask: Ask, pump: Board) -> None:
    # In+ held at -1 V, in- on the resistor itself: 10 A x 0.1 ohm is 1 V below ground before it takes over
    direct = {**BELOW_GROUND, "U1": inputs(plus="MINUS1", minus="NEG"), "R9": None, "R10": None}
    verdicts = ask("amplifier.common-mode", pump("V9 MINUS1 0 -1", **direct), brief=RAILS)
    failed = [verdict for verdict in verdicts if verdict.outcome is Outcome.FAIL]
    assert [verdict.message[:4] for verdict in failed] == ["2IN+", "2IN-"]


def test_a_tied_off_amplifier_above_the_range_is_a_warning(ask: Ask, pump: Board) -> None:
    # VCC 7 V: 5 V allowed, the reference may have 5.29 V; its output stays off all the same
    netlist = pump(**{**NO_LIMIT, "U1": inputs(plus="0", minus="REF")})
    brief = '[rails.VBAT]\nvoltage = "7 V .. 12 V"\n'
    failed = [v for v in ask("amplifier.common-mode", netlist, brief=brief) if v.outcome is Outcome.FAIL]
    assert [(verdict.message[:4], verdict.level) for verdict in failed] == [("2IN-", "warning")]


def test_without_the_supplys_voltage_the_range_is_open(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("amplifier.common-mode", pump())
    assert verdict.outcome is Outcome.OPEN
    assert verdict.needs == ('brief: [rails.VBAT] voltage = "..."',)


def test_a_supply_that_leaves_no_range_is_left_to_the_supplys_rule(ask: Ask, pump: Board) -> None:
    assert ask("amplifier.common-mode", pump(), brief='[rails.VBAT]\nvoltage = "0 V .. 1 V"\n') == []
    assert (
        ask("supply.range", pump(), brief='[rails.VBAT]\nvoltage = "0 V .. 1 V"\n')[0].outcome is Outcome.FAIL
    )


def test_a_trimmed_output_does_not_move_an_input_that_the_loop_holds(ask: Ask, pump: Board) -> None:
    """False alarm guarded against: the trimmer sweeps the output, and in+ only from 2.5 V to 3.2 V."""
    trimmed = {"R7": "LOW 0 750 1%", "RV1": "FB LOW LOW 500"}
    brief = RAILS.replace("20 V .. 28 V", "7 V .. 28 V")
    verdicts = ask("amplifier.common-mode", pump(**trimmed), brief=brief)
    held = next(verdict for verdict in verdicts if verdict.message.startswith("1IN+"))
    assert held.outcome is Outcome.PASS
    assert held.measured is not None
    assert held.measured.maximum < 3.3


# ---------------------------------------------------------------------------------------------- polarity


def test_more_output_and_more_current_shorten_the_pulse(ask: Ask, pump: Board) -> None:
    voltage, current = ask("amplifier.polarity", pump())
    assert voltage.outcome is current.outcome is Outcome.PASS
    assert voltage.message.startswith("at short circuit 1IN+")
    assert current.message.startswith("at no load 2IN+")


def test_exchanged_inputs_of_the_voltage_amplifier_fail(ask: Ask, pump: Board) -> None:
    swapped = "SET FB COMP DTC CT RT 0 DRN 0 0 DRN VBAT 0 REF LIM SNS 494"
    voltage, current = ask("amplifier.polarity", pump(U1=swapped, C3="CZ FB 10n"))
    assert (voltage.outcome, voltage.level) == (Outcome.FAIL, "error")
    assert "more output voltage lengthens the pulse" in voltage.message
    assert voltage.remedy == "exchange 1IN+ and 1IN-"
    assert current.outcome is Outcome.PASS


def test_exchanged_inputs_of_the_current_amplifier_fail(ask: Ask, pump: Board) -> None:
    voltage, current = ask("amplifier.polarity", pump(U1=inputs(plus="LIM", minus="SNS")))
    assert voltage.outcome is Outcome.PASS
    assert current.outcome is Outcome.FAIL
    assert "more current lengthens the pulse" in current.message


def test_sensing_on_the_high_side_has_a_polarity_as_well(ask: Ask, pump: Board) -> None:
    (_, current) = ask("amplifier.polarity", pump(**HIGH_SIDE), brief=RAILS)
    assert current.outcome is Outcome.PASS


def test_amplifiers_that_are_tied_off_have_no_polarity(ask: Ask, pump: Board) -> None:
    verdicts = ask("amplifier.polarity", pump(**{**NO_LIMIT, "U1": inputs(plus="0", minus="REF")}))
    assert [verdict.pins[0] for verdict in verdicts] == ["amplifier 1 in+"]


# ----------------------------------------------------------------------------------------------- absence


@pytest.mark.parametrize(
    "rule", ["input-open", "unused", "common-mode", "polarity", "compensation", "input-error"]
)
def test_amplifiers_that_are_not_mapped_are_left_to_the_rule_that_says_so(
    ask: Ask, pump: Board, without_pins: Mapping, rule: str
) -> None:
    assert ask(f"amplifier.{rule}", pump(), brief=RAILS + without_pins(*AMPLIFIER_INPUTS)) == []
