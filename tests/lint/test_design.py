"""The questions that a rule asks of a design, on the sheet of an irrigation pump."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from pwmlint.lint.brief import BriefError
from pwmlint.lint.circuit.converter import NoLoop
from pwmlint.lint.design import Design
from pwmlint.lint.estimate import Estimate, Method, Unsolved

DesignOf = Callable[..., Design]

PUMP = """
U1 SENSE SET COMP DTC CT RT 0 DRIVE 0 0 DRIVE VCC MODE VREF LIMIT SHUNT 494
V1 VCC 0 24
R3 VREF SET 5.1k
R4 SET 0 5.1k
R8 PUMP SENSE 5.1k
R9 SENSE 0 5.1k
R5 VREF LIMIT 4k
R6 LIMIT 0 1k
R13 SHUNT 0 0.1
R7 DTC 0 1k
R2 VREF DTC 10k
R1 RT 0 50k
C1 CT 0 1n
Q1 SW DRIVE VCC QP
L1 SW PUMP 140u
D1 SHUNT SW DS
C3 PUMP 0 220u
.model QP pnp
.model DS d
"""

MODE = {"single-ended": "R12 MODE 0 0\n", "push-pull": "R12 MODE VREF 0\n"}

BRIEF = """
[rails.PUMP]
voltage = "5 V"
tolerance = "10 %"
load = "0 A .. 8 A"
[controllers.U1]
topology = "single-ended"
"""


@pytest.fixture
def pump(design_of: DesignOf) -> Design:
    return design_of(PUMP + MODE["single-ended"], brief=BRIEF)


class TestWhatTheEngineerTold:
    def test_of_a_controller(self, pump: Design):
        told = pump.told(pump.controllers[0])
        assert told is not None
        assert told.topology == "single-ended"

    def test_of_a_rail(self, pump: Design):
        rail = pump.rail("PUMP")
        assert rail is not None
        assert rail.band.maximum == pytest.approx(5.5)
        assert pump.rail("VREF") is None

    def test_what_is_missing_is_a_line_of_the_brief(self, pump: Design):
        (controller,) = pump.controllers
        assert pump.missing(controller, "topology") == ""
        assert pump.missing(controller, "dead_time") == 'brief: [controllers.U1] dead_time = "..."'

    def test_nothing_without_a_brief(self, design_of: DesignOf):
        design = design_of(PUMP)
        (controller,) = design.controllers
        assert design.told(controller) is None
        assert design.rail("PUMP") is None
        assert design.full_load(controller) is None

    def test_a_rail_of_no_net_is_a_mistake(self, design_of: DesignOf):
        with pytest.raises(BriefError, match="no net WELL"):
            design_of(PUMP, brief='[rails.WELL]\nvoltage = "5 V"\n')


class TestVoltages:
    def test_known_without_solving(self, pump: Design):
        found = pump.voltage("VCC")
        assert isinstance(found, Estimate)
        assert found.spread.nominal == 24
        assert pump.potential("VCC") is not None
        assert pump.is_ground("0")
        assert not pump.is_ground("VCC")

    def test_asked_once(self, pump: Design):
        assert pump.voltage("DTC") is pump.voltage("DTC")

    def test_difference(self, pump: Design):
        found = pump.difference("SET", "LIMIT")
        assert isinstance(found, Estimate)
        assert found.spread.nominal == pytest.approx(1.5, rel=2e-3)

    @pytest.mark.parametrize(("net", "other"), [("NOTHING", "SET"), ("SET", "NOTHING")])
    def test_difference_to_a_net_without_a_path(self, net: str, other: str, design_of: DesignOf):
        found = design_of(PUMP + "C9 NOTHING 0 1n").difference(net, other)
        assert isinstance(found, Unsolved)
        assert found.nets == ("NOTHING",)

    def test_of_a_net_that_the_converter_drives(self, pump: Design):
        assert isinstance(pump.voltage("SW"), Unsolved)


class TestOutputMode:
    @pytest.mark.parametrize("mode", list(MODE))
    def test_by_the_output_control_pin(self, mode: str, design_of: DesignOf):
        design = design_of(PUMP + MODE[mode])
        assert design.output_mode(design.controllers[0]) == mode

    def test_neither(self, design_of: DesignOf):
        half = design_of(PUMP + "R12 MODE VREF 1k\nR14 MODE 0 1k")
        assert half.output_mode(half.controllers[0]) is None
        floating = design_of(PUMP)
        assert floating.output_mode(floating.controllers[0]) is None


class TestDivider:
    def test_plain(self, pump: Design):
        divider = pump.divider(pump.amplifiers(pump.controllers[0])[0])
        assert divider is not None
        assert [part.reference for part in divider] == ["R8", "R9"]

    def test_any_other_network_is_none(self, design_of: DesignOf):
        design = design_of(PUMP + "R20 SENSE VREF 100k")
        assert design.divider(design.amplifiers(design.controllers[0])[0]) is None


class TestLoops:
    def test_none_of_voltage(self, design_of: DesignOf):
        design = design_of(PUMP.replace("R8 PUMP SENSE 5.1k\n", ""))
        assert isinstance(design.regulation(design.controllers[0]), NoLoop)

    def test_full_load(self, pump: Design):
        assert pump.full_load(pump.controllers[0]) == 8.0


class TestParts:
    def test_where_and_what(self, pump: Design):
        assert pump.place("R3").line == 5
        assert pump.part("R3").reference == "R3"
        assert pump.nominal(pump.part("R3")) == 5.1e3
        assert pump.nominal(pump.part("Q1")) is None


# ----------------------------------------------------------------- worst cases, by brute force

LADDER = """
V1 IN 0 24
R0 IN A 10k tol={0}%
R1 A 0 4.7k tol={1}%
R2 A B 22k tol={2}%
R3 B 0 33k tol={3}%
R4 B C 1k tol={4}%
R5 C VREF 2.2k tol={5}%
V2 VREF 0 5
"""


@settings(max_examples=15, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(tolerances=st.lists(st.integers(1, 20), min_size=6, max_size=6), seed=st.integers(0, 2**32 - 1))
def test_no_unit_lies_outside_the_extreme_values(design_of: DesignOf, tolerances: list[int], seed: int):
    design = design_of(LADDER.format(*tolerances))
    found = design.voltage("B")
    assert isinstance(found, Estimate)
    random = np.random.default_rng(seed)
    nominal = (10e3, 4.7e3, 22e3, 33e3, 1e3, 2.2e3)
    for _ in range(200):
        r = [x * (1 + t / 100 * random.uniform(-1, 1)) for x, t in zip(nominal, tolerances, strict=True)]
        matrix = np.array(
            [
                [1 / r[0] + 1 / r[1] + 1 / r[2], -1 / r[2]],
                [-1 / r[2], 1 / r[2] + 1 / r[3] + 1 / (r[4] + r[5])],
            ]
        )
        unit = np.linalg.solve(matrix, np.array([24 / r[0], 5 / (r[4] + r[5])]))[1]
        assert found.spread.minimum <= unit <= found.spread.maximum


def test_each_method_decides_on_its_own_spread(design_of: DesignOf):
    netlist = design_of(LADDER.format(*[5] * 6)).netlist
    widths: list[float] = []
    for method in (Method.EXTREME, Method.MONTE_CARLO, Method.RSS):
        found = Design(netlist, method=method).voltage("B")
        assert isinstance(found, Estimate)
        widths.append(found.spread.maximum - found.spread.minimum)
    extreme, drawn, root_sum = widths
    assert root_sum < drawn < extreme
