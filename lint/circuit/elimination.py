"""Gaussian elimination of sparse equations: planned once, then run for all samples together.

The equations of a network have few terms each, and in every sample the same ones. So the order of
elimination and each of its operations are settled beforehand, and an operation runs over all samples: much
less work than for a general solver, which takes each matrix as full and for the first time.

The order follows H. M. Markowitz, "The elimination form of the inverse and its application to linear
programming", Management Science 3 (1957), pp. 255-269: first what leaves the equations sparse. It looks at no
numbers, so that in some sample a pivot may come out too small. So each sample is looked at afterwards: is it
sound, or is it a job for `linear.Stack`, which chooses its pivots by their size and knows the singular?
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from itertools import combinations
from typing import NamedTuple

import numpy as np

from .linear import Array, Flags, Place, grouping

# A sample is sound if its equations are fulfilled to within rounding, their terms are not vast beside what
# stands on the right, and no coefficient cancels out but for a small rest: that may be mere rounding, in an
# equation of a singular matrix that says what others say.
_ROUNDING = 1e-13
_MOST_GROWTH = 1e10
_LEAST_REST = 1e-5

# A thousand samples of all changes are kept for a look at them: a few megabytes.
_MOST_CHANGES = 300


class _Below(NamedTuple):
    """An equation that loses the pivot's unknown, whose coefficient there is at `factor`.

    pairs: each other coefficient that changes, and the one in the pivot's equation that it is due to
    """

    factor: int
    row: int
    pairs: list[tuple[int, int]]


class _Step(NamedTuple):
    """The coefficient at `pivot` stands in equation `row`, which is to tell the unknown `column`.

    beside: the other terms of this equation, unknown and coefficient
    """

    pivot: int
    row: int
    column: int
    below: list[_Below]
    beside: list[tuple[int, int]]


class Elimination:
    """An elimination ready for any number of samples.

    places:   row and column of each coefficient that may differ from zero
    fixed:    the numbers of those that are 1 or -1 in every sample: the best pivots
    unknowns: how many there are, and as many equations
    first:    how many of both come before the others
    tail:     the step from which on the determinant's sign is told

    Raises ValueError where the places leave no pivot for an unknown, and where the equations fill up so much
    that full matrices are less work.
    """

    def __init__(
        self, places: Sequence[Place], fixed: Iterable[int], unknowns: int, first: int, tail: int
    ) -> None:
        plan = _Plan(places, fixed, unknowns)
        plan.eliminate(range(first))
        plan.eliminate(range(first, unknowns))
        self._steps = plan.steps
        self._filled_in = [np.zeros(1)] * (plan.slots - len(places))
        self._columns = np.array([column for _, column in places], dtype=np.intp)
        self._row_sums = grouping([row for row, _ in places], unknowns)
        told_in = {step.column: step.row for step in plan.steps}
        self._told_in = [told_in[unknown] for unknown in range(unknowns)]
        # Back through the same steps, where an unknown stands on the right of the equation that tells it.
        self._back = [
            (step.pivot, step.row, [(slot, told_in[unknown]) for unknown, slot in step.beside])
            for step in reversed(plan.steps)
        ]
        self._tail = plan.steps[tail:]
        self._parity = _parity(self._tail)

    def solve(self, entries: Array, right: Array) -> tuple[Array, Array, Flags]:
        """Return the unknowns, the sign of the determinant, and which samples are sound.

        entries: the coefficients, shape (places, samples)
        right:   shape (unknowns, samples)
        The determinant is that of the equations that are left at the step `tail`. A sample that is not sound
        has no answer here.
        """
        with np.errstate(all="ignore"):  # a sample that overflows is not sound, that is all
            cells, told = [*entries, *self._filled_in], [*right]
            rests, changes = self._run(cells, told)
            answers = np.array([told[row] for row in self._told_in]).reshape(right.shape)
            sound = self._fulfilled(entries, right, answers)
            if changes:
                sound &= _all_left(np.array(rests), np.array(changes))
            sign = np.full(len(sound), self._parity)
            for step in self._tail:
                sign *= np.sign(cells[step.pivot])
        return answers, sign, sound

    def _fulfilled(self, entries: Array, right: Array, answers: Array) -> Flags:
        """Tell in which samples the equations are fulfilled, without vast terms that cancel out."""
        terms = entries * answers.take(self._columns, axis=0)
        sizes, amiss = self._row_sums @ np.abs(terms), self._row_sums @ terms - right
        vast = sizes.sum(axis=0) > _MOST_GROWTH * np.abs(right).sum(axis=0)
        return (np.abs(amiss) <= _ROUNDING * sizes).all(axis=0) & ~vast

    def _run(self, cells: list[Array], right: list[Array]) -> tuple[list[Array], list[Array]]:
        """Eliminate, and leave each unknown on the right, in the place of the equation that tells it.

        Return what each change of a coefficient has left of it, and the changes.
        """
        rests: list[Array] = []
        changes: list[Array] = []
        for pivot, row, _, below, _ in self._steps:
            for factor, other, pairs in below:
                share = cells[factor] / cells[pivot]
                for changed, due_to in pairs:
                    change = share * cells[due_to]
                    rest = cells[changed] = cells[changed] - change
                    rests.append(rest)
                    changes.append(change)
                right[other] = right[other] - share * right[row]
        for pivot, row, beside in self._back:
            told = right[row]
            for coefficient, other in beside:
                told = told - cells[coefficient] * right[other]
            right[row] = told / cells[pivot]
        return rests, changes


def _all_left(rests: Array, changes: Array) -> Flags:
    """Tell in which samples no coefficient all but cancels out; one that does exactly does no harm."""
    rests = np.abs(rests)
    return ((rests >= _LEAST_REST * np.abs(changes)) | (rests == 0.0)).all(axis=0)


class _Plan:
    """Goes through an elimination without any numbers, and notes its steps.

    slots: how many coefficients there are, those included that come up on the way
    """

    def __init__(self, places: Sequence[Place], fixed: Iterable[int], unknowns: int) -> None:
        self.steps: list[_Step] = []
        self.slots = len(places)
        self._fixed = set(fixed)
        self._changes = 0
        self._rows: list[dict[int, int]] = [{} for _ in range(unknowns)]
        self._columns: list[set[int]] = [set() for _ in range(unknowns)]
        for slot, (row, column) in enumerate(places):
            self._rows[row][column] = slot
            self._columns[column].add(row)

    def eliminate(self, stage: range) -> None:
        """Eliminate the unknowns of these numbers by means of the equations of these numbers."""
        waiting = list(stage)
        while waiting:
            column = min(waiting, key=lambda unknown: len(self._columns[unknown]))
            waiting.remove(column)
            rows = [row for row in self._columns[column] if row in stage]
            if not rows:
                raise ValueError(f"no equation is left for unknown {column}")
            self._take(min(rows, key=lambda row: self._cost(row, column)), column)

    def _cost(self, row: int, column: int) -> tuple[bool, bool, int]:
        """Return what speaks against a pivot: one that varies, or off the diagonal, may vanish."""
        terms = self._rows[row]
        return terms[column] not in self._fixed, row != column, len(terms)

    def _take(self, row: int, column: int) -> None:
        """Take the unknown out of all other equations by means of `row`."""
        own = self._rows[row]
        pivot = own.pop(column)
        self._columns[column].remove(row)
        for unknown in own:
            self._columns[unknown].remove(row)
        below = [
            _Below(self._rows[other].pop(column), other, self._changed(other, own))
            for other in self._columns[column]
        ]
        self.steps.append(_Step(pivot, row, column, below, list(own.items())))

    def _changed(self, other: int, own: dict[int, int]) -> list[tuple[int, int]]:
        """Return the coefficients of another row that the pivot's own row changes, and by which of its."""
        terms = self._rows[other]
        pairs: list[tuple[int, int]] = []
        for unknown, due_to in own.items():
            if unknown not in terms:
                terms[unknown] = self.slots
                self.slots += 1
                self._columns[unknown].add(other)
            self._fixed.discard(terms[unknown])
            pairs.append((terms[unknown], due_to))
        self._changes += len(pairs)
        if self._changes > _MOST_CHANGES:
            raise ValueError("the equations fill up")
        return pairs


def _parity(steps: Sequence[_Step]) -> float:
    """Return the sign of the permutation that the places of the pivots are."""
    ordered = sorted(steps, key=lambda step: step.column)
    return (-1.0) ** sum(one.row > other.row for one, other in combinations(ordered, 2))
