"""Modified nodal analysis: elements one by one, closed loops, and networks that have no single solution."""

from __future__ import annotations

from dataclasses import replace
from itertools import product

import numpy as np
import pytest
from pwmlint.lint.circuit.network import (
    Condition,
    ControlledSource,
    CurrentSource,
    FreeCurrent,
    FreePotential,
    Network,
    Resistor,
    Sample,
)
from pwmlint.lint.circuit.solver import solve

from .elements import constant, network, resistor, solved, source


class TestElements:
    def test_divider(self):
        answer = solved(resistor("R1", "VREF", "SET", 3e3), resistor("R2", "SET", "0", 2e3))
        assert answer.voltage("SET") == pytest.approx(2.0)
        assert answer.voltage("VREF", "SET") == pytest.approx(3.0)

    def test_current_flows_from_a_to_b(self):
        top = resistor("R1", "VREF", "0", 1e3)
        answer = solved(top, resistor("R2", "VREF", "N", 1e3), resistor("R3", "N", "0", 1e3))
        assert answer.current(top) == pytest.approx(5e-3)
        assert answer.current(Resistor("R9", "0", "VREF", constant(1e3))) == pytest.approx(-5e-3)

    def test_current_source_leaves_a_and_enters_b(self):
        bias = CurrentSource("bias", "0", "DTC", constant(10e-6))
        answer = solved(resistor("R1", "DTC", "0", 10e3), bias)
        assert answer.voltage("DTC") == pytest.approx(0.1)
        assert answer.current(bias) == pytest.approx(10e-6)

    def test_voltage_source_between_two_free_nets(self):
        drop = source("V1", "A", "B", 1.5)
        answer = solved(resistor("R1", "VREF", "A", 1e3), drop, resistor("R2", "B", "0", 1e3))
        assert answer.voltage("A", "B") == pytest.approx(1.5)
        assert answer.current(drop) == pytest.approx(1.75e-3)

    def test_controlled_voltage_source(self):
        buffer = ControlledSource("E1", "OUT", "0", "IN", "0", constant(2.0), "voltage")
        answer = solved(
            resistor("R1", "VREF", "IN", 4e3),
            resistor("R2", "IN", "0", 1e3),
            buffer,
            resistor("RL", "OUT", "0", 1e3),
        )
        assert answer.voltage("OUT") == pytest.approx(2.0)
        assert answer.current(buffer) == pytest.approx(-2e-3)

    def test_controlled_current_source(self):
        sink = ControlledSource("G1", "OUT", "0", "IN", "0", constant(1e-3), "current")
        answer = solved(
            resistor("R1", "VREF", "IN", 1e3),
            resistor("R2", "IN", "0", 1e3),
            sink,
            resistor("RL", "VREF", "OUT", 1e3),
        )
        assert answer.current(sink) == pytest.approx(2.5e-3)
        assert answer.voltage("OUT") == pytest.approx(2.5)

    def test_control_between_nets_that_are_known(self):
        source = ControlledSource("G1", "0", "OUT", "VREF", "0", constant(1e-3), "current")
        assert solved(source, resistor("R1", "OUT", "0", 2e3)).voltage("OUT") == pytest.approx(10.0)

    def test_current_out_of_a_net_sums_its_branches(self):
        answer = solved(
            resistor("R1", "VREF", "N", 1e3),
            resistor("R2", "N", "0", 1e3),
            resistor("R3", "0", "VREF", 5e3),
            resistor("R4", "VREF", "VREF", 1.0),
        )
        assert answer.current_out_of("VREF") == pytest.approx(3.5e-3)

    def test_negative_potentials(self):
        answer = solved(
            resistor("R1", "VREF", "N", 1e3), resistor("R2", "N", "VNEG", 1e3), known={"VNEG": -15.0}
        )
        assert answer.voltage("N") == pytest.approx(-5.0)

    def test_a_milliohm_beside_a_hundred_megohms(self):
        answer = solved(
            resistor("RS1", "VREF", "A", 1e-3, may_be_zero=True),
            resistor("RS2", "A", "0", 1e-3, may_be_zero=True),
            resistor("R1", "A", "B", 100e6),
            resistor("R2", "B", "0", 100e6),
        )
        assert answer.voltage("A") == pytest.approx(2.5, rel=1e-9)
        assert answer.voltage("B") == pytest.approx(1.25, rel=1e-9)


class TestManySamples:
    def test_every_sample_is_solved_by_itself(self):
        net = Network(
            (Resistor("R1", "VREF", "SET", lambda s: s["R1"]), Resistor("R2", "SET", "0", lambda s: s["R2"])),
            {"0": constant(0), "VREF": lambda s: s["VREF"]},
        )
        sample: Sample = {
            "R1": np.array([1e3, 2e3, 3e3]),
            "R2": np.array([1e3, 1e3, 1e3]),
            "VREF": np.array([4.75, 5.0, 5.25]),
        }
        answer = solve(net, sample, 3)
        assert answer.voltage("SET") == pytest.approx(np.array([4.75 / 2, 5.0 / 3, 5.25 / 4]))

    def test_a_sample_without_solution_does_not_spoil_the_others(self):
        # At a gain of one the input follows the output: nothing is left that settles it.
        loop = Network(
            (ControlledSource("E1", "IN", "0", "OUT", "0", lambda s: s["gain"], "voltage"),),
            {"0": constant(0), "VREF": constant(5)},
            (FreePotential("OUT"),),
            (Condition("IN", "VREF", constant(0)),),
        )
        answer = solve(loop, {"gain": np.array([0.5, 0.0, 0.25])}, 3)
        assert answer.voltage("OUT") == pytest.approx(np.array([10.0, np.nan, 20.0]), nan_ok=True)

    def test_an_overflow_beside_a_singular_sample(self):
        # No part has 1e-310 ohm; a conductance that overflows must not keep the others from being solved.
        loop = Network(
            (
                Resistor("R1", "OUT", "FB", lambda s: s["R1"]),
                ControlledSource("E1", "FB", "0", "OUT", "0", lambda s: s["gain"], "voltage"),
            ),
            {"0": constant(0), "VREF": constant(5)},
            (FreePotential("OUT"),),
            (Condition("FB", "VREF", constant(0)),),
        )
        with np.errstate(over="ignore", invalid="ignore"):
            sample = {"R1": np.array([1e3, 1e-310, 1e3]), "gain": np.array([0.5, 0.5, 0.0])}
            answer = solve(loop, sample, 3).voltage("OUT")
        assert answer == pytest.approx(np.array([10.0, np.nan, np.nan]), nan_ok=True)


class TestShorts:
    def test_a_short_carries_the_current_of_what_it_joins(self):
        link = resistor("L1", "A", "B", 0)
        answer = solved(resistor("R1", "VREF", "A", 1e3), link, resistor("R2", "B", "0", 1e3))
        assert answer.voltage("A", "B") == 0
        assert answer.current(link) == pytest.approx(2.5e-3)

    def test_shorts_in_parallel_share_the_current(self):
        first, second = resistor("L1", "A", "B", 0), resistor("F1", "B", "A", 0)
        answer = solved(resistor("R1", "VREF", "A", 1e3), first, second, resistor("R2", "B", "0", 1e3))
        assert answer.voltage("B") == pytest.approx(2.5)
        assert answer.current(first) == pytest.approx(1.25e-3)
        assert answer.current(second) == pytest.approx(-1.25e-3)

    def test_a_ring_of_shorts(self):
        answer = solved(
            resistor("R1", "VREF", "A", 1e3),
            *(resistor(f"L{a}{b}", a, b, 0) for a, b in ("AB", "BC", "CD", "DA", "AC")),
            resistor("R2", "C", "0", 1e3),
        )
        assert [float(answer.voltage(net)[0]) for net in "ABCD"] == pytest.approx([2.5] * 4)

    def test_two_ties_to_ground(self):
        answer = solved(
            resistor("R1", "VREF", "A", 1e3),
            resistor("T1", "A", "0", 0),
            resistor("T2", "A", "GND", 0),
            known={"GND": 0},
        )
        assert answer.voltage("A") == pytest.approx(0, abs=1e-15)

    def test_a_short_with_both_ends_on_one_net_carries_nothing(self):
        tied = resistor("L1", "A", "A", 0)
        answer = solved(resistor("R1", "VREF", "A", 1e3), tied, resistor("R2", "A", "0", 1e3))
        assert answer.voltage("A") == pytest.approx(2.5)
        assert answer.current(tied) == 0

    @pytest.mark.parametrize("top_ohms", [0.0, 4e3, 10e3])
    def test_trimmer_at_every_position(self, top_ohms: float):
        answer = solved(
            resistor("top", "VREF", "W", top_ohms, may_be_zero=True),
            resistor("bottom", "W", "0", 10e3 - top_ohms, may_be_zero=True),
        )
        assert answer.voltage("W") == pytest.approx(5 * (1 - top_ohms / 10e3))

    @pytest.mark.parametrize("travel", [0.0, 0.5, 1.0])
    def test_rheostat_with_its_wiper_on_one_end(self, travel: float):
        answer = solved(
            resistor("upper", "VREF", "VREF", 10e3 * (1 - travel), may_be_zero=True),
            resistor("lower", "VREF", "A", 10e3 * travel, may_be_zero=True),
            resistor("R1", "A", "0", 10e3),
        )
        assert answer.voltage("A") == pytest.approx(5 / (1 + travel))

    @pytest.mark.parametrize("travel", [0.0, 0.5, 1.0])
    def test_trimmer_with_both_ends_on_one_net(self, travel: float):
        upper = resistor("upper", "VREF", "A", 10e3 * (1 - travel), may_be_zero=True)
        lower = resistor("lower", "A", "VREF", 10e3 * travel, may_be_zero=True)
        answer = solved(upper, lower, resistor("R1", "A", "0", 10e3))
        series = 10e3 * travel * (1 - travel)
        assert answer.voltage("A") == pytest.approx(5 * 10e3 / (10e3 + series))
        assert answer.current_out_of("VREF") == pytest.approx(5 / (10e3 + series))


class TestContradictions:
    def test_a_short_between_two_rails_leaves_the_rest_alone(self):
        short = resistor("RV1 upper", "VREF", "0", 0)
        answer = solved(short, resistor("R1", "VREF", "A", 1e3), resistor("R2", "A", "0", 1e3))
        assert answer.voltage("A") == pytest.approx(2.5)
        assert answer.current(short) == np.inf
        assert answer.current(resistor("RV1 upper", "0", "VREF", 0)) == -np.inf

    def test_rails_shorted_through_a_net_have_no_solution(self):
        answer = solved(resistor("L1", "VREF", "A", 0), resistor("L2", "A", "0", 0))
        assert np.isnan(answer.voltage("A"))

    def test_equal_sources_in_parallel_are_one(self):
        first, second = source("V1", "A", "0", 3.0), source("V2", "A", "0", 3.0)
        answer = solved(first, second, resistor("R1", "A", "0", 1e3))
        assert answer.voltage("A") == pytest.approx(3.0)
        assert answer.current(first) + answer.current(second) == pytest.approx(-3e-3)

    def test_unequal_sources_in_parallel_have_no_solution(self):
        answer = solved(
            source("V1", "A", "0", 3.0), source("V2", "A", "0", 4.0), resistor("R1", "A", "0", 1e3)
        )
        assert np.isnan(answer.voltage("A"))

    def test_floating_nets_are_told(self):
        afloat = network(resistor("R1", "VREF", "A", 1e3), resistor("R2", "B", "C", 1e3))
        assert afloat.floating() == {"B", "C"}
        with pytest.raises(ValueError, match="floating nets: B, C"):
            solve(afloat, {}, 1)

    def test_a_current_source_is_no_path(self):
        assert network(CurrentSource("I1", "0", "A", constant(1e-3))).floating() == {"A"}

    def test_a_control_needs_a_path(self):
        steered = network(ControlledSource("E1", "A", "0", "C", "0", constant(2.0), "voltage"))
        assert steered.floating() == {"C"}
        assert "C" in steered.needed()

    def test_a_loop_needs_a_condition(self):
        with pytest.raises(ValueError, match="one condition for each"):
            solve(network(free=(FreePotential("OUT"),)), {}, 1)


class TestClosedLoops:
    def test_output_voltage_of_a_divider(self):
        # Vout = Vset (1 + Rtop / Rbottom)
        loop = network(
            resistor("R1", "OUT", "FB", 38e3),
            resistor("R2", "FB", "0", 10e3),
            free=(FreePotential("OUT"),),
            conditions=(Condition("FB", "VSET", constant(0.01)),),
            known={"VSET": 2.5},
        )
        assert solve(loop, {}, 1).voltage("OUT") == pytest.approx(2.51 * 4.8)

    def test_a_free_net_is_free_though_its_potential_is_known(self):
        loop = network(
            resistor("R1", "OUT", "FB", 10e3),
            resistor("R2", "FB", "0", 10e3),
            free=(FreePotential("OUT"),),
            conditions=(Condition("FB", "VREF", constant(0)),),
            known={"OUT": 99.0},
        )
        assert solve(loop, {}, 1).voltage("OUT") == pytest.approx(10.0)

    def test_load_current_at_a_threshold(self):
        # 1 V across 0.1 ohm: 10 A
        loop = network(
            resistor("RS", "0", "SENSE", 0.1),
            resistor("R1", "VREF", "LIMIT", 4e3),
            resistor("R2", "LIMIT", "0", 1e3),
            free=(FreeCurrent("load", "0", "SENSE"),),
            conditions=(Condition("SENSE", "LIMIT", constant(0)),),
        )
        answer = solve(loop, {}, 1)
        assert answer.free_current("load") == pytest.approx(10.0)
        assert answer.voltage("SENSE") == pytest.approx(1.0)

    def test_two_loops_at_once(self):
        loop = network(
            resistor("R1", "OUT1", "FB1", 10e3),
            resistor("R2", "FB1", "0", 10e3),
            resistor("R3", "OUT2", "FB2", 30e3),
            resistor("R4", "FB2", "0", 10e3),
            resistor("R5", "OUT1", "FB2", 60e3),
            free=(FreePotential("OUT1"), FreePotential("OUT2")),
            conditions=(Condition("FB1", "VREF", constant(0)), Condition("FB2", "VREF", constant(0))),
        )
        answer = solve(loop, {}, 1)
        assert answer.voltage("OUT1") == pytest.approx(10.0)
        # 5 V / 10 kohm = (OUT2 - 5 V) / 30 kohm + 5 V / 60 kohm
        assert answer.voltage("OUT2") == pytest.approx(5 + 30e3 * (5 / 10e3 - 5 / 60e3))

    def test_an_output_that_reaches_neither_input_has_no_solution(self):
        loop = network(
            resistor("R1", "OUT", "0", 10e3),
            resistor("R2", "VREF", "FB", 10e3),
            resistor("R3", "FB", "0", 10e3),
            free=(FreePotential("OUT"),),
            conditions=(Condition("FB", "VREF", constant(0)),),
        )
        assert np.isnan(solve(loop, {}, 1).voltage("OUT"))

    @pytest.mark.parametrize("offset", [0.0, 0.01])
    def test_inputs_that_move_alike_have_no_solution(self, offset: float):
        # A balanced bridge: but for rounding both inputs see the same share of the output.
        loop = network(
            resistor("R1", "OUT", "PLUS", 1.1e3),
            resistor("R2", "PLUS", "0", 1.3e3),
            resistor("R3", "OUT", "MINUS", 7.7e3),
            resistor("R4", "MINUS", "0", 9.1e3),
            free=(FreePotential("OUT"),),
            conditions=(Condition("PLUS", "MINUS", constant(offset)),),
        )
        assert np.isnan(solve(loop, {}, 1).voltage("OUT"))

    def test_many_solutions_that_differ_in_their_sources_alone(self):
        # Twelve samples, two matrices: OUT = (VREF + offset) (1 + R1 / R2)
        loop = Network(
            (
                Resistor("R1", "OUT", "FB", lambda s: s["R1"]),
                Resistor("R2", "FB", "0", constant(10e3)),
                CurrentSource("bias", "0", "FB", lambda s: s["bias"]),
            ),
            {"0": constant(0), "VREF": lambda s: s["VREF"]},
            (FreePotential("OUT"),),
            (Condition("FB", "VREF", lambda s: s["offset"]),),
        )
        grid = np.array(list(product((10e3, 30e3), (4.5, 5.0, 5.5), (-0.01, 0.01)))).T
        sample: Sample = dict(zip(("R1", "VREF", "offset"), grid, strict=True)) | {"bias": np.full(12, 1e-6)}
        expected = (grid[1] + grid[2]) * (1 + grid[0] / 10e3) - 1e-6 * grid[0]
        assert solve(loop, sample, 12).voltage("OUT") == pytest.approx(expected)

    def test_nothing_to_solve(self):
        assert solved(resistor("R1", "VREF", "0", 1e3)).current_out_of("VREF") == pytest.approx(5e-3)


class TestDirection:
    """The sign that turns where answers run away to infinity."""

    @staticmethod
    def bridge(share: float) -> Network:
        """Return a loop whose inputs see these shares of the output: half, and `share`."""
        return network(
            resistor("R1", "OUT", "PLUS", 10e3),
            resistor("R2", "PLUS", "0", 10e3),
            resistor("R3", "OUT", "MINUS", 10e3 * (1 - share)),
            resistor("R4", "MINUS", "0", 10e3 * share),
            free=(FreePotential("OUT"),),
            conditions=(Condition("PLUS", "MINUS", constant(0.1)),),
        )

    @pytest.mark.parametrize(("share", "direction"), [(0.4, 1), (0.6, -1), (0.5, 0)])
    def test_of_a_loop_is_that_of_what_its_condition_compares(self, share: float, direction: int):
        assert solve(self.bridge(share), {}, 1).direction == direction

    def test_two_loops_that_each_turn_the_other_way(self):
        loops = network(
            resistor("R1", "OUT1", "FB1", 10e3),
            resistor("R2", "FB1", "0", 10e3),
            resistor("R3", "OUT2", "FB2", 30e3),
            resistor("R4", "FB2", "0", 10e3),
            free=(FreePotential("OUT1"), FreePotential("OUT2")),
            conditions=(Condition("FB1", "VREF", constant(0)), Condition("VREF", "FB2", constant(0))),
        )
        assert solve(loops, {}, 1).direction == -1

    def test_is_told_beside_shorts_in_parallel(self):
        loop = self.bridge(0.6)
        shorts = (resistor("L1", "MINUS", "X", 0), resistor("L2", "MINUS", "X", 0))
        assert solve(replace(loop, elements=(*loop.elements, *shorts)), {}, 1).direction == -1

    @pytest.mark.parametrize("gain", [1.5, 2.5])
    def test_of_a_source_that_feeds_back_on_itself(self, gain: float):
        # (VREF - A) / R1 + (gain A - A) / R2 = 0: without bound at a gain of two.
        latch = network(
            resistor("R1", "VREF", "A", 1e3),
            resistor("R2", "E", "A", 1e3),
            ControlledSource("E1", "E", "0", "A", "0", constant(gain), "voltage"),
        )
        found = solve(latch, {}, 1)
        assert found.voltage("A") == pytest.approx(5 / (2 - gain))
        assert found.direction * found.voltage("A") < 0  # a branch turns the sign of the determinant
