"""What the parts of a cider press stand, computed by hand beside it."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from math import inf

import pytest
from pwmlint.lint.circuit.envelope import IN_REGULATION, Operated, envelope
from pwmlint.lint.circuit.loops import Regulation
from pwmlint.lint.circuit.potentials import Potential
from pwmlint.lint.circuit.regimes import Operation, Regime
from pwmlint.lint.circuit.stress import Stress
from pwmlint.lint.design import Design
from pwmlint.lint.estimate import Unsolved
from pwmlint.lint.quantity import Spread

DesignOf = Callable[..., Design]

U1 = "U1 FB SET COMP DTC CT RT 0 DRN 0 0 DRN VBAT 0 REF REF 0 494"

PRESS = f"""
{U1}
R2 REF SET 5k tol=1
R3 SET 0 5k tol=1
R4 VOUT FB 38k tol=1
R5 FB 0 10k tol=1
R6 COMP CZ 22k
C6 CZ SET 10n
C7 REF DTC 1u
R7 DTC 0 1k
C8 CT 0 1n
R8 RT 0 12k
R9 VBAT DRN 100 tol=1
C9 VOUT 0 100u
L1 SW VOUT 100u
D1 0 SW DSCH
"""

BRIEF = '[rails.VBAT]\nvoltage = "20 V .. 30 V"\n[rails.REF]\nvoltage = "5 V"\n'


def stress(design: Design, reference: str) -> Stress:
    return design.stresses().of[reference]


def test_a_resistor_between_two_rails(design_of: DesignOf):
    found = stress(design_of("V1 A 0 12\nR1 A 0 1k tol=10"), "R1")
    assert found.voltage.spread == Spread.exact(12, "V")
    assert found.power is not None
    assert found.power.spread.nominal == pytest.approx(0.144)
    assert found.power.spread.maximum == pytest.approx(144 / 900)
    assert found.power.formula == "(12.0 V)² / 900 Ω"


def test_a_resistor_in_the_network_of_a_controller(design_of: DesignOf):
    found = stress(design_of(PRESS, brief=BRIEF), "R2")
    # 2.5 V across 5 kohm, 1.25 mW; 1 % of each resistor and 5 % of the reference at most
    assert found.voltage.spread.nominal == pytest.approx(2.5, rel=1e-3)
    assert found.power is not None
    assert found.power.spread.nominal == pytest.approx(1.25e-3, rel=1e-3)
    assert found.power.spread.maximum < 1.25e-3 * 1.1**2 * 1.03


def test_capacitors_within_and_between_networks(design_of: DesignOf):
    design = design_of(PRESS, brief=BRIEF)
    # the dead-time capacitor: the reference less what the bias current makes in 1 kohm
    assert stress(design, "C7").voltage.spread.nominal == pytest.approx(5, abs=0.05)
    # COMP moves over 0.5 V to 3.5 V (SLVA001, from memory); SET stands at 2.5 V
    spread = stress(design, "C6").voltage.spread
    assert (spread.minimum, spread.maximum) == (pytest.approx(-2.2, abs=0.3), pytest.approx(1.2, abs=0.3))
    # the ramp of the oscillator goes up to 3 V (SLVS074 p.11)
    assert stress(design, "C8").voltage.spread.maximum == 3


def test_the_output_goes_from_a_short_circuit_to_its_regulated_voltage(design_of: DesignOf):
    design = design_of(PRESS, brief=BRIEF)
    regulation = design.regulation(design.controllers[0])
    assert isinstance(regulation, Regulation)
    spread = stress(design, "C9").voltage.spread
    assert spread.minimum == 0
    assert spread.maximum == pytest.approx(regulation.output.spread.maximum)
    held = design.stresses(IN_REGULATION).of["C9"].voltage.spread
    assert held.minimum == pytest.approx(regulation.output.spread.minimum)


def test_what_an_output_drives_counts_as_if_it_conducted_all_the_time(design_of: DesignOf):
    found = stress(design_of(PRESS, brief=BRIEF), "R9")
    assert found.pulsed
    assert found.power is not None
    # at most the whole of 30 V across 99 ohm
    assert found.power.spread.maximum == pytest.approx(30**2 / 99)
    assert "R9" not in design_of(PRESS, brief=BRIEF).stresses().unsolved


def test_the_timing_resistor_is_left_unsolved_with_a_reason(design_of: DesignOf):
    found = design_of(PRESS, brief=BRIEF).stresses()
    assert "R8" not in found.of
    assert "RT of U1 sets it" in found.unsolved["R8"].reason


def test_a_trimmer_stands_its_greatest_current_in_the_whole_track(design_of: DesignOf):
    # a rheostat of 1 kohm in series with 1 kohm from 10 V: at its end 10 mA, in the whole track 0.1 W
    lines = f"{U1}\nV1 A 0 10\nR1 A DTC 1k tol=0\nRV1 DTC 0 0 1k tol=0"
    found = stress(design_of(lines, brief='[rails.A]\nvoltage = "10 V"\n'), "RV1")
    assert found.power is not None
    assert found.power.spread.maximum == pytest.approx(0.1, rel=0.01)
    assert found.voltage.spread.maximum == pytest.approx(10, rel=0.01)


def test_a_resistor_that_leads_nowhere_takes_nothing(design_of: DesignOf):
    found = stress(design_of(PRESS, brief=BRIEF), "R6")
    assert found.power is not None
    assert found.power.spread.maximum == 0


def test_a_capacitor_on_a_net_without_a_path_is_left_unsolved(design_of: DesignOf):
    found = design_of(f"{U1}\nC1 DTC X 1n\nC2 DTC 0 1n\nC3 X 0 1n", brief=BRIEF).stresses()
    assert isinstance(found.unsolved["C1"], Unsolved)
    assert "C2" not in found.of


def test_a_part_without_a_value_is_left_unsolved(design_of: DesignOf):
    found = design_of(PRESS.replace("R7 DTC 0 1k", "R7 DTC 0"), brief=BRIEF).stresses()
    assert "R7 has no value" in found.unsolved["R7"].reason


def test_networks_beyond_the_bound_are_left_and_said(design_of: DesignOf):
    lines = [U1, "V1 RAIL 0 10", *(f"R{i} RAIL N{i} 1k\nR{i + 1000} N{i} 0 1k" for i in range(1, 250))]
    found = design_of("\n".join(lines)).stresses()
    assert "R1" in found.of
    assert "more than 200 networks" in found.unsolved["R249"].reason


def test_stresses_stand_in_the_order_of_the_file(design_of: DesignOf):
    references = list(design_of(PRESS, brief=BRIEF).stresses().of)
    assert references[:4] == ["R2", "R3", "R4", "R5"]


def test_a_trimmed_output_is_what_the_brief_wants_of_it(design_of: DesignOf):
    lines = PRESS.replace("R5 FB 0 10k tol=1", "R5 FB BOT 8k tol=1\nRV1 BOT 0 0 4k")
    told = BRIEF + '[rails.VOUT]\nvoltage = "12 V"\ntolerance = "2 %"\n'
    spread = stress(design_of(lines, brief=told), "C9").voltage.spread
    assert spread.maximum == pytest.approx(12.24)
    assert stress(design_of(lines, brief=BRIEF), "C9").voltage.spread.maximum > 13


class TestEnvelope:
    def test_holds_every_regime(self, design_of: DesignOf):
        design = design_of(PRESS, brief=BRIEF)
        found = envelope(design.known, [_operated(design, 10, 12)], [Regime.NO_LOAD, Regime.SHORT_CIRCUIT])
        assert found["VOUT"].spread == Spread(0, 11, 12, "V")
        assert found["VBAT"] == design.known["VBAT"]

    def test_passes_over_an_output_that_has_run_away(self, design_of: DesignOf):
        design = design_of(PRESS, brief=BRIEF)
        found = envelope(design.known, [_operated(design, 10, inf)], [Regime.NO_LOAD])
        assert "VOUT" not in found

    def test_leaves_a_pin_alone_whose_net_is_a_rail(self, design_of: DesignOf):
        design = design_of(PRESS, brief=BRIEF + '[rails.COMP]\nvoltage = "1 V"\n')
        found = envelope(design.known, [_operated(design, 10, 12)], [Regime.NO_LOAD])
        assert found["COMP"].spread == Spread.exact(1, "V")

    def test_does_not_change_what_it_is_given(self, design_of: DesignOf):
        design = design_of(PRESS, brief=BRIEF)
        before: dict[str, Potential] = dict(design.known)
        envelope(design.known, [_operated(design, 10, 12)], [Regime.SHORT_CIRCUIT])
        assert design.known == before


def _operated(design: Design, low: float, high: float) -> Operated:
    output = Spread(low, 11, high, "V")
    return Operated(design.controllers[0], replace(Operation(), output="VOUT", regulated=output))
