"""Stacks of small linear systems: the ones without a single solution are told, never spoilt by rounding."""

from __future__ import annotations

from typing import TypeAlias

import numpy as np
from numpy.typing import NDArray

Array: TypeAlias = NDArray[np.float64]
Flags: TypeAlias = NDArray[np.bool_]

# From this growth of a right-hand side on a matrix counts as singular: hardly four digits would be left.
_MOST_GROWTH = 1e12

# Numbers that ought to be zero may be off by this share of the greatest one: rounding.
_ROUNDING = 1e-9

# Below this share of the greatest unknown a singular value decomposition leaves noise.
_NOISE = 1e-14


def solve_each(matrix: Array, right: Array, settled: Flags) -> Array:
    """Solve a stack of systems; one without a single solution gives NaN instead of spoiling the whole stack.

    matrix, right: shapes (unknowns, unknowns, samples) and (unknowns, samples)
    settled:       shape (unknowns,): False for an unknown that a solution may leave open
    A matrix that is singular but for rounding would give huge numbers without a word. So each is asked a
    second question, all ones, whose answer grows as the matrix nears the singular.
    """
    if not len(matrix):
        return np.zeros_like(right)
    rows = _scale(np.einsum("ijs,ijs->is", matrix, matrix))
    matrix = matrix / rows[:, None]
    columns = _scale(np.einsum("ijs,ijs->js", matrix, matrix))
    matrix = matrix / columns  # now siemens and ohms compare: every column has about the length 1
    questions = np.stack([right / rows, np.ones_like(right)], axis=1)
    stack = np.ascontiguousarray(np.moveaxis(matrix, -1, 0))
    return _solve_stack(stack, np.moveaxis(questions, -1, 0), settled).T / columns


def _solve_stack(matrix: Array, questions: Array, settled: Flags) -> Array:
    """Return the answers to the first of two questions, shapes (samples, unknowns, ...)."""
    try:
        answers: Array = np.asarray(np.linalg.solve(matrix, questions), dtype=np.float64)
        doubtful = np.einsum("si,si->s", answers[:, :, 1], answers[:, :, 1]) > _MOST_GROWTH**2
    except np.linalg.LinAlgError:  # an exactly singular one, which hides the answers of all others
        overflown = ~np.isfinite(np.einsum("sij->s", matrix))
        matrix[overflown], questions[overflown] = np.eye(matrix.shape[1]), np.nan
        singular = np.asarray(np.linalg.svd(matrix, compute_uv=False), dtype=np.float64)
        doubtful = np.any(_vanishing(singular), axis=1)
        answers = np.zeros_like(questions)
        answers[~doubtful] = np.linalg.solve(matrix[~doubtful], questions[~doubtful])
    answer = answers[:, :, 0]
    if doubtful.any():
        answer[doubtful] = _solve_singular(matrix[doubtful], questions[doubtful, :, 0], settled)
    return answer


def _scale(squares: Array) -> Array:
    """Return the powers of two nearest to the roots: scaling by them rounds nothing."""
    return np.ldexp(np.ones_like(squares), np.frexp(squares)[1] // 2)


def _vanishing(singular: Array) -> Flags:
    """Tell which singular values are zero but for rounding."""
    return singular * _MOST_GROWTH <= singular[:, :1]


def _solve_singular(matrix: Array, right: Array, settled: Flags) -> Array:
    """Solve a stack of systems some of which are singular, by singular value decomposition.

    Shorts in parallel, or equal sources, leave open how a current divides between them: then the division
    of least squares is taken, equal shares. NaN where the equations contradict each other (two rails
    shorted), and where an unknown that a solution must settle stays open.
    """
    left, singular, across = np.linalg.svd(matrix)
    null = _vanishing(singular)
    shares = np.einsum("sji,sj->si", left, right)
    contradicts = np.any(null & (np.abs(shares) > _ROUNDING * np.max(np.abs(right), axis=1)[:, None]), axis=1)
    stays_open = np.any(null[:, :, None] & settled & (np.abs(across) > _ROUNDING), axis=(1, 2))
    shares = np.where(null, 0.0, shares / np.where(null, 1.0, singular))
    answer = np.einsum("sji,sj->si", across, shares)
    answer[np.abs(answer) < _NOISE * np.max(np.abs(answer), axis=1)[:, None]] = 0.0
    answer[contradicts | stays_open] = np.nan
    return answer
