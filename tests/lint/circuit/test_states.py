"""Junctions on a network: each sample in the states that its own solution bears out."""

from __future__ import annotations

from itertools import product

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pwmlint.lint.circuit.network import Network, Resistor, Sample, Value
from pwmlint.lint.circuit.states import Junction, PiecewiseLinear, Probe, State

from .elements import constant

DROP, ZENER = 0.6, 5.1


def reading(name: str) -> Value:
    return lambda sample: sample[name]


def voltage_of(net: str) -> Probe:
    return lambda solution: solution.voltage(net)


output = voltage_of("OUT")


def test_the_higher_of_two_supplies_feeds_the_output():
    network = Network(
        (Resistor("R1", "OUT", "0", constant(1e3)),),
        {"0": constant(0.0), "A": reading("A"), "B": reading("B")},
    )
    diodes = [Junction("D1", "A", "OUT", constant(DROP)), Junction("D2", "B", "OUT", constant(DROP))]
    sample = {"A": np.array([12.0, 5.0, 0.3, 5.0]), "B": np.array([5.0, 12.0, 0.2, 5.0])}
    found = PiecewiseLinear(network, diodes).read({"out": output}, sample, 4)
    assert found.values["out"] == pytest.approx(np.array([11.4, 11.4, 0.0, 4.4]), abs=1e-12)
    assert set(found.states["D1"]) == {State.ON, State.OFF}


@pytest.mark.parametrize(
    ("supply", "volts", "state"),
    [(3.0, 3.0, State.OFF), (9.0, ZENER, State.BREAKDOWN), (-9.0, -DROP, State.ON)],
)
def test_a_zener_is_in_each_of_its_states(supply: float, volts: float, state: State):
    network = Network(
        (Resistor("R1", "IN", "OUT", constant(1e3)),), {"0": constant(0.0), "IN": constant(supply)}
    )
    zener = Junction("D1", "0", "OUT", constant(DROP), constant(ZENER))
    found = PiecewiseLinear(network, [zener]).read({"out": output}, {"IN": np.array([supply])}, 1)
    assert found.values["out"] == pytest.approx(volts)
    assert found.states == {"D1": (state,)}


def test_no_states_fit_a_diode_across_a_stiff_supply():
    network = Network(
        (Resistor("R1", "IN", "OUT", constant(1e3)), Resistor("R2", "OUT", "0", constant(1e3))),
        {"0": constant(0.0), "IN": constant(5.0)},
    )
    found = PiecewiseLinear(network, [Junction("D1", "IN", "0", constant(DROP))]).read(
        {"out": output}, {"IN": np.array([5.0])}, 1
    )
    assert np.isnan(found.values["out"]).all()
    assert found.states == {"D1": ()}


volts = st.floats(-12, 12).map(lambda x: round(x, 2))


@settings(max_examples=40, deadline=None)
@given(st.lists(st.tuples(volts, volts, volts), min_size=1, max_size=6))
def test_every_sample_obeys_the_law_of_its_diodes(supplies: list[tuple[float, float, float]]):
    # Three supplies with 1 kohm each onto a star of diodes, one of them a zener, and 2.2 kohm to ground.
    nets = ("A", "B", "C")
    resistors = [Resistor(f"R{net}", f"V{net}", net, constant(1e3)) for net in nets]
    network = Network(
        (*resistors, Resistor("R1", "OUT", "0", constant(2.2e3))),
        {"0": constant(0.0)} | {f"V{net}": reading(net) for net in nets},
    )
    diodes = [
        Junction("DA", "A", "OUT", constant(DROP)),
        Junction("DB", "OUT", "B", constant(DROP)),
        Junction("DC", "OUT", "C", constant(DROP), constant(ZENER)),
    ]
    sample: Sample = dict(zip(nets, np.array(supplies).T, strict=True))
    probes = {net: voltage_of(net) for net in ("OUT", *nets)}
    read = PiecewiseLinear(network, diodes).read(probes, sample, len(supplies)).values
    current = {net: (sample[net] - read[net]) / 1e3 for net in nets}
    assert read["OUT"] / 2.2e3 == pytest.approx(sum(current.values()), abs=1e-9)
    for diode, net, sense in (("DA", "A", 1), ("DB", "B", -1), ("DC", "C", -1)):
        forward, through = sense * (read[net] - read["OUT"]), sense * current[net]
        zener = ZENER if diode == "DC" else np.inf
        for v, i in zip(forward, through, strict=True):
            assert -zener - 1e-9 <= v <= DROP + 1e-9
            assert i <= 1e-9 or v == pytest.approx(DROP)
            assert i >= -1e-9 or v == pytest.approx(-zener)


def test_all_combinations_are_found_among_the_samples():
    # Two independent diodes: each pair of supplies puts them into one of the four combinations.
    network = Network(
        (
            Resistor("R1", "A", "X", constant(1e3)),
            Resistor("R2", "B", "OUT", constant(1e3)),
        ),
        {"0": constant(0.0), "A": reading("A"), "B": reading("B")},
    )
    diodes = [Junction("D1", "X", "0", constant(DROP)), Junction("D2", "OUT", "0", constant(DROP))]
    grid = np.array(list(product((-1.0, 1.0), (-2.0, 2.0)))).T
    found = PiecewiseLinear(network, diodes).read({"out": output}, {"A": grid[0], "B": grid[1]}, 4)
    assert found.values["out"] == pytest.approx(np.array([-2.0, DROP, -2.0, DROP]))
    assert set(found.states["D1"]) == set(found.states["D2"]) == {State.OFF, State.ON}
