"""Least squares with x ≥ 0: minimise |C x − d|² subject to E x = e, for a batch of samples.

Sets of unknowns at zero are tried, all samples of one set together; an answer counts when no
unknown is negative and the multipliers of the set prove it optimal.  What does not settle so goes
to a quadratic programme.
"""

from __future__ import annotations

from typing import Any

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray

NEGATIVE = 1e-13
"""Unknowns below minus this break their bound."""

_ROUNDS = 25
_ROUNDING = 1e-9
_RANK = 1e-12
_PROVED, _STUCK = -1, -2


def bounded(
    matrix: FloatArray,
    constants: FloatArray,
    rows: FloatArray,
    right: FloatArray,
    start: FloatArray,
) -> FloatArray:
    """x (B, n) ≥ 0 of least squares.

    Parameters
    ----------
    matrix, constants
        E (m, n) and e (m,).
    rows, right
        C (B, M, n) and d (B, M).
    start
        The answers without bounds, or those of a neighbouring problem, (B, n); what is not
        positive in them is held at zero first.
    """
    x = np.empty_like(start)
    held = start <= 0.0
    unsettled = np.arange(len(start))
    stuck: list[int] = []
    for _ in range(_ROUNDS):
        if unsettled.size == 0:
            break
        x[unsettled], worst = _on_faces(
            matrix, constants, rows[unsettled], right[unsettled], held[unsettled]
        )
        stuck += unsettled[worst == _STUCK].tolist()
        unsettled, worst = unsettled[worst >= 0], worst[worst >= 0]
        held[unsettled, worst] = ~held[unsettled, worst]
    for state in [*stuck, *unsettled.tolist()]:
        x[state] = _quadratic_programme(matrix, constants, rows[state], right[state])
    return np.maximum(x, 0.0)


def _on_faces(
    matrix: FloatArray, constants: FloatArray, rows: FloatArray, right: FloatArray, held: BoolArray
) -> tuple[FloatArray, FloatArray]:
    """Answers with the held unknowns at zero, and for each the unknown to hold or release next.

    That is the most negative one, else the held one that pulls hardest away from its bound.  Where
    there is neither the answer is proved; where the equations do not hold the set is no way on.
    """
    x = np.zeros(held.shape)
    worst = np.full(len(held), _PROVED)
    patterns, places = np.unique(held, axis=0, return_inverse=True)
    for k, pattern in enumerate(patterns):
        states = np.flatnonzero(places.reshape(-1) == k)
        C, d = rows[states], right[states]
        x[states] = _on_face(matrix, constants, C, d, pattern)
        pull = _multipliers(matrix, C, d, x[states], pattern)
        short = np.where(x[states] < -NEGATIVE, x[states], 0.0)
        score = np.where(short.min(axis=1, keepdims=True) < 0.0, short, pull)
        missed = np.abs(x[states] @ matrix.T - constants).max(axis=1, initial=0.0)
        worst[states] = np.where(score.min(axis=1) < 0.0, score.argmin(axis=1), _PROVED)
        worst[states[missed > _ROUNDING * (1.0 + np.abs(constants).max())]] = _STUCK
    return x, worst


def _on_face(
    matrix: FloatArray, constants: FloatArray, rows: FloatArray, right: FloatArray, held: BoolArray
) -> FloatArray:
    """Least squares with some unknowns at zero, (B, n)."""
    kept = np.flatnonzero(~held)
    _, sizes, vectors = np.linalg.svd(matrix[:, kept])
    rank = int(np.count_nonzero(sizes > _RANK * sizes.max(initial=0.0)))
    point = np.linalg.lstsq(matrix[:, kept], constants, rcond=_RANK)[0]
    Z = vectors[rank:].T
    misses = right - rows[:, :, kept] @ point
    steps = np.linalg.pinv(rows[:, :, kept] @ Z, rcond=_RANK) @ misses[..., np.newaxis]
    x = np.zeros((len(rows), matrix.shape[1]))
    x[:, kept] = point + steps[..., 0] @ Z.T
    return x


def _multipliers(
    matrix: FloatArray, rows: FloatArray, right: FloatArray, x: FloatArray, held: BoolArray
) -> FloatArray:
    """(B, n) μ of the held unknowns, Cᵀ(C x − d) = Eᵀν + μ; optimal where none is negative."""
    misses = np.einsum("bmn,bn->bm", rows, x) - right
    slopes = np.einsum("bmn,bm->bn", rows, misses)
    rounding = _ROUNDING * np.abs(rows * misses[..., np.newaxis]).sum(axis=1).max(axis=1)
    normals = np.vstack([matrix, np.eye(len(held))[held]])
    found = np.linalg.lstsq(normals.T, slopes.T, rcond=_RANK)[0].T
    pull = np.zeros(x.shape)
    pull[:, held] = found[:, len(matrix) :]
    return np.where(np.abs(pull) <= rounding[:, np.newaxis], 0.0, pull)


def _quadratic_programme(
    matrix: FloatArray, constants: FloatArray, rows: FloatArray, right: FloatArray
) -> FloatArray:
    import cvxpy

    cp: Any = cvxpy  # its functions carry no types
    x = cp.Variable(matrix.shape[1])
    problem = cp.Problem(
        cp.Minimize(cp.sum_squares(rows @ x - right)), [matrix @ x == constants, x >= 0]
    )
    problem.solve(solver=cp.CLARABEL)
    return np.asarray(x.value, dtype=float)
