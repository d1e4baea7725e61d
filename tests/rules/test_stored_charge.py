"""Stored charge on a frost fan that runs on the mains.

The vectors for C = 100 nF, 220 nF, 470 nF and 1 uF are those of the formula tau = R C at 1 s.
"""

from __future__ import annotations

from collections.abc import Callable
from math import log

import pytest
from pwmlint.lint import Level, Outcome, Verdict

Ask = Callable[..., list[Verdict]]

MAINS = """
[rails.L]
voltage = "230 V"
tolerance = "15 %"
circuit = "mains"
[rails.N]
voltage = "230 V"
circuit = "mains"
"""


def board(*lines: str) -> str:
    return "\n".join(["frost fan on the mains", "F1 L LF 2", "J1 L N PLUG", *lines, ".end", ""])


class TestDischarge:
    def test_two_bleeders_in_series_pass(self, ask: Ask):
        lines = board("C1 LF N 220n 10%", "R1 LF M 470k 5%", "R2 M N 470k 5%")
        (verdict,) = ask("safety.discharge", lines, brief=MAINS)
        assert verdict.outcome is Outcome.PASS
        assert verdict.measured is not None
        # 987 kohm x 242 nF
        assert verdict.measured.maximum == pytest.approx(0.238854)
        assert verdict.parts == ("C1", "R1", "R2")
        assert verdict.assumptions == ("R1, R2 stay whole: an open one is not looked at",)

    def test_the_time_to_60_v_is_told(self, ask: Ask):
        # V(t) = V0 exp(-t / RC): peak 1.15 x 230 V x sqrt(2) = 374 V
        lines = board("C1 LF N 220n 0%", "R1 LF M 470k 0%", "R2 M N 470k 0%")
        (verdict,) = ask("safety.discharge", lines, brief=MAINS)
        time = 0.94e6 * 220e-9 * log(374.06 / 60)
        assert f"to 60 V in {1000 * time:.0f} ms" in verdict.message

    def test_no_bleeder_fails_and_says_how_much_it_may_have(self, ask: Ask):
        (verdict,) = ask("safety.discharge", board("C1 LF N 220n 0%", "R9 LF X 1k"), brief=MAINS)
        assert (verdict.outcome, verdict.level, verdict.subject) == (Outcome.FAIL, Level.ERROR, "C1")
        assert "together 4.55 MΩ at most" in verdict.remedy

    @pytest.mark.parametrize(
        ("capacitance", "resistance"),
        [("220n", 4.54545e6), ("470n", 2.12766e6), ("1u", 1e6)],
    )
    @pytest.mark.parametrize(("factor", "outcome"), [(0.49, Outcome.PASS), (0.51, Outcome.REVIEW)])
    def test_a_time_constant_of_1_s_is_the_limit(
        self, ask: Ask, capacitance: str, resistance: float, factor: float, outcome: Outcome
    ):
        # IEC 60950-1 clause 2.1.1.7, as quoted in published texts: 1 s for pluggable equipment
        each = factor * resistance
        lines = board(f"C1 LF N {capacitance} 0%", f"R1 LF M {each:.9g} 0%", f"R2 M N {each:.9g} 0%")
        (verdict,) = ask("safety.discharge", lines, brief=MAINS)
        assert verdict.outcome is outcome

    def test_more_than_10_s_fails(self, ask: Ask):
        lines = board("C1 LF N 1u", "R1 LF M 10meg", "R2 M N 10meg")
        (verdict,) = ask("safety.discharge", lines, brief=MAINS)
        assert verdict.outcome is Outcome.FAIL

    def test_one_bleeder_alone_is_for_a_person(self, ask: Ask):
        (verdict,) = ask("safety.discharge", board("C1 LF N 220n", "R1 LF N 470k"), brief=MAINS)
        assert verdict.outcome is Outcome.REVIEW
        assert "R1 is alone" in verdict.message

    def test_a_bleeder_below_the_peak_is_for_a_person(self, ask: Ask):
        # half of 374 V across each, rated 150 V
        lines = board("C1 LF N 220n", "R1 LF M 470k", "R2 M N 470k")
        (verdict,) = ask("safety.discharge", lines, brief=MAINS, parts="Reference,Voltage\nR1-R2,150\n")
        assert verdict.outcome is Outcome.REVIEW
        assert "R1 has 187 V of the peak across it, rated 150 V" in verdict.message

    def test_capacitors_behind_the_fuse_and_before_it_add_up(self, ask: Ask):
        lines = board("C1 LF N 68n", "C2 L N 68n", "R1 LF M 470k", "R2 M N 470k")
        (verdict,) = ask("safety.discharge", lines, brief=MAINS)
        assert set(verdict.parts) == {"C1", "C2", "R1", "R2"}

    def test_small_capacitors_need_no_bleeder(self, ask: Ask):
        # IEC 60950-1: more than 0.1 uF
        assert ask("safety.discharge", board("C1 LF N 100n 0%"), brief=MAINS) == []

    def test_one_mains_net_alone_leaves_it_open(self, ask: Ask):
        brief = '[rails.L]\nvoltage = "230 V"\ncircuit = "mains"\n'
        (verdict,) = ask("safety.discharge", board("C1 LF N 220n"), brief=brief)
        assert verdict.outcome is Outcome.OPEN
        assert verdict.needs

    def test_without_mains_there_is_nothing_to_ask(self, ask: Ask):
        assert ask("safety.discharge", board("C1 LF N 220n")) == []


class TestStoredEnergy:
    def test_a_bus_without_a_bleeder_is_for_a_person_with_its_energy(self, ask: Ask):
        # 100 uF at 373.4 V hold 6.9714 J
        (verdict,) = ask(
            "safety.stored-energy", board("C1 VBUS 0 100u 0%"), brief='[rails.VBUS]\nvoltage = "373.4 V"\n'
        )
        assert (verdict.outcome, verdict.subject) == (Outcome.REVIEW, "C1")
        assert verdict.measured is not None
        assert verdict.measured.maximum == pytest.approx(6.9714, abs=1e-4)

    def test_a_fast_bleeder_passes(self, ask: Ask):
        lines = board("C1 VBUS 0 100u 0%", "R1 VBUS M 10k 0%", "R2 M 0 10k 0%")
        (verdict,) = ask("safety.stored-energy", lines, brief='[rails.VBUS]\nvoltage = "373.4 V"\n')
        assert verdict.outcome is Outcome.PASS
        assert verdict.measured is not None
        # 2 s x ln(373.4 / 60)
        assert verdict.measured.maximum == pytest.approx(2 * log(373.4 / 60))

    def test_a_slow_bleeder_is_for_a_person_with_the_time(self, ask: Ask):
        # IEC 60204-1, as quoted in published texts: 60 V within 5 s
        lines = board("C1 VBUS 0 100u 0%", "R1 VBUS 0 100k 0%")
        (verdict,) = ask("safety.stored-energy", lines, brief='[rails.VBUS]\nvoltage = "373.4 V"\n')
        assert verdict.outcome is Outcome.REVIEW
        assert "below 60 V in 18.3 s through R1" in verdict.message

    def test_energy_counts_at_low_voltage_as_well(self, ask: Ask):
        # 0.1 F at 24 V hold 28.8 J, more than 20 J (IEC 60950-1, from memory)
        brief = '[rails.VBUS]\nvoltage = "24 V"\n'
        (verdict,) = ask("safety.stored-energy", board("C1 VBUS 0 100m 0%"), brief=brief)
        assert verdict.outcome is Outcome.REVIEW
        lines = board("C1 VBUS 0 100m 0%", "R1 VBUS 0 100 0%")
        (verdict,) = ask("safety.stored-energy", lines, brief=brief)
        assert verdict.outcome is Outcome.PASS
        assert "below 20 J" in verdict.message

    def test_capacitors_in_parallel_add_up(self, ask: Ask):
        lines = board("C1 VBUS 0 60m 0%", "C2 0 VBUS 60m 0%")
        (verdict,) = ask("safety.stored-energy", lines, brief='[rails.VBUS]\nvoltage = "24 V"\n')
        assert verdict.parts == ("C1", "C2")

    @pytest.mark.parametrize(
        ("line", "voltage"), [("C1 VBUS 0 1000u", "48 V"), ("C1 VBUS 0 82n", "400 V"), ("C1 VBUS 0", "400 V")]
    )
    def test_little_charge_is_none(self, ask: Ask, line: str, voltage: str):
        brief = f'[rails.VBUS]\nvoltage = "{voltage}"\n'
        assert ask("safety.stored-energy", board(line), brief=brief) == []
