"""The rules on what the current limit senses, on the board of an irrigation pump."""

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

# Sensed on the way out of the filter: in+ on a divider behind the inductor, in- on the output itself.
HIGH_SIDE = {
    "L1": "SW VX 100u",
    "R12": "VX VOUT 0.1 1%",
    "J2": "VOUT 0 PUMP",
    "R9": "VOUT LIM 1k 1%",
    "R10": "SNS 0 23.7k 1%",
    "R11": "VX SNS 1k 1%",
}

# Sensed below ground in the battery's return: the reference lifts in-, in+ lies on ground.
BELOW_GROUND = {
    "U1": "FB SET COMP DTC CT RT 0 DRN 0 0 DRN VBAT 0 REF SNS 0 494",
    "R9": "REF SNS 10k 1%",
    "R10": "SNS NEG 1k 1%",
    "R11": None,
    "R12": "NEG 0 0.1 1%",
    "J1": "VBAT NEG BATTERY",
    "J2": "VOUT 0 PUMP",
}

# A boost whose switch stands on the sense resistor.
SWITCH_CURRENT = {
    "L1": "VBAT SW 100u",
    "M1": "SW DRN RTN RTN NM",
    "D1": "SW VOUT DS",
    "R13": "VBAT DRN 1k",
    "R14": None,
    "J2": "VOUT 0 PUMP",
}

UNUSED = {
    "U1": "FB SET COMP DTC CT RT 0 DRN 0 0 DRN VBAT 0 REF REF 0 494",
    **dict.fromkeys(("R9", "R10", "R11", "R12")),
    "J2": "VOUT 0 PUMP",
}


# ---------------------------------------------------------------------------------------------- present


@pytest.mark.parametrize(
    ("changes", "says"),
    [
        pytest.param({}, "from RTN to 0, which carries the output return current", id="return of the load"),
        pytest.param(HIGH_SIDE, "from VX to VOUT, which carries the output current", id="high side"),
        pytest.param(BELOW_GROUND, "from NEG to 0, which carries the input current", id="below ground"),
        pytest.param(SWITCH_CURRENT, "from RTN to 0, which carries the switch current", id="switch"),
        pytest.param({"R11": "RTN SNS 1k", "C5": "SNS 0 1n"}, "from RTN to 0", id="behind a filter"),
    ],
)
def test_a_sense_resistor_is_found_with_what_flows_in_it(
    ask: Ask, pump: Board, changes: dict[str, str], says: str
) -> None:
    (verdict,) = ask("current-limit.present", pump(".model NM NMOS", **changes), brief=RAILS)
    assert verdict.outcome is Outcome.PASS
    assert verdict.parts == ("R12",)
    assert says in verdict.message


@pytest.mark.parametrize(
    "changes",
    [
        pytest.param(UNUSED, id="second amplifier tied off"),
        pytest.param({"R12": "RTN 0 0"}, id="a link"),
        pytest.param({"R12": "RTN 0 4.7k"}, id="wrong decade"),
    ],
)
def test_no_limit_is_for_a_person(ask: Ask, pump: Board, changes: dict[str, str]) -> None:
    (verdict,) = ask("current-limit.present", pump(**changes))
    assert (verdict.outcome, verdict.level) == (Outcome.REVIEW, None)
    assert "or tell what else does" in verdict.remedy


# ----------------------------------------------------------------------------------------- sense-voltage


def test_a_threshold_of_many_offsets_passes(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("current-limit.sense-voltage", pump(), brief=RAILS)
    assert verdict.outcome is Outcome.PASS
    # SLVS074 p.4: 10 mV of 495 mV; 4 A x 0.1 ohm of 12 V
    assert "2.02 % of the threshold 495 mV" in verdict.message
    assert "takes 3.33 % of VOUT" in verdict.message
    assert verdict.limit is not None
    assert verdict.limit.minimum == pytest.approx(10e-3 / 0.05)  # 5 %: common practice, no source


def test_a_threshold_of_a_few_offsets_is_for_a_person(ask: Ask, pump: Board) -> None:
    # 5 V / 101 = 49.5 mV: the offset is a fifth of it
    (verdict,) = ask("current-limit.sense-voltage", pump(R9="REF LIM 100k 1%", R12="RTN 0 0.01 1%"))
    assert (verdict.outcome, verdict.level) == (Outcome.REVIEW, None)
    assert "raise the threshold to 200 mV or more" in verdict.remedy
    assert "at full load" not in verdict.message  # nobody told the load


# ---------------------------------------------------------------------------------------- sense-polarity


@pytest.mark.parametrize(
    "changes",
    [
        pytest.param({}, id="return of the load"),
        pytest.param(HIGH_SIDE, id="high side"),
        pytest.param(BELOW_GROUND, id="below ground"),
        pytest.param(SWITCH_CURRENT, id="switch"),
    ],
)
def test_a_current_that_trips_the_limit_flows_the_right_way(
    ask: Ask, pump: Board, changes: dict[str, str]
) -> None:
    """False alarms guarded against: sensing above, below and at ground."""
    (verdict,) = ask("current-limit.sense-polarity", pump(".model NM NMOS", **changes), brief=RAILS)
    assert verdict.outcome is Outcome.PASS
    assert "brings the amplifier's inputs together" in verdict.message


def test_the_current_of_a_high_side_switch_enters_from_its_supply(ask: Ask, pump: Board) -> None:
    """False alarm guarded against: the switch's end of the resistor falls as the current rises."""
    high = {
        "U1": "FB SET COMP DTC CT RT 0 DRN 0 0 DRN VBAT 0 REF LOW HIGH 494",
        "R9": "VBAT HIGH 10k 0.1%",
        "R10": "HIGH 0 2k 0.1%",
        "R11": "VSW LOW 10k 0.1%",
        "R15": "LOW 0 2k 0.1%",
        "R16": "REF LOW 100k 1%",
        "R12": "VBAT VSW 0.02 1%",
        "R13": "VSW GATE 1k",
        "M1": "SW GATE VSW VSW PM",
        "J2": "VOUT 0 PUMP",
    }
    rails = '[rails.VBAT]\nvoltage = "20 V .. 28 V"\n'
    (verdict,) = ask("current-limit.sense-polarity", pump(**high), brief=rails)
    assert (verdict.outcome, verdict.message[:14]) == (Outcome.PASS, "switch current")
    (verdict,) = ask("current-limit.sense-polarity", pump("C9 VSW 0 470u", **high), brief=rails)
    assert (verdict.outcome, verdict.message[:13]) == (Outcome.PASS, "input current")


def test_a_current_that_drives_the_inputs_apart_never_trips_the_limit(ask: Ask, pump: Board) -> None:
    exchanged = {**HIGH_SIDE, "R9": "VX LIM 1k 1%", "R11": "VOUT SNS 1k 1%"}
    (verdict,) = ask("current-limit.sense-polarity", pump(**exchanged), brief=RAILS)
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "error")
    assert "drives the amplifier's inputs apart" in verdict.message
    assert verdict.remedy == "exchange the ends of R12, or the amplifier's inputs"


# ---------------------------------------------------------------------------------------- pulse-by-pulse


@pytest.mark.parametrize(
    "changes",
    [
        pytest.param({}, id="return of the load"),
        pytest.param(HIGH_SIDE, id="output"),
        pytest.param({**BELOW_GROUND, "C5": "VBAT 0 470u"}, id="input, ahead of its capacitor"),
    ],
)
def test_a_smooth_current_has_no_pulses_to_miss(ask: Ask, pump: Board, changes: dict[str, str]) -> None:
    (verdict,) = ask("current-limit.pulse-by-pulse", pump(**changes), brief=RAILS)
    assert verdict.outcome is Outcome.PASS


@pytest.mark.parametrize(
    "changes",
    [
        pytest.param(SWITCH_CURRENT, id="switch"),
        pytest.param({**BELOW_GROUND, "C5": "VBAT NEG 470u"}, id="input, behind its capacitor"),
    ],
)
def test_an_error_amplifier_on_pulses_is_for_a_person(ask: Ask, pump: Board, changes: dict[str, str]) -> None:
    (verdict,) = ask("current-limit.pulse-by-pulse", pump(".model NM NMOS", **changes), brief=RAILS)
    assert (verdict.outcome, verdict.level) == (Outcome.REVIEW, None)
    assert "comparator with a latch" in verdict.remedy


# ----------------------------------------------------------------------------------------------- absence


@pytest.mark.parametrize("rule", ["sense-voltage", "sense-polarity", "pulse-by-pulse"])
def test_without_a_limit_nothing_more_is_asked_of_it(ask: Ask, pump: Board, rule: str) -> None:
    assert ask(f"current-limit.{rule}", pump(**UNUSED)) == []


@pytest.mark.parametrize("rule", ["sense-polarity", "pulse-by-pulse"])
def test_without_a_power_stage_nobody_knows_what_flows(ask: Ask, pump: Board, rule: str) -> None:
    assert ask(f"current-limit.{rule}", pump(M1=None)) == []


def test_amplifiers_that_are_not_mapped_are_left_to_the_rule_that_says_so(
    ask: Ask, pump: Board, without_pins: Mapping
) -> None:
    assert ask("current-limit.present", pump(), brief=without_pins(*AMPLIFIER_INPUTS)) == []


def test_a_threshold_of_nothing_is_for_a_person(ask: Ask, pump: Board) -> None:
    # Without its upper resistor the threshold stands at ground: any current limits.
    (verdict,) = ask("current-limit.sense-voltage", pump(R9=None))
    assert verdict.outcome is Outcome.REVIEW
    assert "more than all of the threshold" in verdict.message
