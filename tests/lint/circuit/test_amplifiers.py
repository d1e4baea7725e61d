"""What each error amplifier is for."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from pwmlint.lint.circuit.amplifiers import Amplifier, amplifier_for
from pwmlint.lint.design import Design

FanOf = Callable[..., Design]


def amplifiers(design: Design) -> tuple[Amplifier, ...]:
    (controller,) = design.controllers
    return design.amplifiers(controller)


class TestUses:
    def test_voltage_and_current(self, fan_of: FanOf):
        first, second = amplifiers(fan_of())
        assert (first.use, first.output, first.sensed_by) == ("voltage", "FAN", "in+")
        assert second.use == "current"
        assert second.sense is not None
        assert (second.sense.part.reference, second.sense.near, second.sense.far) == ("R13", "SHUNT", "0")

    def test_unused(self, fan_of: FanOf):
        u1 = "U1 SENSE SET COMP DTC CT RT 0 DRIVE 0 0 DRIVE VCC MODE VREF VREF 0 494"
        assert amplifiers(fan_of(U1=u1, R5="", R6=""))[1].use == "unused"

    def test_what_another_part_drives_is_a_signal(self, fan_of: FanOf):
        first = amplifiers(fan_of(R8="U9 X1 X2 SENSE VREF 817"))[0]
        assert (first.use, first.driven_by) == ("signal", ("U9",))

    def test_a_rectified_winding_without_a_capacitor_is_a_signal(self, fan_of: FanOf):
        u1 = "U1 SENSE SET COMP DTC CT RT 0 DRIVE 0 0 DRIVE VCC MODE VREF LIMIT PULSES 494"
        lines = ("T1 SW2 SW3 W1 W2", "D8 W1 PULSES DX", "D9 W2 PULSES DX", "R14 PULSES 0 10")
        more = {line.split()[0]: line for line in lines}
        second = amplifiers(fan_of(U1=u1, **more))[1]
        assert (second.use, second.driven_by) == ("signal", ("D8", "D9"))

    def test_in_plus_at_ground_is_tied_off_whatever_is_at_the_other(self, fan_of: FanOf):
        u1 = "U1 SENSE SET COMP DTC CT RT 0 DRIVE 0 0 DRIVE VCC MODE VREF AUX 0 494"
        assert amplifiers(fan_of(U1=u1, J9="J9 AUX 0 X"))[1].use == "unused"

    def test_through_a_trimmer(self, fan_of: FanOf):
        lines = {"R8": "R8 FAN T 4.7k", "RV": "RV1 T SENSE B 1k", "R9": "R9 B 0 4.7k"}
        assert amplifiers(fan_of(**lines))[0].output == "FAN"

    def test_the_wrong_way_round(self, fan_of: FanOf):
        u1 = "U1 SET SENSE COMP DTC CT RT 0 DRIVE 0 0 DRIVE VCC MODE VREF LIMIT SHUNT 494"
        first = amplifiers(fan_of(U1=u1))[0]
        assert (first.use, first.sensed_by) == ("voltage", "in-")

    def test_several_outputs_without_a_brief(self, fan_of: FanOf):
        more = {"R10": "R10 SENSE AUX 47k", "L2": "L2 AUX SW 1m", "C4": "C4 AUX 0 1u"}
        first = amplifiers(fan_of(**more))[0]
        assert (first.use, first.output) == ("voltage", "")
        assert set(first.outputs) >= {"FAN", "AUX"}

    def test_the_brief_says_which(self, fan_of: FanOf):
        more = {"R10": "R10 SENSE AUX 47k", "L2": "L2 AUX SW 1m", "C4": "C4 AUX 0 1u"}
        first = amplifiers(fan_of(brief='[controllers.U1]\noutput = "AUX"\n', **more))[0]
        assert first.output == "AUX"

    def test_a_resistor_of_ten_ohms_is_no_shunt(self, fan_of: FanOf):
        assert amplifiers(fan_of(R13="R13 SHUNT 0 10"))[1].use != "current"


@pytest.mark.parametrize(("use", "number"), [("voltage", 1), ("current", 2), ("unused", None)])
def test_the_first_of_a_use(use: str, number: int | None, fan_of: FanOf):
    found = amplifier_for(amplifiers(fan_of()), use)
    assert (found.number if found is not None else None) == number


def test_reach_of_a_net(fan_of: FanOf):
    design = fan_of()
    reach = design.reach(design.controllers[0], "SENSE")
    assert reach.nets == ("SENSE",)
    assert set(reach.ends) == {"FAN", "0"}
    assert set(reach.parts) == {"R8", "R9"}
