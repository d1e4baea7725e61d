"""The equations of a network, coefficient by coefficient."""

from __future__ import annotations

import numpy as np
import pytest
from pwmlint.lint.circuit.equations import Equations
from pwmlint.lint.circuit.network import Condition, FreePotential, Network, Resistor, VoltageSource

from .elements import constant


def test_a_divider_in_two_samples():
    divider = Network(
        (
            Resistor("R1", "VREF", "SET", lambda s: s["R1"]),
            Resistor("R2", "SET", "0", constant(2.0)),
        ),
        {"0": constant(0.0), "VREF": constant(5.0)},
    )
    equations = Equations(divider)
    assert equations.unknowns == 1
    assert not equations.active
    sample = {"R1": np.array([4.0, 8.0])}
    entries, right, drives = equations.filled(divider, sample, 2)
    # (1/R1 + 1/R2) SET = 1/R2 * 0 V + 1/R1 * VREF
    assert equations.places == [(0, 0)]
    assert equations.fixed == []
    assert entries == pytest.approx(np.array([[0.75, 0.625]]))
    assert right == pytest.approx(np.array([[1.25, 0.625]]))
    assert drives == pytest.approx(np.array([[0.0, 0.0], [5.0, 5.0]]))


def test_a_branch_and_a_loop_are_unknowns_with_an_equation_each():
    loop = Network(
        (VoltageSource("V1", "OUT", "A", constant(1.0)), Resistor("R1", "A", "0", constant(2.0))),
        {"0": constant(0.0)},
        (FreePotential("OUT"),),
        (Condition("A", "0", constant(3.0)),),
    )
    equations = Equations(loop)
    assert (equations.potentials["A"], equations.currents["V1"], equations.potentials["OUT"]) == (0, 1, 2)
    assert equations.free_from == 2
    assert equations.settled.tolist() == [True, False, True]
    entries, right, _ = equations.filled(loop, {}, 1)
    # Kirchhoff at A, OUT - A = V1, A - 0 = the condition's difference
    assert equations.matrix(entries)[:, :, 0].tolist() == [
        [0.5, -1.0, 0.0],
        [-1.0, 0.0, 1.0],
        [1.0, 0.0, 0.0],
    ]
    assert right[:, 0].tolist() == [0.0, 1.0, 3.0]
    assert [equations.places[number] for number in equations.fixed] == [(0, 1), (1, 2), (1, 0), (2, 0)]


def test_terms_that_fall_together_add_up():
    parallel = Network(
        (Resistor("R1", "A", "0", constant(2.0)), Resistor("R2", "0", "A", constant(4.0))),
        {"0": constant(0.0)},
    )
    entries, _, _ = Equations(parallel).filled(parallel, {}, 1)
    assert entries.tolist() == [[0.75]]


def test_networks_of_one_form_share_their_equations():
    def divider(ohms: float, volts: float) -> Network:
        elements = (Resistor("R1", "VREF", "A", constant(ohms)), Resistor("R2", "A", "0", constant(1.0)))
        return Network(elements, {"0": constant(0.0), "VREF": constant(volts)})

    one, other = divider(1.0, 5.0), divider(4.0, 10.0)
    assert one.form() == other.form()
    entries, right, _ = Equations(one).filled(other, {}, 1)
    assert (entries.tolist(), right.tolist()) == ([[1.25]], [[2.5]])
