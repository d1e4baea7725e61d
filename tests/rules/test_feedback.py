"""The rules on the output voltage and its divider, on the board of an irrigation pump.

SLVS074 p.4: reference 4.75 V to 5.25 V, 25 mV of line and 15 mV of load regulation, offset 10 mV, bias
current 0.2 uA typical (out of the pin) and 1 uA at most.
"""

from __future__ import annotations

import re
from collections.abc import Callable

import pytest
from pwmlint.lint import Outcome, Verdict

Ask = Callable[..., list[Verdict]]
Board = Callable[..., str]
Mapping = Callable[..., str]

AMPLIFIER_INPUTS = (1, 2, 15, 16)

BIAS = 0.2e-6
SET_POINT = 2.5 + BIAS * 2550  # 5.1 kohm twice

DIRECT = {"U1": "VOUT SET COMP DTC CT RT 0 DRN 0 0 DRN VBAT 0 REF LIM SNS 494", "R6": None, "R7": None}
RHEOSTAT = {"R7": "LOW 0 750 1%", "RV1": "FB LOW LOW 500"}


def vout(voltage: str, tolerance: str = "10 %", more: str = "") -> str:
    return f'[rails.VOUT]\nvoltage = "{voltage}"\ntolerance = "{tolerance}"\n{more}'


def printed(remedy: str, part: str, series: str) -> str:
    """Return the value that a remedy names for a part, as a netlist writes it."""
    match = re.search(rf"{series}: .*?{part} ([0-9.]+) (k?)Ω", remedy)
    assert match is not None
    return match[1] + match[2]


# ----------------------------------------------------------------------------------------- output-voltage


def test_the_output_is_the_set_point_times_the_divider(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("feedback.output-voltage", pump())
    assert verdict.outcome is Outcome.INFORMATIONAL
    assert verdict.measured is not None
    nominal = SET_POINT * 4.83 - BIAS * 3830
    assert verdict.measured.nominal == pytest.approx(nominal, rel=1e-6)
    # Reference, resistors, offset and bias currents, each at its worst end.
    set_point = 5.29 * 5.151 / (5.151 + 5.049) + 1e-6 * 5151 * 5049 / 10200
    top, bottom = 3830 * 1.01, 1000 * 0.99
    highest = (set_point + 10e-3) * (1 + top / bottom) + 1e-6 * top
    assert verdict.measured.maximum == pytest.approx(highest, rel=1e-5)


def test_two_equal_dividers_make_five_volts(ask: Ask, pump: Board) -> None:
    # SLVA001, from memory: 5.1 kohm four times
    (verdict,) = ask("feedback.output-voltage", pump(R6="VOUT FB 5.1k 1%", R7="FB 0 5.1k 1%"))
    assert verdict.measured is not None
    assert verdict.measured.nominal == pytest.approx(5.0, abs=0.001)


def test_a_band_that_holds_every_corner_passes(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("feedback.output-voltage", pump(), brief=vout("12 V"))
    assert verdict.outcome is Outcome.PASS
    assert verdict.limit is not None
    assert (verdict.limit.minimum, verdict.limit.maximum) == pytest.approx((10.8, 13.2))


def test_a_corner_outside_is_for_a_person_while_root_sum_square_is_inside(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("feedback.output-voltage", pump(), brief=vout("12 V", "8 %"))
    assert verdict.outcome is Outcome.REVIEW
    (verdict,) = ask("feedback.output-voltage", pump(), brief=vout("12 V", "2 %"))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "error")


@pytest.mark.parametrize("series", ["E24", "E96"])
def test_the_printed_pair_of_preferred_values_mends_a_wrong_divider(
    ask: Ask, pump: Board, series: str
) -> None:
    # 2.5 V x (1 + 2 kohm / 1 kohm) = 7.5 V
    brief = vout("12 V")
    (verdict,) = ask("feedback.output-voltage", pump(R6="VOUT FB 2k 1%"), brief=brief)
    assert verdict.outcome is Outcome.FAIL
    top, bottom = (printed(verdict.remedy, part, series) for part in ("R6", "R7"))
    (mended,) = ask(
        "feedback.output-voltage", pump(R6=f"VOUT FB {top} 1%", R7=f"FB 0 {bottom} 1%"), brief=brief
    )
    assert mended.outcome is Outcome.PASS
    assert mended.measured is not None
    assert mended.measured.nominal == pytest.approx(12.0, rel=0.01)


def test_a_network_that_is_no_plain_divider_gets_no_pair(ask: Ask, pump: Board) -> None:
    three = {"R6": "VOUT MID 1k 1%", "R20": "MID FB 1k 1%"}
    (verdict,) = ask("feedback.output-voltage", pump(**three), brief=vout("12 V"))
    assert verdict.outcome is Outcome.FAIL
    assert verdict.remedy == "change the network so that 12.0 V makes the amplifier's inputs equal"


def test_an_injected_offset_lowers_the_output(ask: Ask, pump: Board) -> None:
    # (5 V - 2.5 V) / 47 kohm = 53 uA less through the upper resistor: 0.2 V
    (verdict,) = ask("feedback.output-voltage", pump("R20 REF FB 47k 1%"))
    assert verdict.measured is not None
    plain = SET_POINT * 4.83 - BIAS * 3830
    assert verdict.measured.nominal == pytest.approx(plain - (5 - SET_POINT) / 47e3 * 3830, rel=1e-5)


def test_direct_current_from_the_amplifiers_output_moves_the_set_point(ask: Ask, pump: Board) -> None:
    # SLVA001, from memory: 51 kohm over 510 ohm. FEEDBACK between 0.5 V and 3.5 V: 2 V +- 1.5 V against 2.5 V
    netlist = pump(
        "R20 SET INV 510 1%",
        U1="FB INV COMP DTC CT RT 0 DRN 0 0 DRN VBAT 0 REF LIM SNS 494",
        R8="COMP INV 51k 1%",
        C3=None,
    )
    (verdict,) = ask("feedback.output-voltage", netlist)
    assert verdict.measured is not None
    (plain,) = ask("feedback.output-voltage", pump())
    assert plain.measured is not None
    moved = 4.83 * -0.5 * 3060 / 54060
    assert verdict.measured.nominal == pytest.approx(plain.measured.nominal + moved, abs=0.01)
    # ... and 4.83 x 1.5 V x 3.06 / 54.06 = 0.41 V to either side, less what loads the reference's own spread
    wider = verdict.measured.maximum - verdict.measured.minimum
    assert wider == pytest.approx(plain.measured.maximum - plain.measured.minimum + 2 * 0.41, rel=0.05)


def test_a_trimmer_as_a_rheostat_is_judged_by_what_it_can_be_set_to(ask: Ask, pump: Board) -> None:
    # Nominal 2.5 V x (1 + 3.83 / 1.25) = 10.2 V to 2.5 V x (1 + 3.83 / 0.75) = 15.3 V; the unit at the worst
    # has a track of 400 ohm and a high reference: (5.29 V x 0.505 + 13 mV) x (1 + 3.868 / 1.1425) = 11.8 V
    (verdict,) = ask("feedback.output-voltage", pump(**RHEOSTAT), brief=vout("12 V", "2 %"))
    assert verdict.outcome is Outcome.PASS
    assert "from 11.8 V to 13.9 V on every unit" in verdict.message
    assert any("RV1 set on the bench" in assumption for assumption in verdict.assumptions)


def test_a_trimmer_that_does_not_reach_fails(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("feedback.output-voltage", pump(**RHEOSTAT), brief=vout("15 V", "2 %"))
    assert verdict.outcome is Outcome.FAIL
    assert "15.0 V lies within reach" in verdict.remedy


def test_a_trimmer_without_a_brief_is_swept(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("feedback.output-voltage", pump(**RHEOSTAT))
    assert verdict.outcome is Outcome.INFORMATIONAL
    assert "RV1 swept end to end" in verdict.message


@pytest.mark.parametrize(
    ("changes", "need"),
    [
        pytest.param({"R6": "VOUT FB"}, "a value for R6", id="no value"),
        pytest.param({"R20": "FB AUX 1k", "L9": "AUX W9 1u"}, 'output = "..."', id="two nets it may sense"),
    ],
)
def test_an_output_that_cannot_be_had_is_open(
    ask: Ask, pump: Board, changes: dict[str, str], need: str
) -> None:
    (verdict,) = ask("feedback.output-voltage", pump(**changes))
    assert verdict.outcome is Outcome.OPEN
    assert need in verdict.needs[0]


def test_inputs_that_no_output_makes_equal_are_open(ask: Ask, pump: Board) -> None:
    # In- straight on the joined input: nothing that the output does moves the difference
    joined = "FB FB COMP DTC CT RT 0 DRN 0 0 DRN VBAT 0 REF LIM SNS 494"
    (verdict,) = ask("feedback.output-voltage", pump(U1=joined))
    assert verdict.outcome is Outcome.OPEN


def test_each_of_two_controllers_has_its_own_output(ask: Ask, pump: Board) -> None:
    second = [
        "U2 FB2 SET2 COMP2 0 CT2 RT2 0 DR2 0 0 DR2 VBAT 0 REF2 REF2 0 494",
        "R30 REF2 SET2 5.1k 1%",
        "R31 SET2 0 5.1k 1%",
        "R32 VAUX FB2 5.1k 1%",
        "R33 FB2 0 5.1k 1%",
        "L2 DR2 VAUX 100u",
    ]
    verdicts = ask("feedback.output-voltage", pump(*second))
    found = {v.subject: round(v.measured.nominal, 1) for v in verdicts if v.measured is not None}
    assert found == {"U1": 12.1, "U2": 5.0}


# ------------------------------------------------------------------------------------------ divider-ratio


def test_the_ratio_is_compared_with_the_wanted_output(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("feedback.divider-ratio", pump(), brief=vout("12 V"))
    assert verdict.outcome is Outcome.PASS
    assert verdict.measured is not None
    assert verdict.measured.nominal == pytest.approx((SET_POINT * 4.83 - BIAS * 3830) / 12 - 1, abs=1e-6)
    assert verdict.limit is not None
    assert (verdict.limit.minimum, verdict.limit.maximum) == pytest.approx((-0.05, 0.05))  # half of 10 %


def test_a_wrong_decade_fails_by_its_ratio(ask: Ask, pump: Board) -> None:
    # 2.5 V x (1 + 0.383) = 3.46 V instead of 12 V: -71 %
    (verdict,) = ask("feedback.divider-ratio", pump(R6="VOUT FB 383 1%"), brief=vout("12 V"))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "warning")
    assert verdict.measured is not None
    assert verdict.measured.nominal == pytest.approx(2.5 * 1.383 / 12 - 1, abs=1e-3)
    assert "E96" in verdict.remedy


@pytest.mark.parametrize(
    ("changes", "brief"),
    [
        pytest.param({}, "", id="no brief"),
        pytest.param({}, '[rails.VOUT]\nvoltage = "12 V"\n', id="no tolerance"),
        pytest.param(RHEOSTAT, vout("12 V"), id="trimmed"),
    ],
)
def test_without_a_wanted_ratio_it_is_told(
    ask: Ask, pump: Board, changes: dict[str, str], brief: str
) -> None:
    (verdict,) = ask("feedback.divider-ratio", pump(**changes), brief=brief)
    assert verdict.outcome is Outcome.INFORMATIONAL
    assert "set point 2.50 V" in verdict.message


# ------------------------------------------------------------------------------------------------ complete


@pytest.mark.parametrize(
    "changes",
    [
        pytest.param({}, id="plain divider"),
        pytest.param(RHEOSTAT, id="lower half a rheostat"),
        pytest.param({"R6": "VS FB 3.83k 1%", "R20": "VOUT VS 10"}, id="sensed through a resistor"),
        pytest.param({"R6": "VS FB 3.83k 1%", "R20": "VOUT VS 10", "J3": "VS 0 SENSE"}, id="remote sense"),
        pytest.param(
            {"R6": "VOUT MID 3.83k 1%", "R7": "MID 0 1k 1%", "R20": "MID FB 1k"}, id="tap off the pin"
        ),
    ],
)
def test_a_whole_divider_passes(ask: Ask, pump: Board, changes: dict[str, str]) -> None:
    """False alarms guarded against: sound ways to draw the divider."""
    (verdict,) = ask("feedback.complete", pump(**changes))
    assert verdict.outcome is Outcome.PASS


@pytest.mark.parametrize(
    "changes", [pytest.param({"R7": None}, id="through a resistor"), pytest.param(DIRECT, id="straight")]
)
def test_an_output_equal_to_the_set_point_needs_no_lower_half(
    ask: Ask, pump: Board, changes: dict[str, str]
) -> None:
    brief = vout("2.5 V", "10 %", '[controllers.U1]\noutput = "VOUT"\n')
    (verdict,) = ask("feedback.complete", pump(**changes), brief=brief)
    assert verdict.outcome is Outcome.PASS
    assert "regulates to the set point" in verdict.message
    (output,) = ask("feedback.output-voltage", pump(**changes), brief=brief)
    assert output.outcome is Outcome.PASS


def test_a_missing_lower_half_fails_where_the_brief_wants_more_than_the_set_point(
    ask: Ask, pump: Board
) -> None:
    (verdict,) = ask("feedback.complete", pump(R7=None), brief=vout("12 V"))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "error")
    assert verdict.remedy == "add the lower resistor of the divider from FB to ground"


@pytest.mark.parametrize("changes", [{"R7": None}, DIRECT])
def test_a_missing_lower_half_is_for_a_person_where_nobody_tells_the_output(
    ask: Ask, pump: Board, changes: dict[str, str]
) -> None:
    (verdict,) = ask("feedback.complete", pump(**changes))
    assert (verdict.outcome, verdict.level) == (Outcome.REVIEW, None)
    assert "VOUT regulates to the set point" in verdict.message


def test_a_missing_upper_half_fails(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("feedback.complete", pump(R6=None))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "error")
    assert verdict.message == "1IN+ has a resistor to ground, none to the output"
    assert verdict.remedy == "add the upper resistor of the divider from the output to FB"


def test_amplifiers_tied_off_by_resistors_are_no_broken_dividers(ask: Ask, pump: Board) -> None:
    """False alarm guarded against: an opto-coupler feeds the loop into FEEDBACK, both amplifiers are off."""
    tied = "PLUS REF COMP DTC CT RT 0 DRN 0 0 DRN VBAT 0 REF REF PLUS 494"
    changes = dict.fromkeys(("R4", "R5", "R6", "R7", "R8", "R9", "R10", "R11", "C3"))
    (verdict,) = ask("feedback.complete", pump("R20 PLUS 0 10k", U1=tied, **changes))
    assert verdict.outcome is Outcome.INFORMATIONAL
    assert verdict.message == "no amplifier of U1 is meant to regulate a voltage"


def test_an_input_that_an_opto_coupler_drives_is_for_a_person(ask: Ask, pump: Board) -> None:
    """False alarm guarded against: the resistor to ground is the opto-coupler's load."""
    board = pump("U2 LED SG FB REF 817", "J3 LED SG SECONDARY", R6=None)
    (verdict,) = ask("feedback.complete", board, brief='[controllers.U1]\noutput = "VOUT"\n')
    assert verdict.outcome is Outcome.REVIEW
    assert verdict.message == "amplifier 1 follows U2: what is regulated there is not computed"


def test_an_output_that_no_amplifier_senses_is_for_a_person(ask: Ask, pump: Board) -> None:
    other = pump("L9 VS W9 1u", R6="VS FB 3.83k 1%")
    (verdict,) = ask("feedback.complete", other, brief='[controllers.U1]\noutput = "VOUT"\n')
    assert verdict.outcome is Outcome.REVIEW
    assert verdict.message == "no amplifier of U1 is joined by resistors to VOUT, but to VS"


def test_amplifiers_that_are_not_mapped_are_left_to_the_rule_that_says_so(
    ask: Ask, pump: Board, without_pins: Mapping
) -> None:
    for rule in ("complete", "output-voltage", "divider-ratio"):
        assert ask(f"feedback.{rule}", pump(), brief=without_pins(*AMPLIFIER_INPUTS)) == []
