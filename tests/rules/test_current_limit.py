"""The rules on the current limit and its sense resistor, on the board of an irrigation pump."""

from __future__ import annotations

import re
from collections.abc import Callable

import pytest
from pwmlint.lint import Outcome, Verdict

Ask = Callable[..., list[Verdict]]
Board = Callable[..., str]

THRESHOLD = 5 / 10.1  # 9.1 kohm over 1 kohm from the reference
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
    "C5": "VBAT 0 470u",
}


def told(current_limit: str) -> str:
    return f'[controllers.U1]\ncurrent_limit = "{current_limit}"\n'


# ------------------------------------------------------------------------------------------- trip-point


def test_without_a_brief_the_trip_point_is_told(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("current-limit.trip-point", pump())
    assert verdict.outcome is Outcome.INFORMATIONAL
    assert verdict.measured is not None
    # (0.495 V + bias) / 0.1 ohm; SLVS074 p.4: 0.2 uA out of in+ through 1 kohm against 901 ohm at in-
    nominal = (THRESHOLD + 0.2e-6 * 9.1e3 / 10.1 - 0.2e-6 * 1e3) / 0.1
    assert verdict.measured.nominal == pytest.approx(nominal, rel=1e-3)
    # p.4: 5.29 V, 10 mV of offset, 1 uA; dividers and sense resistor at their ends
    highest = (5.29 * 1010 / (1010 + 9009) + 10e-3 + 1e-6 * 1010 * 9009 / 10019 + 1e-6 * 1050) / 0.099
    assert verdict.measured.maximum == pytest.approx(highest, rel=1e-3)


def test_the_published_example_limits_at_ten_amperes(ask: Ask, pump: Board) -> None:
    # SLVA001, from memory: 1 kohm and 4 kohm from 5 V make 1 V; across 0.1 ohm 10 A
    (verdict,) = ask("current-limit.trip-point", pump(R9="REF LIM 4k 1%"))
    assert verdict.measured is not None
    assert verdict.measured.nominal == pytest.approx(10.0, rel=1e-3)


def test_the_full_load_must_pass_the_limit(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("current-limit.trip-point", pump(), brief=RAILS)
    assert verdict.outcome is Outcome.PASS
    assert verdict.limit is not None
    assert (verdict.limit.minimum, verdict.limit.maximum) == (4.0, None)
    (starved,) = ask("current-limit.trip-point", pump(), brief=RAILS.replace("4 A", "6 A"))
    assert (starved.outcome, starved.level) == (Outcome.FAIL, "error")


@pytest.mark.parametrize(
    ("resistor", "wanted"),
    [
        pytest.param("0.2", "4 A .. 6 A", id="limits too early"),
        pytest.param("0.05", "4 A .. 6 A", id="limits too late"),
    ],
)
def test_the_resistor_that_the_remedy_names_meets_the_band(
    ask: Ask, pump: Board, resistor: str, wanted: str
) -> None:
    (verdict,) = ask("current-limit.trip-point", pump(R12=f"RTN 0 {resistor} 1%"), brief=told(wanted))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "error")
    # 0.495 V / 5 A, the middle of the band, is 99 mohm
    match = re.search(r"R12 of about ([0-9.]+) mΩ takes over at 5.00 A", verdict.remedy)
    assert match is not None
    assert float(match[1]) == pytest.approx(99.0, abs=0.5)
    (mended,) = ask("current-limit.trip-point", pump(R12=f"RTN 0 {match[1]}m 1%"), brief=told(wanted))
    assert mended.outcome is Outcome.PASS


def test_a_lone_lower_side_is_met_with_a_fifth_to_spare(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("current-limit.trip-point", pump(R12="RTN 0 0.2 1%"), brief=RAILS)
    assert verdict.outcome is Outcome.FAIL
    # 1.2 x 4 A = 4.8 A: 0.495 V / 4.8 A = 103 mohm
    assert verdict.remedy.startswith("R12 of about 103 mΩ takes over at 4.80 A")


def test_a_trimmer_in_the_threshold_widens_the_band(ask: Ask, pump: Board) -> None:
    # 1 kohm to 1.5 kohm below 9.1 kohm: 0.495 V to 0.708 V
    (verdict,) = ask("current-limit.trip-point", pump("RV1 LIM TAP TAP 500", R10="TAP 0 1k 1%"))
    assert verdict.measured is not None
    assert verdict.measured.minimum < 4.95 < 7.0 < verdict.measured.maximum


def test_a_trimmed_limit_must_be_within_reach_of_every_unit(ask: Ask, pump: Board) -> None:
    # Wiper from ground to 0.52 V over 0.1 ohm: up to 5.2 A, less offset, reference spread and tolerances.
    board = pump(R10="LIM0 0 1 1%", R9="REF TOP 9.1k 1%", RV1="TOP LIM LIM0 1k 10%")
    told = '{}[controllers.U1]\noutput = "VOUT"\ncurrent_limit = "{}"\n'
    (verdict,) = ask("current-limit.trip-point", board, brief=told.format("", "3 A .. 3.5 A"))
    assert verdict.outcome is Outcome.PASS
    assert "RV1 sets it from" in verdict.message
    (verdict,) = ask("current-limit.trip-point", board, brief=told.format("", "6 A .. 7 A"))
    assert verdict.outcome is Outcome.FAIL


def test_a_boosts_switch_carries_more_than_the_load(ask: Ask) -> None:
    # 12 V to 24 V, 2 A: 4 A in the choke, half of the time in the switch; 0.495 V / 0.1 ohm stop 4.95 A.
    board = """press lamp
U1 FB SET COMP DTC CT RT 0 VIN DRV DRV VIN VIN 0 REF LIM CS 494
R1 DRV 0 470
M1 SW DRV CS CS NM
R2 CS 0 0.1 1%
L1 VIN SW 47u
D1 SW VOUT DS
C1 VOUT 0 470u
R3 VOUT FB 43k
R4 FB 0 5k
R5 REF SET 5.1k
R6 SET 0 5.1k
R7 REF LIM 9.1k
R8 LIM 0 1k
J1 VOUT 0 LAMP
.model NM NMOS
.model DS D
.end
"""
    rails = '[rails.VIN]\nvoltage = "12 V"\n[rails.VOUT]\nvoltage = "24 V"\nload = "0 A .. {} A"\n'
    brief = rails + '[controllers.U1]\noutput = "VOUT"\n'
    (verdict,) = ask("current-limit.trip-point", board, brief=brief.format("2"))
    assert verdict.limit is not None
    assert verdict.limit.minimum == pytest.approx(2.0)  # 4 A for half of the time
    assert verdict.outcome is Outcome.PASS
    (verdict,) = ask("current-limit.sense-dissipation", board, brief=brief.format("2"))
    assert verdict.message.startswith("R2 takes 800 mW at full load")  # 4 A x 4 A x 0.1 ohm, half of the time


def test_an_output_that_feeds_the_threshold_folds_the_limit_back(ask: Ask, pump: Board) -> None:
    # From the output as well: 5 V / 9.1 kohm and 12.1 V / 24 kohm against 1 kohm; shorted, 5 V alone
    (verdict,) = ask("current-limit.trip-point", pump("R20 VOUT LIM 24k 1%"))
    assert verdict.measured is not None
    below = 1 / (1 / 1e3 + 1 / 9.1e3 + 1 / 24e3)
    assert verdict.measured.nominal == pytest.approx(below * (5 / 9.1e3 + 12.08 / 24e3) / 0.1, rel=2e-3)
    assert f"at {below * 5 / 9.1e3 / 0.1:.2f}" in verdict.message
    assert "into a short circuit" in verdict.message


def test_sensing_on_the_high_side_is_solved(ask: Ask, pump: Board) -> None:
    """False alarm guarded against: the threshold is a share of the output, 12 V x 1 / 23.7 = 0.506 V."""
    (verdict,) = ask("current-limit.trip-point", pump(**HIGH_SIDE), brief=RAILS)
    assert verdict.outcome is Outcome.PASS
    assert verdict.measured is not None
    assert verdict.measured.nominal == pytest.approx(12 / 23.7 / 0.1, rel=0.01)


def test_sensing_below_ground_is_solved(ask: Ask, pump: Board) -> None:
    """False alarm guarded against: in- comes down to 0 V at 5 V x 1 / 10 = 0.5 V below ground."""
    (verdict,) = ask("current-limit.trip-point", pump(**BELOW_GROUND), brief=RAILS)
    assert verdict.outcome is Outcome.PASS
    assert verdict.measured is not None
    assert verdict.measured.nominal == pytest.approx(5.0, rel=1e-2)


@pytest.mark.parametrize(
    ("changes", "need"),
    [
        pytest.param({"R10": "LIM 0"}, "a value for R10", id="no value"),
        pytest.param(HIGH_SIDE, '[rails.VOUT] voltage = "..."', id="unknown output"),
    ],
)
def test_a_trip_point_that_cannot_be_had_is_open(
    ask: Ask, pump: Board, changes: dict[str, str], need: str
) -> None:
    changes = {**changes, "R7": "FB 0"}  # nor does the loop tell the output
    (verdict,) = ask("current-limit.trip-point", pump(**changes))
    assert verdict.outcome is Outcome.OPEN
    assert need in verdict.needs[0]


@pytest.mark.parametrize(
    "changes",
    [
        pytest.param({"R12": "RTN 0 0"}, id="link in place of the resistor"),
        pytest.param({"R12": "RTN 0"}, id="no value"),
        pytest.param({"R12": None}, id="no resistor"),
    ],
)
def test_without_a_sense_resistor_the_rule_is_silent(ask: Ask, pump: Board, changes: dict[str, str]) -> None:
    assert ask("current-limit.trip-point", pump(**changes)) == []
    assert ask("current-limit.sense-dissipation", pump(**changes)) == []


# ------------------------------------------------------------------------------------ sense-dissipation


def test_without_a_rating_the_wattage_to_fit_is_named(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("current-limit.sense-dissipation", pump(), brief=RAILS)
    assert verdict.outcome is Outcome.OPEN
    assert verdict.needs == ("parts list: power of R12",)
    assert "R12 takes 1.60 W at full load" in verdict.message  # (4 A)^2 x 0.1 ohm
    assert verdict.measured is not None
    assert verdict.measured.nominal == pytest.approx(THRESHOLD**2 / 0.1, rel=1e-2)
    # 0.546 V at the worst, with 10 mV of offset and the reference at 5.29 V: squared over 0.099 ohm, 3.01 W
    assert verdict.measured.maximum == pytest.approx(3.01, abs=0.01)
    assert verdict.remedy == "fit at least 5.00 W"


@pytest.mark.parametrize(
    ("power", "outcome"), [("5 W", Outcome.PASS), ("3 W", Outcome.FAIL), ("1 W", Outcome.FAIL)]
)
def test_the_rating_is_held_against_the_worst_case(
    ask: Ask, pump: Board, power: str, outcome: Outcome
) -> None:
    # 2.45 W nominal, 3.01 W at the worst: 3 W are crossed by a corner, which no statistics excuse
    (verdict,) = ask("current-limit.sense-dissipation", pump(), parts=f"reference,power\nR12,{power}\n")
    assert verdict.outcome is outcome
    assert ("fit at least 5.00 W" in verdict.remedy) is (outcome is Outcome.FAIL)


@pytest.mark.parametrize(
    ("policy", "share", "fit"),
    [
        # IEC 60115-8: full power up to 70 degC; EEE-INST-002: 60 %; ECSS-Q-ST-30-11C, from memory: 50 %
        pytest.param("commercial", "100 %", "5.00 W", id="3.01 W"),
        pytest.param("nasa", "60 %", "7.00 W", id="3.01 W over 0.6 is 5.02 W"),
        pytest.param("ecss", "50 %", "7.00 W", id="3.01 W over 0.5 is 6.02 W"),
    ],
)
def test_the_policy_of_the_brief_derates(ask: Ask, pump: Board, policy: str, share: str, fit: str) -> None:
    parts = "reference,power\nR12,1 W\n"
    (verdict,) = ask(
        "current-limit.sense-dissipation", pump(), brief=f'[design]\nderating = "{policy}"\n', parts=parts
    )
    assert verdict.outcome is Outcome.FAIL
    assert any(f"{share} of the rating" in assumption for assumption in verdict.assumptions)
    assert verdict.remedy == f"fit at least {fit}"


def test_an_ambient_that_nobody_tells_is_assumed(ask: Ask, pump: Board) -> None:
    (verdict,) = ask("current-limit.sense-dissipation", pump(), parts="reference,power\nR12,5 W\n")
    assert verdict.outcome is Outcome.PASS
    assert any("at 70 °C assumed" in assumption for assumption in verdict.assumptions)
