"""How fast EDIF is read, how that grows with the board, and how much memory it takes.

The files are generated: a netlist view with its values in properties, and a schematic view in which half of
the tokens say how the sheet looks and a third are properties. Only ratios of one run are judged, as seconds
are those of one machine. PWMLINT_BENCH_PARTS="1000,10000,100000" makes the long run.
"""

from __future__ import annotations

import math
import os
import subprocess
import sys
from collections.abc import Callable
from functools import partial
from importlib import import_module
from importlib.util import find_spec
from pathlib import Path
from time import process_time
from typing import Any

import pytest
from pwmlint.grammar import edif_builder
from pwmlint.grammar.edif import read_edif

from .turns import best_attempt, least_times

SIZES = [int(size) for size in os.environ.get("PWMLINT_BENCH_PARTS", "1000,10000").split(",")]
PINS_OF = {
    "R": ("1", "2"),
    "C": ("1", "2"),
    "Q": ("1", "2", "3"),
    "494": tuple(str(i + 1) for i in range(16)),
}
VALUES = {"R": "4.7k 1%", "C": "100n,50V", "Q": "BD139", "494": "494"}
PACKAGES = {"R": "R_0805", "C": "C_0805", "Q": "TO126", "494": "DIP16"}
PARTS_PER_PAGE = 100
RUNS = 3
YARDSTICK_PARTS = 3000

# The requirements on speed and memory.
MOST_OF_YARDSTICK = {"plain lark": 0.5, "lark-cython": 0.35}
WANTED_GAIN = (
    4.0  # not reached: the usual netlist view is read by whole instances too, which sets the bar high
)
LEAST_GAIN = 2.0
MOST_GROWTH = 1.05
MOST_MEMORY = 400e6  # bytes, for 100 000 parts


def kind_of(part: int) -> str:
    """A controller for every hundred parts, a transistor for every ten, a capacitor for every three."""
    return "494" if part % 100 == 50 else "Q" if part % 10 == 7 else "C" if part % 3 == 0 else "R"


def connections(parts: int) -> dict[str, list[tuple[int, str]]]:
    """Return the pins of each net: neighbours share nets of three or four pins, every tenth pin is on GND."""
    nets: dict[str, list[tuple[int, str]]] = {"GND": [], "VREF": []}
    count = 0
    for part in range(parts):
        for pin in PINS_OF[kind_of(part)]:
            count += 1
            name = "GND" if count % 10 == 0 else "VREF" if count % 25 == 0 else f"N{count * 7 // 24:05}"
            nets.setdefault(name, []).append((part, pin))
    return nets


def netlist_view(parts: int) -> str:
    """A flat netlist view with value, package, time stamp and one field of the user for each part."""
    cells = "\n".join(
        f"    (cell &{kind} (cellType GENERIC)\n      (view NetlistView (viewType NETLIST) (interface"
        + "".join(f"\n          (port &{pin} (direction INOUT))" for pin in pins)
        + ")))"
        for kind, pins in PINS_OF.items()
    )
    instances = "\n".join(
        f"""      (instance &{kind_of(part)[0]}{part}
        (viewRef NetlistView (cellRef &{kind_of(part)} (libraryRef ORCHARD_LIB)))
        (property PartValue (string "{VALUES[kind_of(part)]}"))
        (property ModuleValue (string "{PACKAGES[kind_of(part)]}"))
        (property TimeStampValue (string "{part:08X}"))
        (property Field1Value (string "bay {part % 12}")))"""
        for part in range(parts)
    )
    nets = "\n".join(
        f"      (net {name}\n        (joined"
        + "".join(
            f"\n          (portRef &{pin} (instanceRef &{kind_of(part)[0]}{part}))" for part, pin in pins
        )
        + "))"
        for name, pins in connections(parts).items()
        if pins
    )
    return f"""(edif ORCHARD (edifVersion 2 0 0) (edifLevel 0) (keywordMap (keywordLevel 0))
  (status (written (timeStamp 2001 3 4 5 6 7) (program "Orchard netlister")))
  (external ORCHARD_LIB (edifLevel 0) (technology (numberDefinition))
{cells})
  (library MAIN_LIB (edifLevel 0) (technology (numberDefinition (scale 1 1 (unit DISTANCE))))
    (cell ORCHARD (cellType GENERIC) (view NetlistView (viewType NETLIST) (interface) (contents
{instances}
{nets}))))
  (design ORCHARD (cellRef ORCHARD (libraryRef MAIN_LIB))))
"""


def display(x: int, y: int) -> str:
    return (
        "(display (figureGroupOverride PARTS_32_TEXT (textHeight 10) (visible (true)))"
        f" (justify LOWERLEFT) (orientation R0) (origin (pt {x} {y})))"
    )


def schematic_cell(kind: str) -> str:
    ports = "".join(
        f'\n     (port &{pin} (direction INOUT) (designator "{pin}")\n      (property (rename TYPE "Type")'
        f' (string "passive")))'
        for pin in PINS_OF[kind]
    )
    drawn = "".join(
        f"\n      (portImplementation (name &{pin} {display(4, 10 * int(pin))})\n       (connectLocation"
        f" (figure PIN (dot (pt 0 {10 * int(pin)}))))\n"
        "       (figure PIN (path (pointList (pt 0 0) (pt 10 0)))))"
        for pin in PINS_OF[kind]
    )
    return f"""  (cell (rename C_{kind} "{kind}") (cellType GENERIC)
   (view SCHEMATIC_VIEW (viewType SCHEMATIC)
    (interface{ports}
     (designator "{kind[0]}")
     (symbol (boundingBox (rectangle (pt 0 0) (pt 80 -160))){drawn}
      (figure OUTLINE (rectangle (pt 0 0) (pt 80 -160)))
      (keywordDisplay designator {display(0, 10)})))))"""


def schematic_instance(part: int, net_of: dict[tuple[int, str], str]) -> str:
    kind = kind_of(part)
    reference = f"{'U' if kind == '494' else kind}{part}"
    x, y = 100 * (part % 10), 100 * (part // 10 % 10)
    pins = "".join(
        f"""
     (portInstance &{pin} (designator "{pin}")
      (property (rename NAME "Name") (string (stringDisplay "{pin}" {display(x, y)})))
      (property (rename NET_32_NAME "Net Name") (string "{net_of[part, pin]}"))
      (property (rename IS_32_NO_32_CONNECT "Is No Connect") (string "FALSE")))"""
        for pin in PINS_OF[kind]
    )
    designator = f'\n     (designator (stringDisplay "{reference}" {display(x, y - 10)}))'
    return f"""    (instance I{part:05}
     (viewRef SCHEMATIC_VIEW (cellRef C_{kind} (libraryRef ORCHARD_LIB)))
     (transform (orientation R0) (origin (pt {x} {y}))){designator}{designator}
     (property (rename VALUE "Value") (string (stringDisplay "{VALUES[kind]}"
      {display(x, y + 10)})))
     (property (rename PCB_32_FOOTPRINT "PCB Footprint") (string "{PACKAGES[kind]}"))
     (property (rename SOURCE_32_PACKAGE "Source Package") (string "{kind}"))
     (property (rename SOURCE_32_PART "Source Part") (string "{kind}.Normal"))
     (property (rename SOURCE_32_LIBRARY "Source Library") (string "C:\\ORCHARD\\PARTS.OLB"))
     (property (rename GRAPHIC "Graphic") (string "{kind}.Normal"))
     (property (rename IMPLEMENTATION_32_TYPE "Implementation Type") (string "<none>"))
     (property (rename VOLTAGE "VOLTAGE") (string (stringDisplay "50V"
      {display(x, y + 20)}))){pins})"""


def schematic_net(name: str, pins: list[tuple[int, str]]) -> str:
    joined = "".join(f"\n      (portRef &{pin} (instanceRef I{part:05}))" for part, pin in pins)
    wires = "".join(
        f"\n     (figure (figureGroupOverride WIRE (pathWidth 1)) (path (pointList (pt {part % 1000} 200)"
        f" (pt {part % 1000 + 90} 200) (pt {part % 1000 + 90} 240))))"
        for part, _ in pins
    )
    return f"""    (net (rename {name} "{name}")
     (joined{joined}){wires}
     (comment "drawn by hand"))"""


def schematic_view(parts: int) -> str:
    """A schematic view with a page for every hundred parts, drawn in full."""
    cells = "\n".join(schematic_cell(kind) for kind in PINS_OF)
    nets = connections(parts)
    net_of = {pin: name for name, pins in nets.items() for pin in pins}
    pages: list[str] = []
    for first in range(0, parts, PARTS_PER_PAGE):
        here = range(first, min(first + PARTS_PER_PAGE, parts))
        on_page: dict[str, list[tuple[int, str]]] = {}
        for part in here:
            for pin in PINS_OF[kind_of(part)]:
                on_page.setdefault(net_of[part, pin], []).append((part, pin))
        instances = "\n".join(schematic_instance(part, net_of) for part in here)
        drawn = "\n".join(schematic_net(name, pins) for name, pins in on_page.items())
        pages.append(
            f"   (page PAGE_{first} (pageSize (rectangle (pt 0 0) (pt 1700 1100)))\n{instances}\n{drawn})"
        )
    return f"""(edif (rename ORCHARD "ORCHARD") (edifVersion 2 0 0) (edifLevel 0)
 (keywordMap (keywordLevel 0))
 (library ORCHARD_LIB (edifLevel 0)
  (technology (numberDefinition (scale 1 (e 254 -7) (unit DISTANCE)))
   (figureGroup WIRE (color 0 100 0) (textHeight 10)))
{cells}
  (cell ORCHARD (cellType GENERIC) (view SCHEMATIC_VIEW (viewType SCHEMATIC) (interface) (contents
{chr(10).join(pages)}))))
 (design ORCHARD (cellRef ORCHARD (libraryRef ORCHARD_LIB))))
"""


def with_plugins(monkeypatch: pytest.MonkeyPatch, plugins: dict[str, Any]) -> None:
    """Have `read_edif` use a parser with these plugins of lark."""
    parser = edif_builder.build_parser(plugins)
    monkeypatch.setattr(edif_builder, "_parser", lambda: parser)
    read_edif(netlist_view(10), "warm.edf")


@pytest.fixture
def say(capsys: pytest.CaptureFixture[str]) -> Callable[[str], None]:
    """Return a function that prints a line of the table past pytest."""

    def print_past(line: str) -> None:
        with capsys.disabled():
            print(f"\n{line}", end="")

    return print_past


# In a process of its own, as its log messages carry arguments that their texts have no place for.
YARDSTICK = f"""
import sys, time
import spydrnet
times = []
for _ in range({RUNS}):
    start = time.process_time()
    spydrnet.parse(sys.argv[1])
    times.append(time.process_time() - start)
print(min(times))
"""


@pytest.mark.parametrize("lexer", MOST_OF_YARDSTICK)
def test_netlist_view_against_a_general_netlist_library(
    lexer: str, say: Callable[[str], None], monkeypatch: pytest.MonkeyPatch, tmp_path: Path
) -> None:
    if find_spec("spydrnet") is None or find_spec("requests") is None:
        pytest.skip("spydrnet (with requests), the yardstick, is not installed")
    if lexer == "lark-cython" and find_spec("lark_cython") is None:
        pytest.skip("the optional package lark_cython is not installed")
    with_plugins(monkeypatch, import_module("lark_cython").plugins if lexer == "lark-cython" else {})
    text = netlist_view(YARDSTICK_PARTS)
    path = tmp_path / "board.edf"
    path.write_text(text, encoding="utf-8")
    done = subprocess.run([sys.executable, "-c", YARDSTICK, path], capture_output=True, text=True, check=True)
    yardstick = float(done.stdout)
    (ours,) = least_times(
        [lambda: read_edif(path.read_text(encoding="utf-8"), "board.edf")], RUNS, process_time
    )
    ratio = ours / yardstick
    say(
        f"netlist view, {YARDSTICK_PARTS} parts, {lexer}: {len(text) / ours / 1e6:.1f} MB/s, spydrnet"
        f" {len(text) / yardstick / 1e6:.1f} MB/s, ratio {ratio:.2f} (at most {MOST_OF_YARDSTICK[lexer]})"
    )
    assert ratio <= MOST_OF_YARDSTICK[lexer]


def test_schematic_view_against_netlist_view(say: Callable[[str], None]) -> None:
    texts = [write(YARDSTICK_PARTS) for write in (netlist_view, schematic_view)]
    times = least_times([partial(read_edif, text, "board.edf") for text in texts], RUNS, process_time)
    rates = [len(text) / taken / 1e6 for text, taken in zip(texts, times, strict=True)]
    gain = rates[1] / rates[0]
    say(
        f"netlist view {rates[0]:.1f} MB/s, schematic view {rates[1]:.1f} MB/s: {gain:.1f} x"
        f" (wanted {WANTED_GAIN}, at least {LEAST_GAIN})"
    )
    assert gain >= LEAST_GAIN


@pytest.mark.parametrize("write", [netlist_view, schematic_view])
def test_growth(write: Callable[[int], str], say: Callable[[str], None]) -> None:
    texts = [write(parts) for parts in SIZES]
    works = [partial(read_edif, text, "board.edf") for text in texts]

    def measure() -> float:
        times = least_times(works, RUNS, process_time)
        for parts, text, taken in zip(SIZES, texts, times, strict=True):
            size = len(text) / 1e6
            rate = size / taken
            say(f"{write.__name__}: {parts} parts, {size:.1f} MB, {taken:.2f} s, {rate:.1f} MB/s")
        return math.log(times[-1] / times[0]) / math.log(SIZES[-1] / SIZES[0])

    exponent = best_attempt(measure, MOST_GROWTH, name=f"{write.__name__}, power of the parts")
    say(f"{write.__name__}: time grows with the power {exponent:.3f} of the parts (at most {MOST_GROWTH})")
    assert exponent <= MOST_GROWTH


# The peak is that of /proc, as the usual call also counts the process that this one was forked from.
STATUS = Path("/proc/self/status")
MEASURE = """
import sys
from pwmlint.grammar.edif import read_edif
with open(sys.argv[1], encoding="utf-8") as file:
    netlist = read_edif(file.read(), "board.edf")
assert len(netlist.parts) == int(sys.argv[2])
status = dict(line.split(":", 1) for line in open("/proc/self/status"))
print(int(status["VmHWM"].split()[0]) * 1024)
"""


@pytest.mark.skipif(not STATUS.exists(), reason="the system has no /proc to ask for the peak of memory")
@pytest.mark.parametrize("write", [netlist_view, schematic_view])
def test_memory(write: Callable[[int], str], say: Callable[[str], None], tmp_path: Path) -> None:
    """The peak of a whole process that reads the file, Python and the text included."""
    path = tmp_path / "board.edf"
    for parts in SIZES:
        path.write_text(write(parts), encoding="utf-8")
        command = [sys.executable, "-c", MEASURE, str(path), str(parts)]
        done = subprocess.run(command, capture_output=True, text=True, check=True)
        memory = int(done.stdout)
        size = path.stat().st_size
        say(f"{write.__name__}: {parts} parts, {size / 1e6:.1f} MB of text, peak {memory / 1e6:.0f} MB")
        assert memory <= (MOST_MEMORY if write is netlist_view else MOST_MEMORY + size)
