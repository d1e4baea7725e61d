"""The measuring itself: what counts, and when it is done again."""

from __future__ import annotations

import sys
from types import FrameType

import pytest

from .turns import best_attempt, least_times


def test_works_take_turns_and_the_least_time_of_each_counts():
    turns: list[str] = []
    ticks = iter([0, 3, 10, 14, 20, 21, 30, 39])
    works = (lambda: turns.append("work"), lambda: turns.append("yardstick"))
    assert least_times(works, 2, lambda: next(ticks)) == [1, 4]
    assert turns == ["work", "yardstick"] * 2


@pytest.mark.parametrize(
    ("values", "best", "printed"),
    [
        ([2.0, 9.0], 2.0, "spread: 2.00 (bound 3)"),
        ([4.0, 3.0, 9.0], 3.0, "spread: 4.00, 3.00 (bound 3)"),
        ([5.0, 4.0, 6.0, 1.0], 4.0, "spread: 5.00, 4.00, 6.00 (bound 3)"),
    ],
)
def test_a_miss_is_measured_again(
    values: list[float], best: float, printed: str, capsys: pytest.CaptureFixture[str]
):
    measured = iter(values)
    assert best_attempt(lambda: next(measured), 3, name="spread") == best
    assert capsys.readouterr().out.strip() == printed


def test_nothing_is_traced_while_it_is_measured() -> None:
    seen: list[object] = []
    before = sys.gettrace()

    def trace(frame: FrameType, event: str, argument: object) -> None:
        del frame, event, argument

    sys.settrace(trace)
    try:
        least_times([lambda: seen.append(sys.gettrace())], 2)
        assert sys.gettrace() is trace
    finally:
        sys.settrace(before)
    assert seen == [None, None]
