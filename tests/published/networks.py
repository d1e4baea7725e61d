"""Networks that our solver and ngspice, an open simulator, must agree on.

A row of NETWORKS or JUNCTIONS is one network. To add a network, add a row.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field


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
