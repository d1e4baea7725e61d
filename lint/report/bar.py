"""The margin bar: minimum, nominal and maximum of one quantity, drawn to scale between its limits.

    ≥ 0 V                        ≤ 3.30 V
    ├───────────━━━━━━━●━━━━━━━━━━━━━━━━━┿━━━━
             1.20 V  2.10 V            3.62 V

A limit is a tick; a side without a limit has no tick. A value inside never shares the cell of a limit, and a
value outside always lies beyond it, however small the difference: the drawing may round, the answer may not.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import groupby
from math import log

from rich.cells import cell_len

from ..quantity import Spread, figure
from ..verdict import Limit
from .glyphs import Glyphs

# A run of text in one line and its style, in rich's words.
Piece = tuple[str, str]

# A text and the cell that it belongs under or over.
Label = tuple[int, str]

_SCALE = "dim"
_INSIDE = "green"

# Beyond this a value is drawn as infinite: differences of doubles must not overflow.
_HUGE = 1e100

_MOST_DIGITS = 7

# A zone between limits that are this far apart is drawn logarithmic.
_DECADES = 100.0


@dataclass(frozen=True, slots=True)
class _Zone:
    """A stretch of `cells` cells beginning with cell `first`, on which the values `start` to `end` lie.

    logarithmic: equal ratios take equal room; for a zone over decades
    """

    first: int
    cells: int
    start: float
    end: float
    logarithmic: bool = False

    def cell(self, value: float) -> int:
        """Return the cell of `value`; a value beyond the zone has the cell at its end."""
        if self.end <= self.start:
            return self.first + self.cells // 2
        if self.logarithmic:
            share = log(max(value, self.start) / self.start) / log(self.end / self.start)
        else:
            share = (value - self.start) / (self.end - self.start)
        share = max(0.0, min(1.0, share))
        return self.first + min(self.cells - 1, int(share * self.cells))


@dataclass(frozen=True, slots=True)
class Bar:
    """A quantity on its scale: the zone between the limits and, where something lies there, those beyond."""

    spread: Spread
    below: _Zone | None
    between: _Zone
    above: _Zone | None
    low: float | None
    high: float | None

    @property
    def low_tick(self) -> int | None:
        """Return the cell of the lower limit, None where there is no such limit."""
        return None if self.low is None else self.between.first - 1

    @property
    def high_tick(self) -> int | None:
        """Return the cell of the upper limit, None where there is no such limit."""
        return None if self.high is None else self.between.first + self.between.cells

    def cell(self, value: float) -> int:
        """Return the cell in which `value` lies."""
        if self.below is not None and value < self.below.end:
            return self.below.cell(value)
        if self.above is not None and value > self.above.start:
            return self.above.cell(value)
        return self.between.cell(value)

    def limits(self, glyphs: Glyphs) -> list[Label]:
        """Return the labels of the limits, such as `≤ 3.30 V`."""
        labels: list[Label] = []
        if self.low is not None and self.low_tick is not None:
            labels.append((self.low_tick, f"{glyphs.at_least} {self._figure(self.low)}"))
        if self.high is not None and self.high_tick is not None:
            labels.append((self.high_tick, f"{glyphs.at_most} {self._figure(self.high)}"))
        return labels

    def values(self) -> list[Label]:
        """Return the labels of minimum, nominal and maximum; figures that print alike appear once."""
        spread = self.spread
        labels: dict[str, int] = {}
        for value in (spread.nominal, spread.minimum, spread.maximum):
            labels.setdefault(self._figure(value), self.cell(value))
        return sorted((cell, text) for text, cell in labels.items())

    def draw(self, glyphs: Glyphs, outside: str) -> list[Piece]:
        """Return the bar as styled runs; what lies outside the limits has the style `outside`."""
        cells = self.between.cells + sum(zone.cells for zone in (self.below, self.above) if zone)
        cells += (self.low is not None) + (self.high is not None)
        drawn = [self._cell(index, cells - 1, glyphs, outside) for index in range(cells)]
        return [
            ("".join(glyph for glyph, _ in run), style)
            for style, run in groupby(drawn, key=lambda piece: piece[1])
        ]

    def _cell(self, index: int, last: int, glyphs: Glyphs, outside: str) -> Piece:
        spread = self.spread
        covered = self.cell(spread.minimum) <= index <= self.cell(spread.maximum)
        inside = self.between.first <= index < self.between.first + self.between.cells
        tick = {self.low_tick: glyphs.low, self.high_tick: glyphs.high}.get(index)
        if not covered:
            return (tick, "") if tick else (glyphs.inside if inside else glyphs.outside, _SCALE)
        style = _INSIDE if inside else outside
        if index == 0 and spread.minimum < self._left:
            return glyphs.less, style
        if index == last and spread.maximum > self._right:
            return glyphs.more, style
        if index == self.cell(spread.nominal):
            return glyphs.nominal, style
        return (glyphs.crossed if tick else glyphs.spread), style

    @property
    def _left(self) -> float:
        return (self.below or self.between).start

    @property
    def _right(self) -> float:
        return (self.above or self.between).end

    def _figure(self, value: float) -> str:
        """Return `value` with as many digits as it takes to tell it from a limit that it is not equal to."""
        spread = self.spread
        values = {spread.minimum, spread.nominal, spread.maximum}
        limits = {limit for limit in (self.low, self.high) if limit is not None}
        digits = 3
        while digits < _MOST_DIGITS and any(
            figure(one, spread.unit, digits) == figure(limit, spread.unit, digits)
            for limit in limits
            for one in values - {limit}
        ):
            digits += 1
        return figure(value, spread.unit, digits)


def bar(spread: Spread, limit: Limit, cells: int) -> Bar | None:
    """Return `spread` on a scale of `cells` cells (12 or more), or None where no limit can be drawn.

    A side without a limit reaches to the farthest value, and at least as far as the other limit is from zero.
    Beyond a limit the drawing reaches to the farthest value and at most three times as far as the zone
    between limits is wide, once where values lie beyond both: an absurd value leaves the limits legible.
    Where only one value is allowed, the zone is as wide as that value.
    """
    low, high = _drawable(limit.minimum), _drawable(limit.maximum)
    finite = [value for value in (spread.minimum, spread.nominal, spread.maximum) if abs(value) < _HUGE]
    largest = max((abs(value) for value in finite), default=0.0)
    if low is not None and high is not None:
        start, end = low, high
    elif high is not None:
        start, end = high - max(abs(high) or largest or 1.0, high - min(finite, default=high)), high
    elif low is not None:
        start, end = low, low + max(abs(low) or largest or 1.0, max(finite, default=low) - low)
    else:
        return None
    width = (end - start) or abs(end) or largest or 1.0
    too_low = low is not None and spread.minimum < low
    too_high = high is not None and spread.maximum > high
    reach = width if too_low and too_high else 3 * width
    left = max(start - reach, spread.minimum) if too_low else start
    right = min(end + reach, spread.maximum) if too_high else end
    shares = (start - left, width, right - end)
    before, _, after = (max(1, round(cells * share / sum(shares))) if share else 0 for share in shares)
    first = before + (low is not None)
    room = cells - first - after - (high is not None)
    return Bar(
        spread=spread,
        below=_Zone(0, before, left, start) if before else None,
        between=_Zone(first, room, start, end, low is not None and low > 0 and end / low >= _DECADES),
        above=_Zone(cells - after, after, end, right) if after else None,
        low=low,
        high=high,
    )


def _drawable(limit: float | None) -> float | None:
    return limit if limit is not None and abs(limit) < _HUGE else None


def label_line(labels: Sequence[Label], width: int, gap: int = 2) -> str:
    """Return one line of `labels`, centred on their cells; where two would collide the outer gives way."""
    sizes = [cell_len(text) for _, text in labels]
    starts = [cell - size // 2 for (cell, _), size in zip(labels, sizes, strict=True)]
    middle = len(labels) // 2
    for index in range(middle - 1, -1, -1):
        starts[index] = min(starts[index], starts[index + 1] - gap - sizes[index])
    _push_right(starts, sizes, gap)
    _push_left(starts, sizes, gap, width)
    line = ""
    for start, (_, text) in zip(starts, labels, strict=True):
        line += " " * (start - cell_len(line)) + text
    return line


def _push_right(starts: list[int], sizes: Sequence[int], gap: int) -> None:
    edge = 0
    for index, size in enumerate(sizes):
        starts[index] = max(edge, starts[index])
        edge = starts[index] + size + gap


def _push_left(starts: list[int], sizes: Sequence[int], gap: int, width: int) -> None:
    edge = width
    for index in range(len(sizes) - 1, -1, -1):
        starts[index] = max(0, min(starts[index], edge - sizes[index]))
        edge = starts[index] - gap
