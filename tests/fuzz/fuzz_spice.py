"""Reads damaged SPICE-style lists and counts what came of it.

    python tests/fuzz/fuzz_spice.py 100000            # byte and word mutations of the lists below
    python tests/fuzz/fuzz_spice.py 100000 --guided   # guided by coverage, where atheris is installed

A list is read, or refused with a NetlistError that has a place; anything else, or a second of time, is a
failure: its bytes are printed and the exit status is 1. The seed is printed and may be given with --seed.
"""

from __future__ import annotations

import argparse
import random
import sys
import time
from collections import Counter
from collections.abc import Callable
from importlib import import_module

from pwmlint.grammar.errors import NetlistError
from pwmlint.grammar.spice import read_spice
from pwmlint.grammar.text import decode

SLOW = 1.0
"""Seconds that a list of some hundred bytes may take on a busy machine; a thousand times the usual."""

SEEDS = [
    """Frost fan drive
XU1 fb ref comp dt ct rt 0 c1 e1 e2 c2 vcc oc vref in2m in2p XX494
.subckt XX494 1 2 3 4 5 6 7 8 9 10 11 12 13 14 15 16
R1 1 2 1k
.ends
R1 vref fb 4k7 tol=1 p=0.25 ; upper
R2 fb GND {rb*2} $ lower
.param rb=2.35k top='rb+1k' f(x)={x*x}
RV1 vref dt 0 10k
C1 ct gnd
* the timing capacitor
+ 10n
V1 vcc 0 DC 24 PULSE(0 24 1u 1n 1n 5u 10u) AC 1 Rser=0.1
.end
""",
    """* source PRESS
R_R1         $N_0001 0  1k TC=0,0
X_U1A  $N_0001 $G_DPWR sheet PARAMS: r={1+2**3} w=5
.SUBCKT sheet a b OPTIONAL: DPWR=$G_DPWR PARAMS: r=1k
.if (r > 5)
R1 a n {r}
.else
R1 a n 7
.endif
K1 L1 L2 0.99
L1 a 0 10u
L2 n 0 {10u*max(1,2)}
.subckt inner p
D1 p 0 DX off
.model DX D(Is=1f)
.ends inner
X1 n inner
.ENDS
.connect a b
.global vcc
.func twice(x) {2*x}
.step param rload list 1 2
R9 x 0 {twice(rload)}
""",
    """press
M§Q1 d g s BUZ11
Q2 c b e 0 BC547 2
E1 o 0 TABLE {V(a)} = (0,0) (1,5)
G1 o 0 a b 1m
F1 o 0 V1 2
B1 o 0 V = V(a) + max(1, 2)
A1 [in1 ~in2] %v(out) gate
A2 0 N005 0 N011 0 0 N009 0 OR Vhigh=5
T1 a 0 b 0 Z0=50 TD=1n
J1 d g s JX
CN1 a b c d HEADER4
C2 a b 0.01uf,16V mfg="hive; sons"
I1 (a b) SIN(0,1,1k)
U1 NAND(2) $G_DPWR $G_DGND in1 in2 out D0 IO
.include "nothing.lib"
.lib typ
.param q=1
.endl
.lib 'corners.lib' typ
.control
plot v(a)
.endc
.tran 1u 1m
""",
]

WORDS = [
    *(
        "\n",
        "\n+",
        "\n*",
        " ",
        "\t",
        ",",
        "=",
        "(",
        ")",
        "{",
        "}",
        "'",
        '"',
        ";",
        "$",
        "//",
        "\\\\\n",
        "\r",
        "\x00",
    ),
    *(
        ".subckt s a\n",
        ".ends\n",
        ".if (1)\n",
        ".else\n",
        ".endif\n",
        ".param a={a}\n",
        ".end\n",
        ".control\n",
    ),
    *(
        ".lib x\n",
        ".endl\n",
        ".include 'x'\n",
        "X1 a sheet\n",
        "XU1 a XX494\n",
        "R1 a b {",
        "K1 L1 L2 1\n",
        "PARAMS:",
    ),
    *(
        "1e400",
        "10**10**10",
        "nan",
        "{1/0}",
        "((((",
        "))))",
        "-----",
        "µ",
        "§",
        "\x1b[31m",
        "\ufeff",
        "0",
        "gnd",
        "x1.n",
    ),
]


def mutated(source: random.Random) -> bytes:
    """Return one of the lists, damaged one to four times."""
    data = bytearray(source.choice(SEEDS).encode())
    for _ in range(source.randint(1, 4)):
        at = source.randrange(len(data) + 1)
        to = min(len(data), at + source.choice((1, 2, 8, 40)))
        match source.randrange(6):
            case 0:
                del data[at:to]
            case 1:
                data[at:at] = source.choice(WORDS).encode()
            case 2:
                data[at:at] = data[at:to] * source.choice((1, 2, 50))
            case 3 if at < len(data):
                data[at] = source.randrange(256)
            case 4:
                other = source.choice(SEEDS).encode()
                begin = source.randrange(len(other))
                data[at:to] = other[begin : begin + source.randrange(200)]
            case _:
                lines = bytes(data).split(b"\n")
                source.shuffle(lines)
                data = bytearray(b"\n".join(lines))
    return bytes(data)


def outcome(data: bytes) -> str:
    """Read `data` and look at every pin; return "read" or "refused"."""
    try:
        netlist = read_spice(decode(data, "fuzz.cir"), "fuzz.cir", keep=lambda name: "494" in name)
    except NetlistError as error:
        for each in (error, *error.also):
            if not each.place.file or not each.message or not each.remedy:
                raise AssertionError(f"an error without place, message or remedy: {each}") from error
        str(error)
        return "refused"
    for part in netlist.parts.values():
        for index, pin in enumerate(part.pins):
            if pin.net and (part.reference, index) not in netlist.nets[pin.net].pins:
                raise AssertionError(f"{part.reference} and {pin.net} disagree")
    return "read"


def run(count: int, seed: int) -> int:
    """Read `count` damaged lists; return the exit status."""
    source = random.Random(seed)
    counts = Counter[str]()
    slowest = 0.0
    for _ in range(count):
        data = mutated(source)
        start = time.perf_counter()
        try:
            result = outcome(data)
        except Exception as error:
            result = "failed"
            print(f"{type(error).__name__}: {error}\n{data!r}", file=sys.stderr)
        taken = time.perf_counter() - start
        slowest = max(slowest, taken)
        if taken > SLOW:
            result = "failed"
            print(f"{taken:.1f} s\n{data!r}", file=sys.stderr)
        counts[result] += 1
    print(f"seed {seed}: {counts['read']} read, {counts['refused']} refused with NetlistError,", end=" ")
    print(f"{counts['failed']} failed; slowest {slowest:.3f} s")
    return 1 if counts["failed"] else 0


def guided(count: int) -> None:
    """Let coverage guide the damage; atheris ends the process itself."""
    fuzzer = import_module("atheris")
    instrument: Callable[..., None] = fuzzer.instrument_all
    instrument()
    fuzzer.Setup([sys.argv[0], f"-atheris_runs={count}", "-max_len=4000"], outcome)
    fuzzer.Fuzz()


def main() -> int:
    """Run as the command line says."""
    parser = argparse.ArgumentParser(description="Read damaged SPICE-style lists.")
    parser.add_argument("count", type=int)
    parser.add_argument("--seed", type=int, default=494)
    parser.add_argument("--guided", action="store_true")
    arguments = parser.parse_args()
    if arguments.guided:
        guided(arguments.count)
        return 0
    return run(arguments.count, arguments.seed)


if __name__ == "__main__":
    sys.exit(main())
