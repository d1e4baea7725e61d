"""How long the worst case takes, as ratios to what cannot be had for less. Run with -s to see them."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from pwmlint.grammar import Netlist, read_bytes
from pwmlint.lint.circuit.linear import Array
from pwmlint.lint.circuit.monte_carlo import monte_carlo
from pwmlint.lint.circuit.network import Condition, FreePotential, Network, Resistor, Sample, Value
from pwmlint.lint.circuit.solver import solve
from pwmlint.lint.circuit.worst_case import Parameter, Samples, analyse
from pwmlint.lint.design import Design

from .turns import best_attempt, least_times


@dataclass(frozen=True, slots=True)
class Loop:
    """A regulated output with eight toleranced parameters and six nets that are not known."""

    parameters: tuple[Parameter, ...]
    network: Network
    output: str

    @classmethod
    def make(cls, output: str = "OUT") -> Loop:
        ohms = {"R1": 5.1e3, "R2": 5.1e3, "R3": 38.3e3, "R4": 10e3, "R5": 1e3, "R6": 220e3}
        parameters = [Parameter(name, 0.99 * value, value, 1.01 * value) for name, value in ohms.items()]
        parameters.append(Parameter("VREF", 4.75, 5.0, 5.25))
        parameters.append(Parameter("offset", -0.01, 0.0, 0.01))
        ends = {
            "R1": ("VREF", "SET"),
            "R2": ("SET", "0"),
            "R3": (output, "TAP"),
            "R4": ("TAP", "0"),
            "R5": ("TAP", "SENSE"),
            "R6": ("SENSE", "0"),
        }
        resistors = [Resistor(name, *nets, reading(name)) for name, nets in ends.items()]
        filters = (("R7", "SENSE", "PLUS"), ("R8", "SET", "MINUS"))
        resistors += [Resistor(name, a, b, lambda _: np.full(1, 1e3)) for name, a, b in filters]
        network = Network(
            tuple(resistors),
            {"0": lambda _: np.zeros(1), "VREF": reading("VREF")},
            (FreePotential(output),),
            (Condition("PLUS", "MINUS", reading("offset")),),
        )
        return cls(tuple(parameters), network, output)

    def evaluate(self, sample: Sample, size: int) -> dict[str, Array]:
        return {"OUT": solve(self.network, sample, size).voltage(self.output)}

    def spread(self) -> object:
        return analyse(self.parameters, self.evaluate, {"OUT": "V"})


def reading(name: str) -> Value:
    return lambda sample: sample[name]


def bare(unknowns: int, samples: int) -> Callable[[], object]:
    """Return the batched solve of as many matrices of the same size, and nothing else."""
    random = np.random.default_rng(1)
    matrices = random.uniform(1.0, 2.0, (samples, unknowns, unknowns)) + unknowns * np.eye(unknowns)
    right = random.uniform(size=(samples, unknowns, 1))
    return lambda: np.linalg.solve(matrices, right)


UNKNOWNS = 6  # TAP, SENSE, PLUS, SET, MINUS, OUT


def test_closed_loop_spread_over_a_bare_solve():
    loop = Loop.make()
    corners = Samples(loop.parameters).corners()
    assert len(corners) == 256
    floor = bare(UNKNOWNS, len(corners))

    def measure() -> float:
        whole, least = least_times([loop.spread, floor], 100)
        return whole / least

    assert best_attempt(measure, 3, name="spread of 256 corners over a bare solve") <= 3


def test_closed_loop_spread_of_a_form_met_for_the_first_time():
    # Most networks of a review are of a form met before and share its equations and their plan. To make these
    # shall cost no more than the spread itself may.
    loops = iter([Loop.make(f"OUT{number}") for number in range(3 * 100)])
    floor = bare(UNKNOWNS, 256)

    def measure() -> float:
        whole, least = least_times([lambda: next(loops).spread(), floor], 100)
        return whole / least

    assert best_attempt(measure, 3 + 3, name="the same, of a form met for the first time") <= 3 + 3


def test_monte_carlo_over_a_bare_solve():
    loop = Loop.make()
    floor = bare(UNKNOWNS, 10_000)

    def work() -> object:
        return monte_carlo(loop.parameters, loop.evaluate, {"OUT": "V"}, samples=10_000)

    def measure() -> float:
        whole, least = least_times([work, floor], 20)
        return whole / least

    assert best_attempt(measure, 5, name="Monte Carlo of 10 000 draws over a bare solve") <= 5


# ------------------------------------------------------------------- a controller on a large board

SHEET = """
U1 SENSE SET COMP DTC CT RT 0 SW 0 0 SW VBAT MODE VREF LIMIT SHUNT 494
V1 VBAT 0 24
R1 VREF SET 5.1k
R2 SET 0 5.1k
R3 OUT SENSE 5.1k
R4 SENSE 0 5.1k
R5 COMP SET 51k
R6 VREF LIMIT 4k
R7 LIMIT 0 1k
R8 SHUNT 0 0.1
R9 DTC 0 1k
R10 VREF DTC 10k
R11 RT 0 47k
C1 CT 0 1n
C2 VREF DTC 2.2u
R12 MODE 0 0
L1 SW OUT 140u
C3 OUT 0 220u
"""


def board(others: int) -> Netlist:
    """Return the controller's sheet and as many unrelated parts, in blocks that hang on ground and a rail."""
    blocks = "\n".join(f"R{100 + i} VBAT N{i // 5} {1 + i % 90}k" for i in range(others))
    text = f"* sorting line of the apple shed\n{SHEET}\n{blocks}\n.end\n"
    return read_bytes(text.encode(), "shed.cir", keep=lambda name: "494" in name)


def questions(design: Design) -> None:
    """Ask a design what the rules ask."""
    for controller in design.controllers:
        design.regulation(controller)
        design.trip(controller)
        design.timing(controller)
        design.reference_load(controller)
        for role in ("dead time", "output control", "amplifier 1 in-", "amplifier 2 in-"):
            design.voltage(controller.net(role) or "")


def test_circuit_work_on_a_board_of_ten_thousand_parts():
    sheet, large = board(0), board(10_000)

    def measure() -> float:
        alone, whole, graph = least_times(
            [
                lambda: questions(Design(sheet)),
                lambda: questions(Design(large)),
                lambda: Design(large).circuit.graph,
            ],
            5,
        )
        return whole / (1.3 * alone + graph)

    assert best_attempt(measure, 1, name="circuit work over 1.3 x own sheet and the graph") <= 1
