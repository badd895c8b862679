"""Closes measurements on linear balances by least squares: arrays only, for a batch of samples.

Unknowns x ≥ 0 obey E x = e.  A measurement s with standard uncertainty u is of a ratio of two
linear forms of them, p·x / q·x, so that fractions of a gas, a gas normalised to 100 % and ratios
of flows are one kind.  With r° = p·x°/q·x° of the solution before, its residual is

    (r − s)/u = (p − r° q)·x / (q·x° u) + (r° − s)/u,

and the solution is repeated until r° stands still, which is the least-squares answer.

With Z the null space of E and C the measured rows over u, the degrees of freedom are
M − rank(C Z), the redundancies r_j = [I − H]_jj with H the projector on the range of C Z, and the
standardised adjustments z_j = residual_j/√r_j: leaving measurement j out lowers chi-square by
exactly z_j² (Crowe, Garcia Campos and Hrymak, AIChE J. 29 (1983) 881; Mah and Tamhane, AIChE J.
28 (1982) 828).  A pseudo-inverse serves throughout, so that what nothing determines is told apart.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray, IntArray
from gibbsmin.sample.bounds import NEGATIVE, bounded

_RANK = 1e-12
_STEPS = 20
_STILL = 1e-12
_SCALE_STILL = 1e-9
"""Scales q·x only weigh the residuals, so that they need not be as exact as the ratios."""

_ZERO = 1e-9
"""Shares below this are round-off: of an unknown in a direction, of an error in a residual."""


@dataclass(frozen=True, eq=False)
class Equations:
    """What a batch of samples has in common.

    Attributes
    ----------
    matrix, constants : E (m, n) and e (m,) of the balances
    above, below : p and q of each measurement, (M, n)
    """

    matrix: FloatArray
    constants: FloatArray
    above: FloatArray
    below: FloatArray


@dataclass(frozen=True, eq=False)
class Reconciliation:
    """B samples closed on their balances.

    Attributes
    ----------
    unknowns : (B, n) x ≥ 0 of least squares
    free_unknowns : (B, n) the same without the bounds, which the covariance belongs to
    covariance : (B, n, n) of what is determined
    determined : (B, n) whether the measurements determine the unknown
    bounded : (B,) whether a bound is active
    chi_square, free_chi_square : (B,) with the bounds and without them
    degrees_of_freedom : (B,)
    residuals : (B, M) fitted less measured, over u; NaN where not measured
    redundancy : (B, M) from 0 to 1; NaN where not measured
    correlation : (B, M, M) of the standardised adjustments; 0 where one is not judged
    solved : (B,) False where the solution did not come to rest
    """

    unknowns: FloatArray
    free_unknowns: FloatArray
    covariance: FloatArray
    determined: BoolArray
    bounded: BoolArray
    chi_square: FloatArray
    free_chi_square: FloatArray
    degrees_of_freedom: IntArray
    residuals: FloatArray
    redundancy: FloatArray
    correlation: FloatArray
    solved: BoolArray

    @property
    def can_be_judged(self) -> BoolArray:
        """(B, M) whether anything else tells about the measurement."""
        return np.nan_to_num(self.redundancy) > _ZERO

    @property
    def adjustments(self) -> FloatArray:
        """(B, M) standardised, residual/√r; NaN where not judged."""
        judged = self.can_be_judged
        root = np.sqrt(np.where(judged, self.redundancy, 1.0))
        return np.where(judged, self.residuals / root, np.nan)


def reconcile(
    equations: Equations, values: FloatArray, uncertainties: FloatArray
) -> Reconciliation:
    """Least squares of B samples.

    Parameters
    ----------
    values, uncertainties
        s and u, shape (B, M); NaN where a sample lacks a measurement.
    """
    plane = _plane(equations.matrix, equations.constants)
    measured = np.isfinite(values) & np.isfinite(uncertainties)
    readings = _Readings(
        np.where(measured, values, 0.0),
        np.where(measured, 1.0 / np.where(measured, uncertainties, 1.0), 0.0),
    )

    def without_bounds(rows: FloatArray, right: FloatArray, _: FloatArray) -> FloatArray:
        return _least_squares(plane, rows, right).unknowns

    def with_bounds(rows: FloatArray, right: FloatArray, start: FloatArray) -> FloatArray:
        return bounded(equations.matrix, equations.constants, rows, right, start)

    start = np.zeros((len(values), equations.matrix.shape[1]))
    free, rows, right, still = _at_rest(equations, readings, without_bounds, start)
    answer = _least_squares(plane, rows, right)
    x = np.maximum(free, 0.0)
    over = np.flatnonzero((free < -NEGATIVE).any(axis=1))
    chi_square = _squares(answer.unknowns, rows, right)
    if over.size:
        x[over], rows_over, right_over, still[over] = _at_rest(
            equations, readings.subset(over), with_bounds, free[over]
        )
        chi_square[over] = _squares(x[over], rows_over, right_over)
    return _told(plane, answer, x, chi_square, rows, right, measured, still, over)


@dataclass(frozen=True, eq=False)
class _Readings:
    """s and 1/u, each (B, M); 0 where not measured."""

    values: FloatArray
    weights: FloatArray

    def subset(self, states: IntArray) -> _Readings:
        return _Readings(self.values[states], self.weights[states])


def _at_rest(
    equations: Equations,
    readings: _Readings,
    solve: Callable[[FloatArray, FloatArray, FloatArray], FloatArray],
    start: FloatArray,
) -> tuple[FloatArray, FloatArray, FloatArray, BoolArray]:
    """Repeat the linear solution until the ratios stand still: x, C, d and whether they do."""
    s, weights = readings.values, readings.weights
    ratio, scale, x = s, np.ones_like(s), start
    for _ in range(_STEPS):
        rows = equations.above - ratio[..., np.newaxis] * equations.below
        rows = rows * (weights / scale)[..., np.newaxis]
        right = (s - ratio) * weights
        x = solve(rows, right, x)
        whole = _positive(x @ equations.below.T)
        new = x @ equations.above.T / whole
        moved = np.abs(new - ratio) * weights > _STILL * (1.0 + np.abs(s) * weights)
        moved |= (np.abs(whole - scale) > _SCALE_STILL * scale) & (weights > 0.0)
        still, ratio, scale = np.asarray(~moved.any(axis=1)), new, whole
        if still.all():
            break
    return x, rows, right, still


@dataclass(frozen=True, eq=False)
class _Plane:
    """All x with E x = e: a point and the directions (n, d) of the null space of E."""

    point: FloatArray
    directions: FloatArray


@dataclass(frozen=True, eq=False)
class _Answer:
    """Least squares without bounds, with U, 1/S and Vᵀ of C Z = U S Vᵀ of each sample."""

    unknowns: FloatArray
    left: FloatArray
    inverse: FloatArray
    right: FloatArray
    kept: BoolArray


def _plane(matrix: FloatArray, constants: FloatArray) -> _Plane:
    _, sizes, vectors = np.linalg.svd(matrix)
    rank = int(np.count_nonzero(sizes > _RANK * sizes[0]))
    point = np.linalg.lstsq(matrix, constants, rcond=_RANK)[0]
    return _Plane(np.asarray(point, dtype=float), vectors[rank:].T)


def _least_squares(plane: _Plane, rows: FloatArray, right: FloatArray) -> _Answer:
    U, sizes, Vt = np.linalg.svd(rows @ plane.directions, full_matrices=False)
    kept = sizes > _RANK * sizes[:, :1]
    inverse = np.where(kept, 1.0 / np.where(kept, sizes, 1.0), 0.0)
    misses = right - rows @ plane.point
    steps = inverse * np.einsum("bmk,bm->bk", U, misses)
    x = plane.point + np.einsum("bkd,bk->bd", Vt, steps) @ plane.directions.T
    return _Answer(x, U * kept[:, np.newaxis], inverse, Vt, kept)


def _told(
    plane: _Plane,
    free: _Answer,
    x: FloatArray,
    chi_square: FloatArray,
    rows: FloatArray,
    right: FloatArray,
    measured: BoolArray,
    still: BoolArray,
    over: IntArray,
) -> Reconciliation:
    """Covariance, redundancy and chi-square that come with the solution."""
    root = (plane.directions @ free.right.swapaxes(1, 2)) * free.inverse[:, np.newaxis]
    residuals = np.einsum("bmn,bn->bm", rows, free.unknowns) - right
    projector = np.eye(measured.shape[1]) - free.left @ free.left.swapaxes(1, 2)
    redundancy = np.clip(np.diagonal(projector, axis1=1, axis2=2), 0.0, 1.0)
    judged = measured & (redundancy > _ZERO)
    scale = np.where(judged, 1.0 / np.sqrt(np.where(judged, redundancy, 1.0)), 0.0)
    on_bound = np.zeros(len(x), dtype=bool)
    on_bound[over] = True
    return Reconciliation(
        unknowns=x,
        free_unknowns=free.unknowns,
        covariance=root @ root.swapaxes(1, 2),
        determined=_determined(plane, free),
        bounded=on_bound,
        chi_square=chi_square,
        free_chi_square=(residuals**2).sum(axis=1),
        degrees_of_freedom=measured.sum(axis=1) - free.kept.sum(axis=1),
        residuals=np.where(measured, residuals, np.nan),
        redundancy=np.where(measured, redundancy, np.nan),
        correlation=projector * scale[:, :, np.newaxis] * scale[:, np.newaxis],
        solved=still,
    )


def _determined(plane: _Plane, free: _Answer) -> BoolArray:
    """Unknowns without a part in any direction that leaves all measurements alone."""
    fixed = free.right.swapaxes(1, 2) * free.kept[:, np.newaxis]
    loose = np.eye(plane.directions.shape[1]) - fixed @ fixed.swapaxes(1, 2)
    moves = np.abs(plane.directions @ loose).max(axis=2, initial=0.0)
    return np.asarray(moves <= _ZERO)


def _squares(x: FloatArray, rows: FloatArray, right: FloatArray) -> FloatArray:
    residuals = np.einsum("bmn,bn->bm", rows, x) - right
    return np.asarray((residuals**2).sum(axis=1))


def _positive(values: FloatArray) -> FloatArray:
    return np.where(values > 0.0, values, 1.0)
