"""Stacks of small linear systems: the ones without a single solution are told, never spoilt by rounding."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TypeAlias

import numpy as np
from numpy.typing import NDArray

Array: TypeAlias = NDArray[np.float64]
Flags: TypeAlias = NDArray[np.bool_]

# Row and column of a coefficient.
Place: TypeAlias = tuple[int, int]

# From this growth of a right-hand side on a matrix counts as singular: hardly four digits would be left.
_MOST_GROWTH = 1e12

# Numbers that ought to be zero may be off by this share of the greatest one: rounding.
_ROUNDING = 1e-9

# Below this share of the greatest unknown a singular value decomposition leaves noise.
_NOISE = 1e-14


class Stack:
    """Systems of equations with one matrix each, scaled so that siemens and ohms compare.

    Shapes: matrix (unknowns, unknowns, systems), questions and answers (unknowns, questions, systems).
    """

    def __init__(self, matrix: Array) -> None:
        self._rows = _scale(np.einsum("ijs,ijs->is", matrix, matrix))
        matrix = matrix / self._rows[:, None]
        self._columns = _scale(np.einsum("ijs,ijs->js", matrix, matrix))
        # Now every column has about the length 1.
        self._matrix = np.moveaxis(matrix / self._columns, -1, 0)

    def solve(self, questions: Array) -> tuple[Array, Flags]:
        """Return the answers, and which systems have none or cannot be trusted: see `solve_singular`.

        A matrix that is singular but for rounding would give huge numbers without a word. So each is asked
        one question more, all ones, whose answer grows as the matrix nears the singular.
        """
        ones = np.ones_like(questions[:, :1])
        stack = np.moveaxis(np.concatenate([questions / self._rows[:, None], ones], axis=1), -1, 0)
        try:
            answers: Array = np.asarray(np.linalg.solve(self._matrix, stack), dtype=np.float64)
        except np.linalg.LinAlgError:  # an exactly singular one, which hides the answers of all others
            singular = np.asarray(np.linalg.slogdet(self._matrix)[0] == 0, dtype=np.bool_)
            regular = np.where(singular[:, None, None], np.eye(len(self._rows)), self._matrix)
            answers = np.asarray(np.linalg.solve(regular, stack), dtype=np.float64)
            answers[singular] = np.nan
        growth = np.einsum("si,si->s", answers[:, :, -1], answers[:, :, -1])
        doubtful = ~(growth <= _MOST_GROWTH**2)
        return np.moveaxis(answers[:, :, :-1], 0, -1) / self._columns[:, None], doubtful

    def solve_singular(self, systems: Flags, questions: Array, settled: Flags) -> Array:
        """Return the answers of systems that may be singular, by singular value decomposition.

        systems: which ones are asked; the last axis of `questions` has as many
        settled: shape (unknowns,): False for an unknown that a solution may leave open
        Shorts in parallel, or equal sources, leave open how a current divides between them: then the
        division of least squares is taken, equal shares. NaN where the equations contradict each other
        (two rails shorted), and where an unknown that a solution must settle stays open.
        """
        matrix = self._matrix[systems]
        right = np.moveaxis(questions / self._rows[:, None, systems], -1, 0)
        broken = ~np.isfinite(matrix).all(axis=(1, 2)) | ~np.isfinite(right).all(axis=(1, 2))
        matrix, right = matrix.copy(), right.copy()
        matrix[broken], right[broken] = 0.0, 1.0  # a number that overflowed: a contradiction
        left, singular, across = np.linalg.svd(matrix)
        null = singular * _MOST_GROWTH <= singular[:, :1]
        shares = np.einsum("sji,sjq->siq", left, right)
        most = np.max(np.abs(right), axis=1, keepdims=True)
        contradicts = np.any(null[:, :, None] & (np.abs(shares) > _ROUNDING * most), axis=1)
        stays_open = np.any(null[:, :, None] & settled & (np.abs(across) > _ROUNDING), axis=(1, 2))
        shares = np.where(null[:, :, None], 0.0, shares / np.where(null, 1.0, singular)[:, :, None])
        answers = np.einsum("sji,sjq->siq", across, shares)
        answers[np.abs(answers) < _NOISE * np.max(np.abs(answers), axis=1, keepdims=True)] = 0.0
        answers[stays_open] = np.nan
        np.moveaxis(answers, 1, 2)[contradicts] = np.nan
        return np.moveaxis(answers, 0, -1) / self._columns[:, None, systems]


def grouping(groups: Sequence[int], count: int) -> Array:
    """Return the matrix that sums up what is of one group, a row for each group."""
    matrix = np.zeros((count, len(groups)))
    matrix[groups, np.arange(len(groups))] = 1.0
    return matrix


def orientation(matrix: Array) -> Array:
    """Return the sign of each matrix's determinant, 0 for one that is exactly singular or not a number.

    matrix: shape (unknowns, unknowns, systems)
    """
    finite = np.where(np.isfinite(matrix).all(axis=(0, 1)), matrix, 0.0)
    if len(matrix) == 1:
        return np.sign(finite[0, 0])
    return np.asarray(np.linalg.slogdet(np.moveaxis(finite, -1, 0))[0], dtype=np.float64)


def _scale(squares: Array) -> Array:
    """Return the powers of two nearest to the roots: scaling by them rounds nothing."""
    return np.ldexp(np.ones_like(squares), np.frexp(squares)[1] // 2)
