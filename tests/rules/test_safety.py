"""What is cautioned of: a frost fan on the mains, its bus and its barrier."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint import Level, Outcome, Review, Verdict

Ask = Callable[..., list[Verdict]]
ReviewText = Callable[..., Review]

MAINS = """
[rails.L]
voltage = "230 V"
tolerance = "15 %"
circuit = "mains"
[rails.N]
voltage = "230 V"
circuit = "mains"
"""
BUS = '[rails.VBUS]\nvoltage = "300 V .. 373.4 V"\ncircuit = "primary"\n'
OUT = '[rails.VOUT]\nvoltage = "12 V"\nload = "0 A .. 5 A"\ncircuit = "secondary"\n'


def board(*lines: str) -> str:
    return "\n".join(["frost fan on the mains", *lines, ".end", ""])


class TestScope:
    @pytest.mark.parametrize(
        ("brief", "says"),
        [
            (MAINS, "L, N carry the mains"),
            (BUS, "VBUS reaches 373 V: more than 60 V"),
            ('[rails.VBUS]\nvoltage = "-61 V"\n', "VBUS reaches 61.0 V"),
            (
                '[rails.VBUS]\nvoltage = "24 V"\nload = "0 A .. 12 A"\n',
                "VBUS can deliver 288 VA: more than 240 VA",
            ),
        ],
    )
    def test_speaks_once_and_says_why(self, ask: Ask, brief: str, says: str):
        lines = board("R1 L N 1meg", "R2 VBUS 0 1meg")
        (verdict,) = ask("safety.scope", lines, brief=brief)
        assert verdict.outcome is Outcome.INFORMATIONAL
        assert verdict.message.startswith(says)
        assert "local codes" in verdict.message
        assert "licensed practice" in verdict.message

    def test_is_the_caution_of_the_report(self, review_text: ReviewText):
        found = review_text(board("R1 L N 1meg"), brief=MAINS)
        assert len(found.cautions) == 1
        assert "L, N carry the mains" in found.cautions[0]

    @pytest.mark.parametrize(
        "brief", ["", '[rails.VBUS]\nvoltage = "60 V"\n', '[rails.VBUS]\nvoltage = "24 V"\nload = "10 A"\n']
    )
    def test_is_quiet_below_the_figures(self, review_text: ReviewText, brief: str):
        # IEC 60950-1: 60 V and 240 VA
        assert review_text(board("R2 VBUS 0 1meg"), brief=brief).cautions == ()

    def test_the_current_limit_of_the_brief_counts_where_it_is_greater(self, ask: Ask):
        lines = board(
            "U1 FB SET COMP DTC CT RT 0 DRN 0 0 DRN VBAT 0 REF REF 0 494", "R6 VOUT FB 10k", "R7 FB 0 10k"
        )
        brief = (
            '[rails.VOUT]\nvoltage = "24 V"\nload = "0 A .. 8 A"\n'
            '[controllers.U1]\noutput = "VOUT"\ncurrent_limit = "9 A .. 12 A"\n'
        )
        (verdict,) = ask("safety.scope", lines, brief=brief)
        assert "VOUT can deliver 288 VA" in verdict.message

    def test_an_output_regulated_above_60_v_is_seen_without_a_brief(self, ask: Ask):
        lines = board(
            "U1 FB SET COMP DTC CT RT 0 DRN 0 0 DRN VBAT 0 REF REF 0 494",
            "R2 REF SET 5.1k",
            "R3 SET 0 5.1k",
            "R6 VOUT FB 300k",
            "R7 FB 0 10k",
            "L1 VBAT SW 100u",
            "D1 SW VOUT DX",
        )
        (verdict,) = ask("safety.scope", lines)
        assert verdict.message.startswith("VOUT reaches")


class TestIsolation:
    APART = (
        "C1 VBUS PGND 100u",
        "T1 VBUS SW SEC SGND XFMR",
        "D1 SEC VOUT DX",
        "C2 VOUT SGND 100u",
        "XOK1 LED SGND COLL PGND OPTO",
        "R1 VOUT LED 1k",
        "R2 COLL VBUS 10k",
    )

    def test_apart_passes(self, ask: Ask):
        (verdict,) = ask("safety.isolation", board(*self.APART), brief=BUS + OUT)
        assert verdict.outcome is Outcome.PASS

    def test_a_resistor_across_the_barrier_fails(self, ask: Ask):
        (verdict,) = ask("safety.isolation", board(*self.APART, "R9 VBUS VOUT 1meg"), brief=BUS + OUT)
        assert (verdict.outcome, verdict.level) == (Outcome.FAIL, Level.ERROR)
        assert verdict.parts == ("R9",)
        assert verdict.message == "R9 leads from VBUS, primary, to VOUT, secondary"

    def test_a_chain_by_way_of_another_net_is_named(self, ask: Ask):
        lines = board(*self.APART, "R8 VBUS X 1meg", "R9 X VOUT 1meg")
        (verdict,) = ask("safety.isolation", lines, brief=BUS + OUT)
        assert verdict.message == "R8, R9 lead from VBUS, primary, to VOUT, secondary by way of X"

    def test_a_capacitor_that_is_not_of_class_y_is_for_a_person(self, ask: Ask):
        (verdict,) = ask("safety.isolation", board(*self.APART, "C9 PGND SGND 2.2n"), brief=BUS + OUT)
        assert verdict.outcome is Outcome.REVIEW
        assert "C9" in verdict.parts

    def test_a_capacitor_of_class_y_may_stand_there(self, ask: Ask):
        # IEC 60384-14, marked in the parts list's column of the dielectric
        lines, parts = board(*self.APART, "C9 PGND SGND 2.2n"), "Reference,Dielectric\nC9,Y1\n"
        (verdict,) = ask("safety.isolation", lines, brief=BUS + OUT, parts=parts)
        assert verdict.outcome is Outcome.PASS

    def test_the_mains_is_on_the_primary_side(self, ask: Ask):
        (verdict,) = ask("safety.isolation", board("R9 L VOUT 1meg", "R1 L N 1meg"), brief=MAINS + OUT)
        assert verdict.outcome is Outcome.FAIL

    @pytest.mark.parametrize("brief", ["", BUS, OUT])
    def test_is_quiet_where_one_side_is_not_declared(self, ask: Ask, brief: str):
        assert ask("safety.isolation", board(*self.APART, "R9 VBUS VOUT 1meg"), brief=brief) == []
