"""The rules on ratings of capacitors, on the controller of a weather mast."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint import Level, Outcome, Verdict

Ask = Callable[..., list[Verdict]]


def board(*more: str) -> str:
    return "\n".join(
        [
            "weather mast",
            "U1 FB SET COMP DTC CT RT 0 DRN 0 0 DRN VBAT 0 REF REF 0 494",
            "R1 RT 0 12k",
            "R2 REF SET 5.1k",
            "R3 SET 0 5.1k",
            "R4 DTC 0 1k",
            "R5 VBAT DRN 10k",
            "R6 FB 0 10k",
            "R9 VNEG 0 100k",
            *more,
            ".end",
            "",
        ]
    )


def brief(policy: str = "", ambient: int = 40) -> str:
    derating = f'derating = "{policy}"\n' if policy else ""
    return (
        f'[design]\nambient = "0 degC .. {ambient} degC"\n{derating}'
        '[rails.VBAT]\nvoltage = "20 V .. 24 V"\n[rails.VNEG]\nvoltage = "-12 V"\n'
    )


def rated(voltage: str, dielectric: str = "", part: str = "C1") -> str:
    return f"Reference,Voltage,Dielectric\n{part},{voltage},{dielectric}\n"


class TestVoltage:
    @pytest.mark.parametrize(
        ("dielectric", "policy", "ambient", "allowed"),
        [
            # commercial: common practice; EEE-INST-002 section C1 table 4; ECSS-Q-ST-30-11C, from memory
            ("X7R", "commercial", 40, 50),
            ("aluminium", "commercial", 40, 45),
            ("tantalum", "commercial", 40, 25),
            ("tantalum polymer", "commercial", 40, 40),
            ("", "commercial", 40, 40),
            ("X7R", "nasa", 40, 30),
            ("film", "nasa", 40, 30),
            ("tantalum", "nasa", 70, 25),
            ("tantalum", "nasa", 90, 20),
            ("X7R", "ecss", 40, 30),
        ],
    )
    def test_the_share_of_the_dielectric(
        self, ask: Ask, dielectric: str, policy: str, ambient: int, allowed: float
    ):
        (verdict,) = ask(
            "rating.capacitor-voltage",
            board("C1 VBAT 0 10u"),
            brief=brief(policy, ambient),
            parts=rated("50 V", dielectric),
        )
        assert verdict.limit is not None
        assert verdict.limit.maximum == pytest.approx(allowed)
        assert verdict.outcome is (Outcome.PASS if allowed >= 24 else Outcome.FAIL)

    def test_beyond_the_rating_is_an_error(self, ask: Ask):
        (verdict,) = ask(
            "rating.capacitor-voltage", board("C1 VBAT 0 10u"), brief=brief(), parts=rated("16 V", "X7R")
        )
        assert (verdict.outcome, verdict.level, verdict.subject) == (Outcome.FAIL, Level.ERROR, "C1")
        assert verdict.remedy == "fit at least 24.0 V for C1"

    def test_beyond_a_margin_that_nobody_asked_for_is_a_warning(self, ask: Ask):
        board_ = board("C1 VBAT 0 10u")
        (verdict,) = ask("rating.capacitor-voltage", board_, brief=brief(), parts=rated("25 V", "aluminium"))
        assert (verdict.outcome, verdict.level) == (Outcome.FAIL, Level.WARNING)

    def test_beyond_the_margin_of_the_brief_is_an_error(self, ask: Ask):
        board_ = board("C1 VBAT 0 10u")
        (verdict,) = ask(
            "rating.capacitor-voltage", board_, brief=brief("commercial"), parts=rated("25 V", "aluminium")
        )
        assert (verdict.outcome, verdict.level) == (Outcome.FAIL, Level.ERROR)

    def test_too_hot_for_its_dielectric(self, ask: Ask):
        # EEE-INST-002 section C1 table 4: plastic film up to 85 degC
        (verdict,) = ask(
            "rating.capacitor-voltage",
            board("C1 VBAT 0 10u"),
            brief=brief("nasa", 90),
            parts=rated("400 V", "film"),
        )
        assert verdict.outcome is Outcome.FAIL
        assert "another dielectric" in verdict.remedy

    def test_a_negative_rail_counts_by_its_size(self, ask: Ask):
        (verdict,) = ask(
            "rating.capacitor-voltage", board("C1 VNEG 0 10u"), brief=brief(), parts=rated("10 V", "X7R")
        )
        assert verdict.outcome is Outcome.FAIL
        assert verdict.measured is not None
        assert verdict.measured.maximum == 12

    def test_between_two_rails_the_difference_counts(self, ask: Ask):
        (verdict,) = ask(
            "rating.capacitor-voltage", board("C1 VBAT VNEG 10u"), brief=brief(), parts=rated("35 V", "X7R")
        )
        assert verdict.outcome is Outcome.FAIL
        assert verdict.measured is not None
        assert verdict.measured.maximum == 36

    def test_a_solved_net_counts_as_well(self, ask: Ask):
        (verdict,) = ask(
            "rating.capacitor-voltage", board("C1 REF SET 1u"), brief=brief(), parts=rated("2 V", "X7R")
        )
        assert verdict.outcome is Outcome.FAIL

    def test_those_without_a_rating_are_named_once(self, ask: Ask):
        (verdict,) = ask(
            "rating.capacitor-voltage", board("C1 VBAT 0 10u", "C2 REF 0 1u", "C3 SET 0 1n"), brief=brief()
        )
        assert verdict.outcome is Outcome.OPEN
        assert verdict.needs == ("parts list: voltage of C1, C2, C3",)

    def test_a_rail_that_nobody_told_is_named(self, ask: Ask):
        (verdict,) = ask("rating.capacitor-voltage", board("C1 VBAT 0 10u"), parts=rated("50 V"))
        assert verdict.outcome is Outcome.OPEN
        assert verdict.needs == ('brief: [rails.VBAT] voltage = "..."',)

    def test_a_capacitor_on_a_switched_net_is_left_alone(self, ask: Ask):
        assert ask("rating.capacitor-voltage", board("C1 DRN 0 1n"), parts=rated("50 V")) == []


class TestPolarity:
    def test_the_right_way_round(self, ask: Ask):
        (verdict,) = ask(
            "rating.capacitor-polarity",
            board("C1 VBAT 0 100u", "C2 0 VNEG 100u"),
            brief=brief(),
            parts="Reference,Dielectric\nC1-C2,aluminium\n",
        )
        assert verdict.outcome is Outcome.PASS
        assert verdict.parts == ("C1", "C2")
        assert verdict.assumptions == ("C1, C2: the first pin taken for the positive one",)

    @pytest.mark.parametrize("line", ["C1 0 VBAT 100u", "C1 VNEG 0 100u", "C1 VNEG VBAT 100u"])
    def test_reversed_by_the_order_of_the_list_is_for_a_person(self, ask: Ask, line: str):
        (verdict,) = ask(
            "rating.capacitor-polarity", board(line), brief=brief(), parts=rated("50 V", "tantalum")
        )
        assert (verdict.outcome, verdict.subject) == (Outcome.REVIEW, "C1")
        assert verdict.remedy == "turn C1 round"

    def test_an_unmarked_one_is_never_called_polarised(self, ask: Ask):
        assert ask("rating.capacitor-polarity", board("C1 0 VBAT 1000u"), brief=brief()) == []

    @pytest.mark.parametrize("dielectric", ["X7R", "film", "bipolar electrolytic"])
    def test_one_that_has_no_polarity_is_not_asked(self, ask: Ask, dielectric: str):
        parts = rated("50 V", dielectric)
        assert ask("rating.capacitor-polarity", board("C1 0 VBAT 1u"), brief=brief(), parts=parts) == []

    def test_one_that_can_be_reversed_is_for_a_person(self, ask: Ask):
        told = brief() + '[rails.AC]\nvoltage = "-5 V .. 5 V"\n'
        (verdict,) = ask(
            "rating.capacitor-polarity", board("C1 AC 0 1u"), brief=told, parts=rated("50 V", "tantalum")
        )
        assert verdict.outcome is Outcome.REVIEW
        assert "can lie 5.00 V below" in verdict.message

    @pytest.mark.parametrize(
        ("plus", "minus", "outcome"), [("VBAT", "GND", Outcome.PASS), ("GND", "VBAT", Outcome.FAIL)]
    )
    def test_pins_named_plus_and_minus_are_certain(self, ask: Ask, plus: str, minus: str, outcome: Outcome):
        found = ask("rating.capacitor-polarity", edif(plus, minus), brief='[rails.VBAT]\nvoltage = "24 V"\n')
        (verdict,) = found
        assert verdict.outcome is outcome
        assert verdict.level is (Level.ERROR if outcome is Outcome.FAIL else None)


def edif(plus: str, minus: str) -> str:
    """Return one polarised capacitor as EDIF, its pins named, on the nets given."""
    joined: dict[str, str] = dict.fromkeys(("VBAT", "GND"), "")
    joined[plus] += "(portRef POS (instanceRef C1))"
    joined[minus] += "(portRef NEG (instanceRef C1))"
    nets = "".join(f"(net {net} (joined {ports}))" for net, ports in joined.items())
    return f"""(edif MAST (edifVersion 2 0 0) (edifLevel 0) (keywordMap (keywordLevel 0))
 (library PARTS (edifLevel 0) (technology (numberDefinition))
  (cell CAP (cellType GENERIC) (view SYM (viewType NETLIST) (interface
   (port (rename POS "+") (direction INOUT)) (port (rename NEG "-") (direction INOUT))))))
 (library DESIGN (edifLevel 0) (technology (numberDefinition))
  (cell TOP (cellType GENERIC) (view V (viewType NETLIST) (interface) (contents
   (instance C1 (viewRef SYM (cellRef CAP (libraryRef PARTS))) (designator "C1")
    (property VALUE (string "100uF")))
   {nets}))))
 (design MAST (cellRef TOP (libraryRef DESIGN))))
"""
