"""Files made to hurt: they are read or refused, soon and in little memory."""

from __future__ import annotations

import subprocess
import sys
from collections.abc import Callable
from pathlib import Path
from time import process_time

import pytest
from pwmlint.grammar.edif import read_edif
from pwmlint.grammar.errors import NetlistError
from pwmlint.grammar.netlist import Netlist

HEAD = "(edif A (edifVersion 2 0 0) (library L "
TOP = HEAD + "(cell T (cellType GENERIC) (view V (viewType NETLIST) (interface) (contents "
END = ")))))"
DEEP = 100_000
STATUS = Path("/proc/self/status")


def nested(opening: str, depth: int = DEEP) -> str:
    return opening * depth + ")" * depth


def parents(uses: int, levels: int) -> str:
    """Cells of which each uses the one before so many times."""
    cells = "(cell c0 (view V (contents (instance a))))"
    for level in range(1, levels):
        instances = "".join(f"(instance i{k} (viewRef V (cellRef c{level - 1})))" for k in range(uses))
        cells += f"(cell c{level} (view V (contents {instances})))"
    return HEAD + cells + "))"


def read(text: str) -> Netlist | NetlistError:
    """Read within the time that any input may take: 10 s for each megabyte."""
    start = process_time()
    try:
        return read_edif(text, "hostile.edf")
    except NetlistError as error:
        return error
    finally:
        assert process_time() - start < 10 * max(1, len(text) / 1e6)


def repeated(contents: str) -> str:
    """A cell with these contents, used two thousand times."""
    uses = "".join(f"(instance i{k} (viewRef V (cellRef B)))" for k in range(2000))
    return f"{HEAD}(cell B (view V (contents (instance R) {contents}))) (cell T (view V (contents {uses})))))"


READ = {
    "unknown forms": lambda: TOP + "(instance R)" + nested("(x ") + END,
    "nets in nets": lambda: TOP + nested("(net a (joined (portRef p)) ") + END,
    "references in references": lambda: TOP + "(net a (joined " + nested("(portRef a ") + "))" + END,
    "instances in instances": lambda: (
        TOP + "(net a (joined (portRef p " + nested("(instanceRef a ") + ")))" + END
    ),
    "sections in sections": lambda: TOP + nested("(section (instance a) ", 20_000) + END,
    "a name of 3 MB": lambda: TOP + f"(net {'a' * 3_000_000})" + END,
    "blanks": lambda: TOP + "(" + " " * 1_000_000 + "net" + "\n" * 1_000_000 + "a)" + END,
    "NUL bytes": lambda: TOP + '(instance \0 (property \0 (string "\0\x1b[31m")))' + END,
    "an escape that never ends": lambda: (
        TOP + '(instance R (property VALUE (string "' + "%1 " * 300_000 + '")))' + END
    ),
    "one designator": lambda: (
        TOP + "".join(f'(instance a{i} (designator "R1"))' for i in range(10_000)) + END
    ),
    "one name": lambda: TOP + "".join(f'(net (rename n{i} "X") (joined))' for i in range(10_000)) + END,
    "one pin on many nets": lambda: (
        TOP
        + "(instance R)"
        + "".join(f"(net a{i} (joined (portRef p (instanceRef R))))" for i in range(20_000))
        + END
    ),
    "an index of a million digits": lambda: TOP + "(net (array a " + "9" * 1_000_000 + ") (joined))" + END,
    "members that are not there": lambda: (
        TOP
        + "(instance (array R 2)) (net (array a 3) (joined (portRef (member p 7) (instanceRef (member R 9)))"
        + "(portRef (member p -1) (instanceRef R)) (portRef p (instanceRef (member R 0)))))"
        + END
    ),
    "arrays of no size": lambda: (
        TOP + "(instance (array R 0)) (net (array a -3) (joined (globalPortRef G)"
        "(portRef p (instanceRef R)))) (net b (joined (portRef p (instanceRef R))))" + END
    ),
}
REFUSED = {
    "forms without an end": lambda: TOP + "(x " * DEEP,
    "views in views": lambda: HEAD + nested("(cell T (view V (interface) (contents ", 20_000) + END,
    "a string without an end": lambda: TOP + '(instance R (property a (string "' + "x)\n(" * 500_000,
    "a stray quote before many lines": lambda: (
        TOP + '(instance R (property a (string "b) ' + "\n" * 500_000 + '" "'
    ),
    "many words": lambda: TOP + "(net " + "a " * 1_000_000 + ")" + END,
    "a huge array": lambda: TOP + "(net (array a 999999999999) (joined))" + END,
    "a huge array of instances": lambda: TOP + "(instance (array a 100000 100000))" + END,
    "an array a thousand times": lambda: (
        TOP + "(instance (array R 50000)) (net n (joined " + "(portRef p (instanceRef R))" * 1000 + "))" + END
    ),
    "a bus a thousand times": lambda: (
        TOP + "(instance R) (net (array n 50000) (joined " + "(portRef p (instanceRef R))" * 1000 + "))" + END
    ),
    "bundles in bundles": lambda: (
        HEAD
        + "(cell T (view V (interface "
        + "(portBundle a (listOfPorts (port p) " * 5000
        + "))" * 5000
        + "(portBundle b (listOfPorts "
        + "".join(f"(port q{i})" for i in range(500))
        + "))) (contents (instance x (viewRef V (cellRef T))))))))"
    ),
    "doubling cells": lambda: parents(2, 60),
    "a chain of cells": lambda: parents(1, 3000),
    "cells that contain one another": lambda: (
        HEAD
        + "(cell a (view V (contents (instance x (viewRef V (cellRef b))))))"
        + "(cell b (view V (contents (instance x (viewRef V (cellRef a))))))))"
    ),
    "a long net many times": lambda: repeated(
        "(net a (joined " + "(portRef p (instanceRef R))" * 20_000 + "))"
    ),
    "a long instance many times": lambda: repeated(
        f"(instance X (viewRef V) {'(property P (string))' * 20_000})"
    ),
    "an odd net many times": lambda: repeated(
        "(net a (joined (portRef (member p 0)) " + "(portRef p (instanceRef R))" * 20_000 + "))"
    ),
    "many properties many times": lambda: (
        HEAD
        + "(cell B (view V "
        + "".join(f'(property P{i} (string "x"))' for i in range(20_000))
        + ")) (cell T (view V (contents "
        + "".join(f"(instance i{i} (viewRef V (cellRef B)))" for i in range(2000))
        + ")))))"
    ),
    "a cell of many ports many times": lambda: (
        HEAD
        + "(cell B (view V (interface "
        + "".join(f"(port p{i})" for i in range(20_000))
        + "))) (cell T (view V (contents "
        + "".join(f"(instance i{i} (viewRef V (cellRef B)))" for i in range(2000))
        + ")))))"
    ),
}


@pytest.mark.construct("A1 deep nesting, long lines, large counts")
@pytest.mark.parametrize("make", READ.values(), ids=READ.keys())
def test_what_is_read(make: Callable[[], str]) -> None:
    found = read(make())
    assert isinstance(found, Netlist), str(found)


@pytest.mark.parametrize("make", REFUSED.values(), ids=REFUSED.keys())
def test_what_is_refused(make: Callable[[], str]) -> None:
    found = read(make())
    assert isinstance(found, NetlistError)
    assert len(str(found)) < 1000


def test_notes_are_bounded() -> None:
    found = read(TOP + "(net a (joined " + "(portRef p (instanceRef LOST))" * 5000 + "))" + END)
    assert isinstance(found, Netlist)
    assert len(found.notes) < 1100
    assert found.notes[-1].message == "4000 more notes of this kind"


@pytest.mark.skipif(not STATUS.exists(), reason="the system has no /proc to ask for the peak of memory")
@pytest.mark.parametrize(
    "make",
    [
        f"{TOP!r} + '(instance a)' * 150_000 + {END!r}",
        f"{TOP!r} + '(net a)' * 250_000 + {END!r}",
        f"{TOP!r} + '(a)' * 600_000 + {END!r}",
        f"{TOP!r} + '(net a ' + '(e) ' * 400_000 + ')' + {END!r}",
        f"{HEAD!r} + '(cell a(view a))' * 100_000 + '))'",
        f"{TOP!r} + '(x ' * 300_000",
    ],
    ids=["instances", "nets", "lists", "numbers", "cells", "depth"],
)
def test_memory(make: str) -> None:
    """At most 60 bytes for each byte of the file, and 100 MB."""
    program = f"""
from pwmlint.grammar.edif import read_edif
from pwmlint.grammar.errors import NetlistError
def peak():
    status = dict(line.split(":", 1) for line in open("/proc/self/status"))
    return int(status["VmHWM"].split()[0]) * 1024
text = {make}
before = peak()
try:
    read_edif(text, "x")
except NetlistError:
    pass
print(len(text), peak() - before)
"""
    done = subprocess.run([sys.executable, "-c", program], capture_output=True, text=True, check=True)
    size, memory = map(int, done.stdout.split())
    print(f"{size} bytes of text, {memory} bytes to read it")
    assert memory < 60 * size + 100e6
