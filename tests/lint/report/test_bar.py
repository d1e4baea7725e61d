from __future__ import annotations

from math import inf

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pwmlint.lint.quantity import Spread
from pwmlint.lint.report.bar import Bar, bar, label_line
from pwmlint.lint.report.glyphs import ASCII, BOX, Glyphs
from pwmlint.lint.verdict import Limit


def drawn(
    values: tuple[float, float, float], low: float | None, high: float | None, glyphs: Glyphs = BOX
) -> str:
    return "".join(text for text, _ in make(values, low, high).draw(glyphs, "red"))


def make(values: tuple[float, float, float], low: float | None, high: float | None, cells: int = 24) -> Bar:
    found = bar(Spread(*values, "V"), Limit(low, high, "V"), cells)
    assert found is not None
    return found


@pytest.mark.parametrize(
    ("values", "low", "high", "picture"),
    [
        # Inside, touching a limit, beyond it by a hair, across both.
        ((4, 5, 6), 0, 10, "├────────━━━●━━────────┤"),
        ((0, 0, 0), 0, 10, "├●─────────────────────┤"),
        ((10, 10, 10), 0, 10, "├─────────────────────●┤"),
        ((9, 9.5, 10.001), 0, 10, "├──────────────────━●━┿━"),
        ((-0.001, 5, 6), 0, 10, "━┿━━━━━━━━━━●━━────────┤"),
        ((-5, 5, 15), 0, 10, "━━━━━━┿━━━━━●━━━━┿━━━━━━"),
        # So far out that the drawing ends before it.
        ((-500, 5, 1500), 0, 10, "◀━━━━━━━┿━━━●━━┿━━━━━━━▶"),
        ((20, 30, 40), 0, 10, "├────┤╌╌╌╌╌╌━━━━━━●━━━━━"),
        # One side only: no tick where there is no limit.
        ((4, 5, 6), None, 10, "─────────━━●━━─────────┤"),
        ((4, 5, 6), None, 5.5, "───────────────━━━━●━┿━━"),
        ((-4, -3, -2), None, -1, "━━━━━━━●━━━━━━━━───────┤"),
        ((1, 5, 6), 2, None, "━━━━━┿━━━━━━━━━━━━━●━━━━"),
        ((0, 0, 0), 0, None, "├●──────────────────────"),
        # Without bound: a load that never trips.
        ((1, 5, inf), 2, None, "━━━━━━┿━━━━━━━━━━━━━━━━▶"),
        ((inf, inf, inf), 1, 10, "├────┤╌╌╌╌╌╌╌╌╌╌╌╌╌╌╌╌╌▶"),
        ((-inf, 0, inf), 1, 10, "◀━━━━━━●┿━━━━━━┿━━━━━━━▶"),
        # One value allowed.
        ((5, 5, 5), 5, 5, "├───────────●──────────┤"),
        ((4, 5, 6), 5, 5, "━━━┿━━━━━━━━●━━━━━━━┿━━━"),
        ((0, 0, 0), None, 0, "──────────────────────●┤"),
    ],
)
def test_pictures(
    values: tuple[float, float, float], low: float | None, high: float | None, picture: str
) -> None:
    assert drawn(values, low, high) == picture


def test_ascii_tells_the_same() -> None:
    assert drawn((-500, 5, 1500), 0, 10, ASCII) == "<=======|===o==|=======>"
    assert drawn((20, 30, 40), 0, 10, ASCII) == "|----|......======o====="
    assert drawn((4, 5, 6), 0, 10, ASCII) == "|--------===o==--------|"


def test_outside_has_its_own_colour() -> None:
    styles = {style: text for text, style in make((9, 9.5, 12), 0, 10).draw(BOX, "bold red")}
    assert set(styles) == {"", "dim", "green", "bold red"}
    assert styles["bold red"].startswith("┿")
    assert "●" in styles["green"]


def test_nothing_is_drawn_without_a_limit_that_can_be_drawn() -> None:
    assert bar(Spread(1, 2, 3, "V"), Limit(-inf, 1e200, "V"), 24) is None


def test_labels_of_limits_and_values() -> None:
    found = make((1.2, 2.1, 3.62), 0, 3.3)
    assert [text for _, text in found.limits(BOX)] == ["≥ 0 V", "≤ 3.30 V"]
    assert [text for _, text in found.limits(ASCII)] == [">= 0 V", "<= 3.30 V"]
    assert [text for _, text in found.values()] == ["1.20 V", "2.10 V", "3.62 V"]


def test_labels_have_the_digits_that_tell_a_value_from_its_limit() -> None:
    found = make((3.2, 3.25, 3.3001), None, 3.3)
    assert [text for _, text in found.values()] == ["3.2000 V", "3.2500 V", "3.3001 V"]
    assert [text for _, text in found.limits(BOX)] == ["≤ 3.3000 V"]


def test_figures_that_print_alike_appear_once() -> None:
    assert [text for _, text in make((2, 2, 2), 0, 3).values()] == ["2.00 V"]
    assert [text for _, text in make((2, 2.00001, 2.5), 0, 3).values()] == ["2.00 V", "2.50 V"]


@pytest.mark.parametrize(
    ("labels", "line"),
    [
        ([], ""),
        ([(0, "left")], "left"),
        ([(39, "right")], " " * 35 + "right"),
        ([(5, "abc"), (15, "def")], "    abc       def"),
        # Where two collide the outer one gives way, at an edge both do.
        ([(19, "1.00 V"), (20, "1.10 V"), (21, "1.20 V")], " " * 9 + "1.00 V  1.10 V  1.20 V"),
        ([(0, "1.00 V"), (1, "1.10 V")], "1.00 V  1.10 V"),
        ([(38, "1.00 V"), (39, "1.10 V")], " " * 26 + "1.00 V  1.10 V"),
    ],
)
def test_label_line(labels: list[tuple[int, str]], line: str) -> None:
    assert label_line(labels, 40) == line


VALUES = st.one_of(
    st.floats(-100, 100), st.floats(allow_nan=False), st.sampled_from([0.0, 1.0, 10.0, inf, -inf, 5e-324])
)


@settings(deadline=None, max_examples=300)
@given(
    st.tuples(VALUES, VALUES, VALUES).map(sorted),
    st.one_of(st.none(), st.floats(-1e99, 1e99)),
    st.one_of(st.none(), st.floats(-1e99, 1e99)),
    st.integers(12, 100),
)
def test_the_drawing_never_misleads(
    values: list[float], low: float | None, high: float | None, cells: int
) -> None:
    if low is not None and high is not None and low > high:
        low, high = high, low
    if low is None and high is None:
        high = 0.0
    found = make((values[0], values[1], values[2]), low, high, cells)
    for glyphs in (BOX, ASCII):
        assert len("".join(text for text, _ in found.draw(glyphs, "red"))) == cells
    for value in values:
        cell = found.cell(value)
        assert 0 <= cell < cells
        if found.low_tick is not None and low is not None:
            assert (cell < found.low_tick) == (value < low)
            assert cell != found.low_tick
        if found.high_tick is not None and high is not None:
            assert (cell > found.high_tick) == (value > high)
            assert cell != found.high_tick
    assert found.cell(values[0]) <= found.cell(values[1]) <= found.cell(values[2])
