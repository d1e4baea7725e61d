"""The rule on the accuracy of the reference, on the controller of an irrigation pump."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint import Outcome, Verdict

Ask = Callable[..., list[Verdict]]


def board(*more: str, number: str = "494", feedback: str = "R13 OUT FB 5.1k tol=1%") -> str:
    """Return the pump's controller as a SPICE-style list."""
    return "\n".join(
        [
            "irrigation pump",
            "VBAT VBAT 0 24",
            f"U1 FB SET COMP DTC CT RT 0 DRV 0 0 DRV VBAT 0 VREF LIM 0 {number}",
            "R5 RT 0 12k",
            "C5 CT 0 10n",
            "R11 VREF SET 5.1k tol=1%",
            "R12 SET 0 5.1k tol=1%",
            feedback,
            "R14 FB 0 5.1k tol=1%",
            "R15 DTC 0 1k",
            "R17 LIM 0 100k",
            "R16 VBAT DRV 1k",
            "C3 COMP SET 1n",
            "L1 DRV OUT 100u",
            *more,
            ".end",
            "",
        ]
    )


def output(tolerance: str) -> str:
    return f'[rails.OUT]\nvoltage = "5 V"\ntolerance = "{tolerance}"\n[controllers.U1]\noutput = "OUT"\n'


def test_the_reference_and_the_dividers_add_up_to_the_outputs_spread(ask: Ask) -> None:
    # output = reference x R12 / (R11 + R12) x (1 + R13 / R14). SLVS074 p.4: reference 5.29 V at most with
    # line and load regulation (5.8 %), offset 10 mV of 2.5 V (0.4 %), bias current 1 uA into 2.55 kohm at
    # either input (0.2 %); four resistors of 1 %, each counting half (2 %): 1.058 x 1.02 x 1.006 = 1.0856
    (verdict,) = ask("reference.needed-accuracy", board(), brief=output("10 %"))
    assert verdict.outcome is Outcome.PASS
    assert verdict.measured is not None
    assert verdict.measured.nominal == 0
    assert verdict.measured.maximum == pytest.approx(0.0856, abs=5e-4)
    assert verdict.contributions[0][0] == "U1 reference"
    assert "of it U1 reference" in verdict.message


def test_a_reference_that_alone_fills_the_tolerance_is_named(ask: Ask) -> None:
    (verdict,) = ask("reference.needed-accuracy", board(), brief=output("3 %"))
    assert (verdict.outcome, verdict.level) == (Outcome.FAIL, "warning")
    assert verdict.remedy.startswith("the reference alone may be off by 5.8 %")


def test_the_tighter_variant_meets_the_same_tolerance(ask: Ask) -> None:
    # SLVS052 p.4: 4.95 V to 5.05 V, line regulation 25 mV and load regulation 35 mV at most: 2.2 %
    (verdict,) = ask("reference.needed-accuracy", board(number="594"), brief=output("5 %"))
    assert verdict.outcome is Outcome.PASS


def test_wide_resistors_are_named_for_a_tight_reference(ask: Ask) -> None:
    text = board(number="594", feedback="R13 OUT FB 5.1k tol=10%")
    (verdict,) = ask("reference.needed-accuracy", text, brief=output("4 %"))
    assert verdict.outcome is not Outcome.PASS
    assert verdict.remedy == "take a tighter R13: it has the greatest share"


@pytest.mark.parametrize(
    ("rail", "keys"),
    [
        pytest.param("", 'voltage = "...", tolerance = "..."', id="no rail"),
        pytest.param('[rails.OUT]\nvoltage = "5 V"\n', 'tolerance = "..."', id="no tolerance"),
    ],
)
def test_without_a_tolerance_it_is_open(ask: Ask, rail: str, keys: str) -> None:
    brief = f'{rail}[controllers.U1]\noutput = "OUT"\n'
    (verdict,) = ask("reference.needed-accuracy", board(), brief=brief)
    assert verdict.outcome is Outcome.OPEN
    assert verdict.needs == (f"brief: [rails.OUT] {keys}",)


def test_an_output_that_is_set_on_the_bench_is_not_asked(ask: Ask) -> None:
    text = board("RV1 OUT FB FB 10k", feedback="")
    (verdict,) = ask("reference.needed-accuracy", text, brief=output("2 %"))
    assert verdict.outcome is Outcome.NOT_APPLICABLE
    assert verdict.parts == ("RV1",)


def test_without_a_loop_nothing_is_asked(ask: Ask) -> None:
    assert ask("reference.needed-accuracy", board(feedback="")) == []
