"""Speed and memory of reading SPICE-style lists, against splitting the same text into words, in one run.

The yardstick is `[line.split() for line in text.splitlines()]`. Ratios are printed with `pytest -s`.
"""

from __future__ import annotations

import math
import random
import time
import tracemalloc
from collections.abc import Callable
from functools import partial

from pwmlint.grammar.netlist import Netlist
from pwmlint.grammar.spice import read_spice

from .turns import best_attempt, least_times

SIZES = (1_000, 10_000, 100_000)
LIMIT = 25
"""Times the yardstick; the record to chase is 10."""

EXPONENT = 1.05
MEMORY = 400e6
"""Bytes for a list of 100 000 parts."""


def plain(count: int) -> str:
    """Return a list of `count` plain element lines, on nets of their neighbours, on ground or a supply."""
    source = random.Random(494)
    lines = ["orchard"]
    for number in range(count):
        a, b = (f"n{(number + source.randrange(20)) // 2}" for _ in range(2))
        if source.random() < 0.3:
            b = source.choice(("0", "vcc"))
        kind = source.choices("RCDQ", weights=(5, 3, 1, 1))[0]
        rest = {"R": f"{source.randrange(1, 999)}k", "C": "100n", "D": "1N4148", "Q": "0 BC547"}[kind]
        lines.append(f"{kind}{number} {a} {b} {rest}")
    return "\n".join(lines) + "\n"


def exponent(small: float, large: float) -> float:
    """Return the power of the size with which a cost grows from 1k to 100k parts."""
    return math.log(large / small) / math.log(SIZES[-1] / SIZES[0])


def read_often(text: str, count: int) -> list[Netlist]:
    return [read_spice(text, "bench.cir") for _ in range(count)]


def shown(costs: list[float], unit: str, scale: float) -> str:
    """Return the cost of one part for each size, and the exponent of growth."""
    each = [f"{cost / size * scale:.2f} at {size}" for cost, size in zip(costs, SIZES, strict=True)]
    return f"{unit} a part: {', '.join(each)}; exponent {exponent(costs[0], costs[-1]):.3f}"


def test_reading_takes_at_most_25_times_splitting() -> None:
    text = plain(SIZES[-1])
    netlist = read_spice(text, "bench.cir")
    works: list[Callable[[], object]] = [
        lambda: [line.split() for line in text.splitlines()],
        lambda: read_spice(text, "bench.cir"),
        lambda: [list(part.pins) for part in netlist.parts.values()],
    ]

    def measure() -> float:
        yardstick, reading, pins = least_times(works, 3, time.process_time)
        print(f"\nseeking the place of every pin afterwards, over splitting: {pins / yardstick:.1f}")
        return reading / yardstick

    name = f"reading over splitting, {SIZES[-1]} parts"
    assert best_attempt(measure, LIMIT, name=name) <= LIMIT


def test_time_grows_with_the_list_alone() -> None:
    # As many parts are read and kept for each size: a small list read over and over again would find its
    # memory allotted and in the processor's cache, and show the machine's growth instead of the reader's.
    counts = [SIZES[-1] // size for size in SIZES]
    works = [partial(read_often, plain(size), count) for size, count in zip(SIZES, counts, strict=True)]

    def measure() -> float:
        least = least_times(works, 4, time.process_time)
        taken = [cost / count for cost, count in zip(least, counts, strict=True)]
        print("\n" + shown(taken, "microseconds", 1e6))
        return exponent(taken[0], taken[-1])

    assert best_attempt(measure, EXPONENT, name="power of the parts") <= EXPONENT


def test_memory_grows_with_the_list_alone() -> None:
    peaks: list[float] = []
    for size in SIZES:
        text = plain(size)
        tracemalloc.start()
        netlist = read_spice(text, "bench.cir")
        peaks.append(tracemalloc.get_traced_memory()[1])
        tracemalloc.stop()
        assert len(netlist.parts) == size
    print("\n" + shown(peaks, "bytes", 1))
    assert exponent(peaks[0], peaks[-1]) <= EXPONENT
    assert peaks[-1] <= MEMORY
