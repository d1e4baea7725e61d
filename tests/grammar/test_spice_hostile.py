"""Lists that mean harm: bounded time and memory, an error with a place, never a traceback.

Time and memory are those of a process of its own, so that what other tests left does not count. The bounds
are the requirement: 10 s and 60 MB for a megabyte of text, and 100 MB besides.
"""

from __future__ import annotations

import json
import subprocess
import sys
from pathlib import Path

import pytest
from pwmlint.grammar import read
from pwmlint.grammar.errors import NetlistError
from pwmlint.grammar.netlist import Place
from pwmlint.grammar.spice import read_spice

# Each text is made in the child: it says what it is, and a megabyte need not pass through a pipe.
MEASURE = """
import json, resource, sys, time
from pwmlint.grammar.errors import NetlistError
from pwmlint.grammar.spice import read_spice
def lines(pattern, count):
    # `#` is the number of the repetition, `@` the one after it
    return "".join(pattern.replace("#", str(i)).replace("@", str(i + 1)) for i in range(count))
text = eval(sys.argv[1])
read_spice("t\\nR1 a {1}\\n+ {2}\\n.param x=1\\n", "warm.cir")
before = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss
start = time.process_time()
try:
    netlist = read_spice(text, "x.cir")
    result = f"{len(netlist.parts)} parts, {len(netlist.notes)} notes"
except NetlistError as error:
    result = error.message
    assert len(str(error)) < 20000
print(json.dumps([len(text.encode()), time.process_time() - start,
                  (resource.getrusage(resource.RUSAGE_SELF).ru_maxrss - before) * 1024, result]))
"""

BINARY_TREE = '"t\\nX1 a s0\\n" + lines(".subckt s# p\\nX1 p s@\\nX2 p s@\\n.ends\\n", 45)'
TOO_MANY = "the subcircuits expand to more parts than can be read"

HOSTILE = {
    "a line of 50 MB": ('"t\\nU1 " + "a " * 25_000_000', "a line of 50000003 characters"),
    "a comment of 50 MB": ('"t\\nR1 a b 1\\n*" + "a" * 50_000_000', "1 parts, 0 notes"),
    "a name of 500 kB": ('"t\\nR1 " + "a" * 500_000 + " b 1"', "a name of 500000 characters"),
    "as many words": ('"t\\nU1 " + "a " * 400_000', "a line of more than 100000 words"),
    "as many pairs": ('"t\\nR1 a b 1 " + "a=" * 400_000', "a line of more than 100000 words"),
    "500 000 pins on a net": ('"t\\n" + lines("R# a a 1\\n", 250_000)', "250000 parts, 0 notes"),
    "short lines": ('"t\\n" + lines("R# a b 1\\n", 80_000)', "80000 parts, 0 notes"),
    "one reference again and again": (
        '"t\\n" + "R 1 2 3\\n" * 130_000',
        "more than 1000 parts bear the reference of another",
    ),
    "bad lines": ('"t\\n" + "R1 a\\n" * 200_000', "R1 has too few nodes: 1 word follows"),
    "long plain lines": ('"t\\nU1 " + "ab " * 100_001', "a line of more than 100000 words"),
    "many nets on one line": ('"t\\nU1 " + lines("n# ", 90_000) + "m"', "1 parts, 0 notes"),
    "many nets on many lines": ('"t\\nU1 " + lines("n#\\n+", 90_000) + "m"', "1 parts, 0 notes"),
    "many expressions on one line": (
        '"t\\nR1 a b 1 " + lines("p#={1} ", 40_000) + "\\nX1 a s " + lines("p#=1 ", 40_000)'
        ' + "\\n.subckt s p\\nR1 p 0 1\\n.ends\\n"',
        "2 parts, 0 notes",
    ),
    "open braces": ('"t\\nR1 a b " + "{" * 900_000', "`{` is never closed"),
    "open parentheses": ('"t\\nR1 a b 1" + "(" * 900_000', "1 parts, 0 notes"),
    "blank lines": ('"t\\nR1 a b 1" + "\\n" * 900_000 + "R2 a b 1"', "2 parts, 0 notes"),
    "continuation lines": ('"t\\nR1 a b" + "\\n+" * 450_000 + " 1"', "1 parts, 0 notes"),
    "comments before a continuation": ('"t\\nR1 a b" + "\\n*" * 450_000 + "\\n+ 1"', "1 parts, 0 notes"),
    "cards": ('"t\\nR1 a b 1\\n" + ".x\\n" * 330_000', "1 parts, 101 notes"),
    "blocks left open": ('"t\\n" + ".subckt a\\n" * 90_000', "`.subckt` is never closed"),
    "scripts left open": ('"t\\n" + ".control\\n" * 90_000', "`.control` inside the `.control` of line 2"),
    "nested definitions": (
        '"t\\nR1 a b 1\\n" + ".subckt a\\n" * 60_000 + ".ends\\n" * 60_000',
        "1 parts, 0 notes",
    ),
    "nested instances": (
        '"t\\n" + "X1 a s\\n.subckt s p\\n" * 20_000 + "R1 p 0 1\\n" + ".ends\\n" * 20_000',
        "subcircuits nested deeper than 50 levels",
    ),
    "nested conditions": (
        '"t\\n" + ".if 1\\n" * 60_000 + "R2 a b 1\\n" + ".endif\\n" * 60_000',
        "1 parts, 0 notes",
    ),
    "parts to the power of two": (
        BINARY_TREE + ' + ".subckt s45 p\\nR1 p 0 1\\n.ends\\n"',
        TOO_MANY,
    ),
    "nothing to the power of two": (
        BINARY_TREE + ' + ".subckt s45 p\\n.ends\\n"',
        TOO_MANY,
    ),
    "wide instances": (
        '"t\\n" + lines("X# a s\\n", 3000) + ".subckt s p\\nU1 " + lines("n# ", 3000) + "m\\n.ends\\n"',
        TOO_MANY,
    ),
    "instances with parameters": (
        '"t\\n" + lines("X# a s\\n", 9000) + ".subckt s p\\n" + lines(".param p#={#}\\n", 9000) + ".ends\\n"',
        TOO_MANY,
    ),
    "long paths": (
        '"t\\nXa a s0\\n" + lines(".subckt s# p\\nX" + "y" * 200 + " p s@\\n.ends\\n", 48)'
        ' + ".subckt s48 p\\n" + lines("R# p n# 1\\n", 5000) + ".ends\\n"',
        TOO_MANY,
    ),
    "a chain of parameters": (
        '"t\\nR1 a b {p0}\\n" + lines(".param p#={p@+1}\\n", 30_000) + ".param p30000=1\\n"',
        "1 parts, 0 notes",
    ),
    "long expressions": (
        '"t\\nR1 a b 1\\n" + lines(".param q#={" + "+".join("1" * 4900) + "}\\n", 30)',
        "1 parts, 0 notes",
    ),
    "functions to the power of two": (
        '"t\\nR1 a b {f0(1)}\\n" + lines(".func f#(x) {f@(x)+f@(x)}\\n", 25) + ".func f25(x) {x}"',
        "more than 100000 operations",
    ),
    "a chain of connections": (
        '"t\\n" + lines(".connect n@ n#\\n", 40_000) + lines("R# n# n0 1\\n", 20_000)',
        "20000 parts, 0 notes",
    ),
}


@pytest.mark.parametrize(("text", "result"), HOSTILE.values(), ids=list(HOSTILE))
def test_time_and_memory_are_bounded(text: str, result: str) -> None:
    run = subprocess.run([sys.executable, "-c", MEASURE, text], capture_output=True, text=True, check=True)
    size, seconds, memory, found = json.loads(run.stdout)
    assert found == result
    assert seconds <= 10 * max(1, size / 1e6)
    assert memory <= 100e6 + 60 * size


@pytest.mark.parametrize("value", ["nan", "inf", "NaN", "-5k", "RMOD"])
def test_names_and_negative_values_stay_text(value: str) -> None:
    # a name may be a model's, and models of devices have negative resistances
    assert read_spice(f"t\nR1 a b {value}\n", "x.cir").parts["R1"].value == value


@pytest.mark.parametrize("value", ["1e400", "-inf", "--5k", "+k"])
def test_a_number_that_is_none_is_an_error_with_its_place(value: str) -> None:
    with pytest.raises(NetlistError) as caught:
        read_spice(f"t\nR1 a b {value}\n", "x.cir")
    assert caught.value.place == Place("x.cir", 2, 8)
    assert caught.value.expected.startswith("a resistance such as")
    assert caught.value.remedy == "correct the value"


def test_a_nul_character_is_refused() -> None:
    with pytest.raises(NetlistError, match="NUL"):
        read_spice("t\nR1 a\0 b 1\n", "x.cir")


def test_a_link_to_a_device_without_end_is_refused(tmp_path: Path) -> None:
    (tmp_path / "hive.cir").symlink_to("/dev/zero")
    with pytest.raises(NetlistError, match="this is a device") as refused:
        read(tmp_path / "hive.cir")
    assert (refused.value.expected, refused.value.remedy) == (
        "a netlist file: EDIF 2 0 0 or a SPICE-style list",
        "name the right file",
    )


def test_a_file_beyond_all_size_is_refused_before_it_is_read(tmp_path: Path) -> None:
    with (tmp_path / "hive.cir").open("wb") as stream:
        stream.truncate(500_000_001)  # a hole: nothing is written
    with pytest.raises(NetlistError, match="larger than 500,000,000 bytes"):
        read(tmp_path / "hive.cir")
