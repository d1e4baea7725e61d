"""The solver against ngspice, an open simulator: the same list, the same potentials and currents.

The lines of a network are read by our own reader and solved by our own solver; the same lines, but for what
ngspice writes otherwise, go to ngspice.
"""

from __future__ import annotations

import re
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from pwmlint.grammar import read_bytes
from pwmlint.lint.circuit.graph import Circuit
from pwmlint.lint.circuit.growth import Growth
from pwmlint.lint.circuit.network import Condition, Free, FreeCurrent, FreePotential
from pwmlint.lint.circuit.potentials import known_potentials
from pwmlint.lint.circuit.solver import Solution, solve
from pwmlint.lint.design import Design
from pwmlint.lint.estimate import Estimate

from .networks import JUNCTIONS, MODELS, NETWORKS, Case
from .ngspice import NGSPICE, simulated

needs_ngspice = pytest.mark.skipif(NGSPICE is None, reason="ngspice is absent: nothing to compare with")

# Relative agreement asked for, and what counts as zero beside the greatest potential of the network: where
# our inputs are equal, those behind a finite gain are not quite.
AGREEMENT = 1e-6
ZERO = 1e-9


@needs_ngspice
@pytest.mark.parametrize("case", NETWORKS, ids=lambda case: case.name)
def test_agrees(case: Case, tmp_path: Path):
    ours = _solved(case)
    theirs = simulated(case, tmp_path, [net for net in sorted(ours.nets) if net.isalnum() and net != "0"])
    scale = max(abs(volts) for volts in theirs.values())
    for net, volts in theirs.items():
        if not net.startswith("load"):
            assert float(ours.voltage(net)[0]) == pytest.approx(volts, rel=AGREEMENT, abs=ZERO * scale), net
    for position, loop in enumerate(case.loops):
        if not isinstance(loop.free, str):
            amperes = float(ours.free_current(f"load{position}")[0])
            assert amperes == pytest.approx(theirs[f"load{position}"], rel=AGREEMENT)


@needs_ngspice
@pytest.mark.parametrize("case", JUNCTIONS, ids=lambda case: case.name)
def test_lies_inside_the_bounds(case: Case, tmp_path: Path):
    exact = re.sub(r"^R.*$", r"\g<0> tol=0", case.lines, flags=re.MULTILINE)
    design = Design(read_bytes(f"* {case.name}\n{exact}\n{MODELS}.end\n".encode(), "orchard.cir"))
    nets = [net for net in design.netlist.nets if net not in design.known]
    theirs = simulated(replace(case, lines=f"{case.lines}\n{MODELS}"), tmp_path, nets)
    for net in nets:
        found = design.voltage(net)
        assert isinstance(found, Estimate), found
        assert found.spread.minimum - 1e-6 <= theirs[net] <= found.spread.maximum + 1e-6, net


def test_there_are_enough_networks():
    cases = [*NETWORKS, *JUNCTIONS]
    assert len(cases) >= 45
    assert len({case.name for case in cases}) == len(cases)


def _solved(case: Case) -> Solution:
    """Return our own solution at nominal values, the trimmers where the case has them."""
    circuit = Circuit(read_bytes(f"* {case.name}\n{case.lines}\n.end\n".encode(), "orchard.cir"))
    free_nets = {loop.free for loop in case.loops if isinstance(loop.free, str)}
    known = {net: p for net, p in known_potentials(circuit, None, ()).items() if net not in free_nets}
    growth = Growth(circuit, known, (), frozenset(free_nets))
    growth.grow(*(net for net in circuit.netlist.nets if net not in known))
    network = growth.network()
    free: list[Free] = []
    for position, loop in enumerate(case.loops):
        if isinstance(loop.free, str):
            free.append(FreePotential(loop.free))
        else:
            free.append(FreeCurrent(f"load{position}", *loop.free))
    conditions = [Condition(loop.plus, loop.minus, lambda _: np.zeros(1)) for loop in case.loops]
    whole = replace(network, free=tuple(free), conditions=tuple(conditions))
    sample = {name: np.full(1, p.nominal) for name, p in growth.parameters.items()}
    sample |= {f"{trimmer} travel": np.full(1, share) for trimmer, share in case.travel.items()}
    return solve(whole, sample, 1)
