"""The solver against ngspice, an open simulator: the same list, the same potentials and currents.

A row of NETWORKS is one network. Its lines are read by our own reader and solved by our own solver; the same
lines, but for what ngspice writes otherwise, go to ngspice. To add a network, add a row.
"""

from __future__ import annotations

import re
import shutil
import subprocess
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field, replace
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

NGSPICE = shutil.which("ngspice")

needs_ngspice = pytest.mark.skipif(NGSPICE is None, reason="ngspice is absent: nothing to compare with")

# ngspice has no nullor; its loops close through a source of this gain.
GAIN = 1e10

# Relative agreement asked for, and what counts as zero beside the greatest potential of the network: where
# our inputs are equal, those behind a finite gain are not quite.
AGREEMENT = 1e-6
ZERO = 1e-9


@dataclass(frozen=True, slots=True)
class Loop:
    """A closed loop: the free net, or the nets that a free current leaves and enters; the two equal nets."""

    free: str | tuple[str, str]
    plus: str
    minus: str


@dataclass(frozen=True, slots=True)
class Case:
    """One network: its lines, trimmers' positions (0: wiper at the third pin), closed loops."""

    name: str
    lines: str
    travel: Mapping[str, float] = field(default_factory=dict[str, float])
    loops: tuple[Loop, ...] = ()


def at_three_positions(name: str, lines: str, *trimmers: str, loops: tuple[Loop, ...] = ()) -> list[Case]:
    """Return a case for each of three positions of the trimmers: both stops and in between."""
    return [
        Case(f"{name}, at {share}", lines, dict.fromkeys(trimmers, share), loops)
        for share in (0.0, 0.35, 1.0)
    ]


LADDER = """
V1 VIN 0 24
R1 VIN A 1k
R2 A 0 2.2k
R3 A B 3.3k
R4 B 0 4.7k
R5 B C 680
R6 C 0 10k
R7 C D 220
R8 D 0 100k
"""

BRIDGE = """
V1 VIN 0 10
R1 VIN LEFT 1k
R2 LEFT 0 1.01k
R3 VIN RIGHT 2.2k
R4 RIGHT 0 1.8k
R5 LEFT RIGHT 470
"""

EDGES = ("AB", "AC", "AD", "BE", "BF", "CE", "CG", "DF", "DG", "EH", "FH", "GH")

CUBE = "V1 A 0 5\nR0 0 H 1m\n" + "\n".join(
    f"R{i} {edge[0]} {edge[1]} {330 * i}" for i, edge in enumerate(EDGES, start=1)
)

TRIMMED_DIVIDER = """
V1 VREF 0 5
R1 VREF TOP 3.9k
RV1 TOP WIPER BOTTOM 2k
R2 BOTTOM 0 4.3k
R3 WIPER 0 220k
"""

RHEOSTAT = """
V1 VREF 0 5
RV1 VREF VREF SET 50k
R1 SET 0 12k
"""

BOTH_ENDS_TIED = """
V1 VREF 0 5
RV1 SET W SET 10k
R1 VREF W 2.7k
R2 SET 0 1.5k
"""

COARSE_AND_FINE = """
V1 VREF 0 5
RV1 VREF COARSE 0 10k
RV2 VREF FINE 0 10k
R1 COARSE SET 10k
R2 FINE SET 220k
R3 SET 0 100k
"""

BIAS_CURRENTS = """
V1 VREF 0 5
R1 VREF DTC 47k
R2 DTC 0 4.7k
I1 0 DTC 10u
R3 DTC IN 100k
I2 IN 0 1u
"""

SOURCE_BETWEEN_NETS = """
V1 VIN 0 12
R1 VIN A 1k
V2 A B 3.3
R2 B 0 2k
R3 A 0 10k
V3 C B 1.25
R4 C 0 3k
"""

CONTROLLED = """
V1 IN 0 1.5
R1 IN P 1k
R2 P 0 9k
E1 OUT 0 P 0 4
R3 OUT N 2k
G1 N 0 OUT P 0.0005
R4 N 0 5k
E2 X Y P N 0.25
R5 X 0 1k
R6 Y 0 1k
"""

LINKS = """
V1 VIN 0 12
R1 VIN A 1k
R2 A B 0
L1 B C 10u
R3 C 0 2k
R4 C D 0
R5 D 0 3k
"""

NEGATIVE_RAIL = """
V1 VPOS 0 15
V2 VNEG 0 -12
R1 VPOS SUM 10k
R2 VNEG SUM 8.2k
R3 SUM 0 47k
"""

WIDE_RANGE = """
V1 VIN 0 12
R1 VIN A 1m
R2 A B 100meg
R3 B 0 100meg
R4 A 0 10m
"""

OUTPUT_DIVIDER = """
V1 VREF 0 5
R1 VREF SET 5.1k
R2 SET 0 5.1k
R3 OUT SENSE 38.3k
R4 SENSE 0 10k
I1 0 SENSE 200n
I2 0 SET 200n
RL OUT 0 6
"""

REMOTE_SENSE = """
V1 VREF 0 5
R1 VREF SET 10k
R2 SET 0 10k
R3 OUT LOAD 20m
IL LOAD 0 8
R4 LOAD P 10k
R5 OUT P 1meg
R6 P N 15k
R7 N 0 10k
"""

FINITE_GAIN = """
V1 VREF 0 5
V2 COMP 0 2.1
R1 VREF SET 5.1k
R2 SET 0 5.1k
R3 COMP SET 51k
R4 OUT SENSE 5.1k
R5 SENSE 0 5.1k
"""

TRIMMED_OUTPUT = """
V1 VREF 0 5
R1 VREF SET 4.7k
R2 SET 0 4.7k
R3 OUT T 33k
RV1 T SENSE B 5k
R4 B 0 8.2k
"""

TWO_OUTPUTS = """
V1 VREF 0 5
R1 OUT1 FB1 10k
R2 FB1 0 10k
R3 OUT2 FB2 30k
R4 FB2 0 10k
R5 OUT1 FB2 62k
R6 VREF S 1k
R7 S 0 1k
"""

CURRENT_LIMIT = """
V1 VREF 0 5
R1 VREF LIMIT 4k
R2 LIMIT 0 1k
R3 SENSE 0 0.1
R4 SENSE IN 1k
I1 0 IN 200n
"""

FOLD_BACK = """
V1 VREF 0 5
V2 OUT 0 12
R1 VREF LIMIT 9.1k
R2 LIMIT 0 220
R3 SENSE 0 10m
R4 OUT IN 120k
R5 SENSE IN 1k
"""

LIMIT_BELOW_GROUND = """
V1 VREF 0 5
R1 VREF IN 39k
R2 IN RETURN 1k
R3 RETURN 0 10m
"""

RIGHT = {f"{row}{j}": f"{row}{j + 1}" if j < 3 else "0" for row in "ABCD" for j in range(4)}
DOWN = {f"{row}{j}": f"{chr(ord(row) + 1)}{j}" if row < "D" else "0" for row in "ABCD" for j in range(4)}

LATTICE = "V1 A0 0 9\n" + "\n".join(
    f"R{here}{way} {here} {there[here]} {100 + 37 * k}"
    for way, there in (("r", RIGHT), ("d", DOWN))
    for k, here in enumerate(there, start=1)
)

HIGH_SIDE_SENSE = """
V1 VREF 0 5
V2 OUT 0 12
R1 SHUNT OUT 20m
R2 SHUNT PLUS 10k
R3 PLUS 0 10.2k
R4 OUT MINUS 10k
R5 MINUS 0 10k
R6 VREF MINUS 470k
"""

GATED_BY_THE_RAIL = """
V1 VIN 0 28
V2 VREF 0 5
R1 VREF SET 10k
R2 SET 0 10k
R3 OUT FB 22k
R4 FB 0 5.6k
R5 VIN FB 680k
"""

POSITIVE_SHARE = """
V1 VREF 0 5
R1 OUT P 10k
R2 P 0 10k
R3 VREF M 10k
R4 M 0 10k
R5 OUT M 47k
"""

SHARED_REFERENCE = """
V1 V5 0 5
RS V5 VREF 15
R1 VREF SET 5.1k
R2 SET 0 5.1k
R3 OUT SENSE 5.1k
R4 SENSE 0 5.1k
R5 VREF MODE 100
I1 MODE 0 3.5m
R6 VREF DTC 10k
R7 DTC 0 1k
"""

SOURCES_IN_SERIES = """
V1 A 0 3
V2 B A 4.5
V3 B C 1.5
R1 C D 1k
R2 D 0 1k
I1 D C 2m
"""

FOLLOWER = """
V1 VIN 0 12
R1 VIN REF 8.2k
R2 REF 0 3.3k
E1 BUF 0 REF BUF 2e4
R3 BUF LOAD 10
R4 LOAD 0 470
G1 LOAD 0 REF LOAD 0.002
"""

NETWORKS = [
    Case("ladder", LADDER),
    Case("bridge", BRIDGE),
    Case("cube of twelve resistors", CUBE),
    *at_three_positions("trimmer in a divider", TRIMMED_DIVIDER, "RV1"),
    *at_three_positions("rheostat, wiper on its top", RHEOSTAT, "RV1"),
    *at_three_positions("trimmer with both ends tied", BOTH_ENDS_TIED, "RV1"),
    *at_three_positions("coarse and fine trimmer", COARSE_AND_FINE, "RV1", "RV2"),
    Case("bias currents", BIAS_CURRENTS),
    Case("voltage sources between nets", SOURCE_BETWEEN_NETS),
    Case("controlled sources", CONTROLLED),
    Case("links of no resistance", LINKS),
    Case("negative rail", NEGATIVE_RAIL),
    Case("a milliohm beside a hundred megohms", WIDE_RANGE),
    Case("output divider", OUTPUT_DIVIDER, loops=(Loop("OUT", "SENSE", "SET"),)),
    Case("remote sense", REMOTE_SENSE, loops=(Loop("OUT", "N", "SET"),)),
    Case("resistor from the amplifier's output", FINITE_GAIN, loops=(Loop("OUT", "SENSE", "SET"),)),
    *at_three_positions("trimmed output", TRIMMED_OUTPUT, "RV1", loops=(Loop("OUT", "SENSE", "SET"),)),
    Case(
        "two outputs that share a net",
        TWO_OUTPUTS,
        loops=(Loop("OUT1", "FB1", "S"), Loop("OUT2", "FB2", "S")),
    ),
    Case("current limit", CURRENT_LIMIT, loops=(Loop(("0", "SENSE"), "IN", "LIMIT"),)),
    Case("fold-back limit", FOLD_BACK, loops=(Loop(("0", "SENSE"), "IN", "LIMIT"),)),
    Case("lattice of thirty-two resistors", LATTICE),
    Case("sources in series", SOURCES_IN_SERIES),
    Case("follower of finite gain", FOLLOWER),
    Case("high-side sense", HIGH_SIDE_SENSE, loops=(Loop(("SHUNT", "OUT"), "PLUS", "MINUS"),)),
    Case("input that moves the output", GATED_BY_THE_RAIL, loops=(Loop("OUT", "FB", "SET"),)),
    Case("output at both inputs", POSITIVE_SHARE, loops=(Loop("OUT", "P", "M"),)),
    Case("loaded reference", SHARED_REFERENCE, loops=(Loop("OUT", "SENSE", "SET"),)),
    Case("trimmers at opposite stops", COARSE_AND_FINE, {"RV1": 0.0, "RV2": 1.0}),
    Case("limit sensed below ground", LIMIT_BELOW_GROUND, loops=(Loop(("RETURN", "0"), "IN", "0"),)),
]


@needs_ngspice
@pytest.mark.parametrize("case", NETWORKS, ids=lambda case: case.name)
def test_agrees(case: Case, tmp_path: Path):
    ours = _solved(case)
    theirs = _simulated(case, tmp_path, [net for net in sorted(ours.nets) if net.isalnum() and net != "0"])
    scale = max(abs(volts) for volts in theirs.values())
    for net, volts in theirs.items():
        if not net.startswith("load"):
            assert float(ours.voltage(net)[0]) == pytest.approx(volts, rel=AGREEMENT, abs=ZERO * scale), net
    for position, loop in enumerate(case.loops):
        if not isinstance(loop.free, str):
            amperes = float(ours.free_current(f"load{position}")[0])
            assert amperes == pytest.approx(theirs[f"load{position}"], rel=AGREEMENT)


# Piecewise-linear networks: what the simulator's own diodes do must lie inside our bounds.
JUNCTIONS = [
    Case("clamp to a rail", "V1 VIN 0 12\nV2 V5 0 5\nR1 VIN A 1k\nD1 A V5 DX\nR2 A 0 10k"),
    Case("clamp that blocks", "V1 VIN 0 12\nV2 V5 0 5\nR1 VIN A 10k\nD1 A V5 DX\nR2 A 0 1k"),
    Case("two supplies in competition", "V1 VA 0 12\nV2 VB 0 9\nD1 VA A DX\nD2 VB A DX\nR1 A 0 1k"),
    Case("two diodes in series", "V1 VIN 0 5\nR1 VIN A 2.2k\nD1 A B DX\nD2 B 0 DX\nR2 B 0 4.7k"),
    Case("zener", "V1 VIN 0 24\nR1 VIN A 4.7k\nD1 0 A DZ5V1\nR2 A B 10k\nR3 B 0 10k"),
    Case("zener below its voltage", "V1 VIN 0 4\nR1 VIN A 1k\nD1 0 A DZ5V1\nR2 A 0 10k"),
    Case("current into a diode", "I1 0 A 1m\nD1 A B DX\nR1 B 0 1k\nR2 A 0 1meg"),
    Case("discharge path", "V1 VREF 0 5\nR1 VREF DTC 10k\nR2 DTC 0 1k\nD1 0 DTC DX\nD2 DTC VREF DX"),
]

MODELS = ".model DX d(is=1e-14)\n.model DZ5V1 d(is=1e-14 bv=5.1 ibv=1m)\n"


@needs_ngspice
@pytest.mark.parametrize("case", JUNCTIONS, ids=lambda case: case.name)
def test_lies_inside_the_bounds(case: Case, tmp_path: Path):
    exact = re.sub(r"^R.*$", r"\g<0> tol=0", case.lines, flags=re.MULTILINE)
    design = Design(read_bytes(f"* {case.name}\n{exact}\n{MODELS}.end\n".encode(), "orchard.cir"))
    nets = [net for net in design.netlist.nets if net not in design.known]
    theirs = _simulated(replace(case, lines=f"{case.lines}\n{MODELS}"), tmp_path, nets)
    for net in nets:
        found = design.voltage(net)
        assert isinstance(found, Estimate), found
        assert found.spread.minimum - 1e-6 <= theirs[net] <= found.spread.maximum + 1e-6, net


def test_there_are_enough_networks():
    cases = [*NETWORKS, *JUNCTIONS]
    assert len(cases) >= 45
    assert len({case.name for case in cases}) == len(cases)


# ------------------------------------------------------------------------------------------- our side


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


# ------------------------------------------------------------------------------------ the simulator's


def _simulated(case: Case, folder: Path, nets: list[str]) -> dict[str, float]:
    """Return the potentials of `nets`, and the loops' currents as load0, load1 ..., by ngspice."""
    assert NGSPICE is not None
    cards = [card for line in case.lines.strip().splitlines() for card in _cards(line, case.travel)]
    asked = [f"v({net})" for net in nets]
    for position, loop in enumerate(case.loops):
        cards.append(_closing(position, loop))
        if not isinstance(loop.free, str):
            cards.append(f"Vload{position} {loop.free[0]} probe{position} 0")
            asked.append(f"i(vload{position})")
    script = ["set numdgt=15", "op", *(f"print {quantity}" for quantity in asked)]
    deck = folder / "orchard.cir"
    lines = [f"* {case.name}", *cards, TIGHT, ".control", *script, ".endc", ".end", ""]
    deck.write_text("\n".join(lines), encoding="utf-8")
    command = [NGSPICE, "-b", deck.name]
    printed = subprocess.run(command, cwd=folder, capture_output=True, text=True, timeout=60)
    found = {m[1].lower(): float(m[2]) for m in _PRINTED.finditer(printed.stdout)}
    assert len(found) == len(asked), printed.stdout + printed.stderr
    answers = {net: found[f"v({net.lower()})"] for net in nets}
    return answers | {m[1]: found[name] for name in found if (m := re.fullmatch(r"i\(v(load\d+)\)", name))}


TIGHT = ".options gmin=1e-18 reltol=1e-9 abstol=1e-18 vntol=1e-15"

_PRINTED = re.compile(r"^([vi]\(\w+\)) = ([-+.\deE]+)\s*$", re.MULTILINE)


def _cards(line: str, travel: Mapping[str, float]) -> Iterator[str]:
    """Yield a line as ngspice takes it: it has no trimmers, and takes 1 mohm for a resistor of none."""
    name, *words = line.split()
    if name.startswith("RV"):
        top, wiper, bottom, value = words
        share = travel[name]
        yield from _resistor(f"R{name}a", top, wiper, f"{{{value}*{1 - share!r}}}", none=share == 1)
        yield from _resistor(f"R{name}b", wiper, bottom, f"{{{value}*{share!r}}}", none=share == 0)
    elif name.startswith("R"):
        a, b, value = words
        yield from _resistor(name, a, b, value, none=value == "0")
    else:
        yield line


def _resistor(name: str, a: str, b: str, value: str, *, none: bool) -> Iterator[str]:
    if a != b:
        yield f"V{name} {a} {b} 0" if none else f"{name} {a} {b} {value}"


def _closing(position: int, loop: Loop) -> str:
    """Return the high-gain source that closes a loop: its sign does not matter to direct current."""
    if isinstance(loop.free, str):
        return f"Eloop{position} {loop.free} 0 {loop.plus} {loop.minus} {GAIN:g}"
    return f"Gloop{position} probe{position} {loop.free[1]} {loop.plus} {loop.minus} {GAIN:g}"
