"""The rules on ratings of resistors, on the controller of a bee-hive scale."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint import Level, Outcome, Verdict

Ask = Callable[..., list[Verdict]]

PARTS = {
    "R1": "RT 0 12k",
    "R2": "REF SET 5.1k 1%",
    "R3": "SET 0 5.1k 1%",
    "R4": "DTC 0 1k",
    "R5": "VBAT DRN 1k 1%",
    "R6": "VBAT 0 10k 1%",
}

BRIEF = '[design]\nambient = "0 degC .. {ambient} degC"\nderating = "{policy}"\n'
RAIL = '[rails.VBAT]\nvoltage = "20 V .. 30 V"\n'


def board(*more: str, **changed: str) -> str:
    parts = {name: changed.get(name, rest) for name, rest in PARTS.items()}
    return "\n".join(
        [
            "bee-hive scale",
            "U1 0 REF COMP DTC CT RT 0 DRN 0 0 DRN VBAT 0 REF REF SET 494",
            "C1 CT 0 1n",
            *(f"{name} {rest}" for name, rest in parts.items()),
            *more,
            ".end",
            "",
        ]
    )


def brief(policy: str = "commercial", ambient: int = 40) -> str:
    return BRIEF.format(ambient=ambient, policy=policy) + RAIL


def rated(heading: str, **ratings: str) -> str:
    return "\n".join([f"Reference,{heading}", *(f"{name},{rating}" for name, rating in ratings.items()), ""])


ALL = {"R1": "0.25 W", "R2": "0.25 W", "R3": "0.25 W", "R4": "0.25 W", "R5": "2 W", "R6": "0.25 W"}


class TestPower:
    def test_all_that_keep_their_rating_are_one_verdict_with_the_closest(self, ask: Ask):
        (verdict,) = ask("rating.resistor-power", board(), brief=brief(), parts=rated("Power", **ALL))
        assert verdict.outcome is Outcome.PASS
        # R5 from 30 V with the output saturated to nothing; 1 %, 25 K at 100 ppm/K: 30^2 / 987.5 ohm of 2 W
        assert "R5" in verdict.message
        assert verdict.measured is not None
        assert verdict.measured.maximum == pytest.approx(900 / 987.5)
        assert verdict.margin == pytest.approx(1 - 900 / 987.5 / 2)
        assert set(verdict.parts) == {"R2", "R3", "R4", "R5", "R6"}

    def test_an_overloaded_one_stands_alone_with_the_wattage_to_fit(self, ask: Ask):
        found = ask(
            "rating.resistor-power",
            board(R6="VBAT 0 1k 1%"),
            brief=brief(),
            parts=rated("Power", **ALL | {"R6": "0.5 W"}),
        )
        failed, passed = found
        assert (failed.outcome, failed.level, failed.subject) == (Outcome.FAIL, Level.ERROR, "R6")
        # 1 %, 25 K at 100 ppm/K: 30^2 / 987.5 ohm = 911 mW
        assert failed.measured is not None
        assert failed.measured.maximum == pytest.approx(900 / 987.5)
        assert failed.remedy == "fit at least 1.00 W for R6"
        assert failed.limit is not None
        assert failed.limit.maximum == 0.5
        assert "R6" not in passed.parts

    @pytest.mark.parametrize(
        ("policy", "ambient", "allowed"),
        [
            # IEC 60115-8: all of it up to 70 degC; EEE-INST-002: 0.6 up to 70 degC, nothing at 118 degC;
            # ECSS-Q-ST-30-11C, from memory: 0.5 up to 85 degC
            ("commercial", 40, 0.25),
            ("commercial", 85, 0.25 * 0.823529),
            ("nasa", 40, 0.15),
            ("nasa", 85, 0.103125),
            ("ecss", 40, 0.125),
        ],
    )
    def test_the_rating_is_derated_by_policy_and_ambient(
        self, ask: Ask, policy: str, ambient: int, allowed: float
    ):
        # R6 at 30^2 / 3950 ohm = 228 mW decides where it fails, else it is the closest
        found = ask(
            "rating.resistor-power",
            board(R6="VBAT 0 4k 1%", R5="VBAT DRN 100k"),
            brief=brief(policy, ambient),
            parts=rated("Power", **ALL),
        )
        verdict = next(v for v in found if v.measured is not None and v.measured.maximum > 0.2)
        assert verdict.limit is not None
        assert verdict.limit.maximum == pytest.approx(allowed, rel=1e-5)
        assert (verdict.outcome is Outcome.PASS) == (allowed > 0.2281)

    def test_no_resistor_stands_an_ambient_that_the_policy_forbids(self, ask: Ask):
        found = ask("rating.resistor-power", board(), brief=brief("nasa", 120), parts=rated("Power", **ALL))
        assert found[0].outcome is Outcome.FAIL
        assert "no resistor stands this ambient" in found[0].remedy

    def test_one_that_only_a_conducting_output_overloads_is_for_a_person(self, ask: Ask):
        found = ask(
            "rating.resistor-power", board(), brief=brief(), parts=rated("Power", **ALL | {"R5": "0.5 W"})
        )
        assert (found[0].outcome, found[0].subject, found[0].level) == (Outcome.REVIEW, "R5", None)
        assert "the mean over the pulses is less" in found[0].message
        assert found[0].remedy == "fit at least 1.00 W for R5"

    def test_small_powers_without_a_rating_are_those_of_any_resistor(self, ask: Ask):
        # R6: 30^2 / 99 kohm = 9.1 mW, a case of 0402 stands 62.5 mW
        found = ask("rating.resistor-power", board(R6="VBAT 0 100k 1%", R5="VBAT DRN 100k 1%"), brief=brief())
        (verdict,) = found
        assert verdict.outcome is Outcome.PASS
        assert any("taken for the smallest case" in one for one in verdict.assumptions)

    def test_large_powers_without_a_rating_are_named_once(self, ask: Ask):
        found = ask("rating.resistor-power", board(R6="VBAT 0 1k 1%"), brief=brief())
        verdict = found[-1]
        assert verdict.outcome is Outcome.OPEN
        assert verdict.needs == ("parts list: power of R5, R6",)
        assert "fit at least 1.00 W for R6" in verdict.remedy

    def test_a_sense_resistor_has_a_rule_of_its_own(self, ask: Ask):
        lines = board("R9 RTN 0 0.05", "R10 RTN SNS 1k", "J1 RTN X PLUG").replace("U1 0 REF", "U1 SNS SET")
        found = ask("rating.resistor-power", lines, brief=brief())
        assert all("R9" not in verdict.parts for verdict in found)

    def test_the_load_of_a_simulation_is_none_of_the_board(self, ask: Ask):
        found = ask("rating.resistor-power", board("RLOAD VBAT 0 10"), brief=brief())
        assert all("RLOAD" not in verdict.parts for verdict in found)

    def test_a_trimmer_is_judged_by_its_greatest_current(self, ask: Ask):
        lines = board("RV1 VBAT W W 1k 1%", "R7 W 0 100 1%")
        found = ask(
            "rating.resistor-power", lines, brief=brief(), parts=rated("Power", RV1="0.5 W", R7="20 W")
        )
        failed = next(verdict for verdict in found if verdict.subject == "RV1")
        # at the end of its travel 30 V / 99 ohm = 303 mA; 1.01 kohm would take 93 W of it
        assert failed.outcome is Outcome.FAIL
        assert failed.measured is not None
        assert failed.measured.maximum == pytest.approx(0.303**2 * 1010, rel=0.03)


class TestVoltage:
    def test_a_high_voltage_on_a_small_case_fails(self, ask: Ask):
        rail = '[rails.VBUS]\nvoltage = "400 V"\n'
        found = ask(
            "rating.resistor-voltage",
            board("R7 VBUS 0 1meg 1%"),
            brief=brief() + rail,
            parts=rated("Voltage", R7="200 V"),
        )
        (verdict,) = found
        assert (verdict.outcome, verdict.level, verdict.subject) == (Outcome.FAIL, Level.ERROR, "R7")
        assert "in series" in verdict.remedy

    @pytest.mark.parametrize(("policy", "allowed"), [("commercial", 30), ("nasa", 24), ("ecss", 24)])
    def test_the_policy_takes_its_margin(self, ask: Ask, policy: str, allowed: float):
        # EEE-INST-002 section R2 table 4 note 2: 0.8; ECSS-Q-ST-30-11C, from memory: 0.8
        (verdict,) = ask(
            "rating.resistor-voltage", board(), brief=brief(policy), parts=rated("Voltage", R6="30 V")
        )
        assert verdict.limit is not None
        assert verdict.limit.maximum == pytest.approx(allowed)
        assert verdict.outcome is (Outcome.PASS if allowed == 30 else Outcome.FAIL)

    def test_low_voltages_ask_for_no_rating(self, ask: Ask):
        assert ask("rating.resistor-voltage", board(), brief=brief()) == []

    def test_high_voltages_without_a_rating_are_named_once(self, ask: Ask):
        rail = '[rails.VBUS]\nvoltage = "400 V"\n'
        lines = board("R7 VBUS M 1meg", "R8 M 0 1meg")
        (verdict,) = ask("rating.resistor-voltage", lines, brief=brief() + rail)
        assert verdict.outcome is Outcome.OPEN
        assert verdict.needs == ("parts list: voltage of R7, R8",)


class TestPackage:
    def test_a_case_is_judged_by_what_it_usually_stands(self, ask: Ask):
        # R6: 30^2 / 9.9 kohm = 91 mW; a 0805 stands 125 mW, common makers' data
        (verdict,) = ask("rating.package-assumed", board(), brief=brief(), parts=rated("Package", R6="0805"))
        assert verdict.outcome is Outcome.PASS
        assert verdict.limit is not None
        assert verdict.limit.maximum == 0.125
        assert any("rating taken from the case" in one for one in verdict.assumptions)

    def test_too_small_a_case_is_a_warning(self, ask: Ask):
        (verdict,) = ask(
            "rating.package-assumed", board(), brief=brief(), parts=rated("Package", R6="R_0402_1005Metric")
        )
        assert (verdict.outcome, verdict.level, verdict.subject) == (Outcome.FAIL, Level.WARNING, "R6")

    def test_too_high_a_voltage_for_a_case_is_a_warning(self, ask: Ask):
        rail = '[rails.VBUS]\nvoltage = "400 V"\n'
        found = ask(
            "rating.package-assumed",
            board("R7 VBUS 0 10meg"),
            brief=brief() + rail,
            parts=rated("Package", R7="1206"),
        )
        assert [verdict.outcome for verdict in found] == [Outcome.PASS, Outcome.FAIL]
        assert found[1].level is Level.WARNING

    def test_a_rating_that_is_told_goes_before_the_case(self, ask: Ask):
        parts = "Reference,Power,Voltage,Package\nR6,0.25,200,0402\n"
        assert ask("rating.package-assumed", board(), brief=brief(), parts=parts) == []

    def test_the_other_rules_leave_a_case_to_this_one(self, ask: Ask):
        found = ask(
            "rating.resistor-power", board(R6="VBAT 0 1k"), brief=brief(), parts=rated("Package", R6="0402")
        )
        assert all("R6" not in verdict.parts for verdict in found)
