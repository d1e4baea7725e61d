"""Measuring on a machine that others use: works take turns, the least time counts, a miss is repeated.

Others can only make a work take longer. So of several turns the quickest is the nearest to what the work
takes; work and yardstick take turns in the same run, so that a slow spell strikes both alike; and a ratio
that misses its bound is measured again before it counts as missed. The bound stays what it is.
"""

from __future__ import annotations

import math
import sys
import time
from collections.abc import Callable, Generator, Sequence
from contextlib import contextmanager


def least_times(
    works: Sequence[Callable[[], object]], rounds: int, clock: Callable[[], float] = time.perf_counter
) -> list[float]:
    """Return the least time that each work took, in the unit of the clock, of as many rounds of turns.

    clock: `time.process_time` leaves out what other processes take from a work that lasts long
    """
    least = [math.inf] * len(works)
    with untraced():
        for _ in range(rounds):
            for number, work in enumerate(works):
                start = clock()
                result = work()
                least[number] = min(least[number], clock() - start)
                del result  # giving back the memory is no part of the next work's time
    return least


@contextmanager
def untraced() -> Generator[None, None, None]:
    """Let nobody trace what runs: counting the lines of our code would slow it down, and no library's."""
    tracing = sys.gettrace()
    sys.settrace(None)
    try:
        yield
    finally:
        sys.settrace(tracing)


def best_attempt(
    measure: Callable[[], float], bound: float, attempts: int = 3, *, name: str = "attempts"
) -> float:
    """Measure until the bound is kept, at most `attempts` times; print them all, and return the least."""
    taken: list[float] = []
    while len(taken) < attempts and not (taken and taken[-1] <= bound):
        taken.append(measure())
    print(f"\n{name}: {', '.join(f'{value:.2f}' for value in taken)} (bound {bound:g})")
    return min(taken)
