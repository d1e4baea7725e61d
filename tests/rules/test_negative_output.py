"""Rules on the feedback of a negative output: an inverting stage, -12 V for a weather mast."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint import Outcome, Verdict

Ask = Callable[..., list[Verdict]]

# The set point is ground: 5 V / 10 kohm = 12 V / 24 kohm.
MAST = """weather mast
J1 VIN 0 BATTERY
U1 0 FBN COMP DTC CT RT 0 DRV 0 0 DRV VIN 0 REF REF 0 494
R1 REF FBN 10k 1%
R2 FBN N12 24k 1%
R3 COMP CZ 47k
C1 CZ FBN 4.7n
R4 RT 0 12k
C2 CT 0 1n
R5 REF DTC 10k
R6 DTC 0 1k
C3 REF DTC 1u
R7 VIN G 470
R8 G DRV 100
M1 SW G VIN VIN PM
L1 SW 0 47u
D1 N12 SW DS
C4 0 N12 470u
J2 0 N12 AMPLIFIER
.model PM PMOS
.model DS D
.end
"""


def brief(voltage: str = "-12 V", tolerance: str = "10 %") -> str:
    """Return what the mast's supply must do."""
    rails = f'[rails.VIN]\nvoltage = "12 V"\n[rails.N12]\nvoltage = "{voltage}"\ntolerance = "{tolerance}"\n'
    return f'{rails}[controllers.U1]\ntopology = "single-ended"\noutput = "N12"\n'


@pytest.mark.parametrize("rule", ["output-voltage", "divider-ratio"])
def test_the_right_divider_passes(ask: Ask, rule: str) -> None:
    (verdict,) = ask(f"feedback.{rule}", MAST, brief=brief())
    assert verdict.outcome is Outcome.PASS


def test_the_wrong_divider_is_told_with_its_error(ask: Ask) -> None:
    (verdict,) = ask("feedback.divider-ratio", MAST, brief=brief("-15 V"))
    assert verdict.outcome is Outcome.FAIL
    assert verdict.measured is not None
    assert verdict.measured.nominal == pytest.approx(12 / 15 - 1, abs=0.002)  # 0.2 uA of bias in 24 kohm


def test_the_spread_is_held_against_the_tolerance(ask: Ask) -> None:
    # SLVS074 p.4: the reference with line and load regulation 4.71 V to 5.29 V, 5.8 %; two resistors of 1 %
    (wide,) = ask("reference.needed-accuracy", MAST, brief=brief(tolerance="10 %"))
    assert wide.outcome is Outcome.PASS
    assert wide.measured is not None
    assert 0.078 < wide.measured.maximum < 0.09
    (narrow,) = ask("reference.needed-accuracy", MAST, brief=brief(tolerance="3 %"))
    assert narrow.outcome is Outcome.FAIL


def test_only_faults_that_lead_away_from_ground_count(ask: Ask) -> None:
    # With R1 open, or R2 shorted, the output stays at the set point: at ground.
    (verdict,) = ask("feedback.single-fault", MAST, brief=brief())
    assert verdict.outcome is Outcome.REVIEW
    assert verdict.message == (
        "N12 falls with R1 shorted as far as the duty goes; R2 open as far as the duty goes"
    )


def test_charging_the_output_takes_a_current_without_a_sign(ask: Ask) -> None:
    (verdict,) = ask("soft-start.time", MAST, brief=brief())
    assert "charging the output's 470 µF takes" in verdict.message
    assert "takes -" not in verdict.message
