"""Zeros of a smooth function along an axis, for many rows of states at once.

The function is known on a coarse grid.  Each change of sign holds a zero, which is closed in on;
where it keeps its sign but turns towards zero between neighbours, the turning point is searched,
and may give two more.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray, IntArray

Function = Callable[[FloatArray, IntArray], FloatArray]
"""Of positions (k,) on the axis and the rows (k,) they belong to; NaN where there is no answer."""

_RELATIVE = 1e-13

_CLOSE = 1e-3
"""Share of an interval of the grid: within it the slope at the grid's ends is seen."""


@dataclass(frozen=True)
class Crossings:
    """Zeros in order of row and position.

    Attributes
    ----------
    row : (Z,) which row each belongs to
    position : (Z,) on the axis
    rising : (Z,) whether the function is above zero beyond it
    unsolved : (m, n) grid points where the function has no value
    lost_row : (L,) rows in which the sign changes, but no zero could be closed in on
    lost : (2, L) between which positions that is
    """

    row: IntArray
    position: FloatArray
    rising: BoolArray
    unsolved: BoolArray
    lost_row: IntArray
    lost: FloatArray


def find_crossings(function: Function, grid: FloatArray, rows: int) -> Crossings:
    """Zeros between the grid's ends (n,), in each of m rows.

    Zeros nearer together than the grid are found only where the function turns between them.
    """
    points = np.insert(grid, [1, grid.size - 1], _next_to_ends(grid))
    places = np.tile(points, rows)
    of_row = np.repeat(np.arange(rows), points.size)
    values = function(places, of_row).reshape(rows, points.size)
    unsolved = np.delete(np.isnan(values), [1, points.size - 2], axis=1)
    left, right, row = _brackets(values, points)
    turned = _turning_points(function, values, points)
    left = np.concatenate([left, turned[0]])
    right = np.concatenate([right, turned[1]])
    row = np.concatenate([row, turned[2]])
    if row.size == 0:
        none = np.zeros(0)
        return Crossings(row, none, none.astype(bool), unsolved, row, np.zeros((2, 0)))
    position, narrowed = _closed_in(function, left, right, row)
    rising = function(right, row) > 0.0
    order = np.lexsort((left, row))
    kept = order[np.isfinite(position[order])]
    lost = order[np.isnan(position[order])]
    return Crossings(
        row[kept], position[kept], rising[kept], unsolved, row[lost], narrowed[:, lost]
    )


def beside(grid: FloatArray, position: FloatArray, share: float) -> tuple[FloatArray, FloatArray]:
    """Positions a share of the axis below and above, less where the grid is closer, within it."""
    upper = np.clip(np.searchsorted(grid, position), 1, grid.size - 1)
    width = grid[upper] - grid[upper - 1]
    apart = np.minimum(share * (grid[-1] - grid[0]), _CLOSE * width)
    return np.maximum(position - apart, grid[0]), np.minimum(position + apart, grid[-1])


def _next_to_ends(grid: FloatArray) -> tuple[float, float]:
    """A point close to each end, where a function that turns in the outer intervals shows it."""
    return (
        float(grid[0] + _CLOSE * (grid[1] - grid[0])),
        float(grid[-1] - _CLOSE * (grid[-1] - grid[-2])),
    )


def _brackets(values: FloatArray, grid: FloatArray) -> tuple[FloatArray, FloatArray, IntArray]:
    """Neighbours between which the sign changes; zero counts as above."""
    with np.errstate(invalid="ignore"):
        above = np.where(np.isnan(values), np.nan, np.where(values >= 0.0, 1.0, -1.0))
        row, place = np.nonzero(above[:, :-1] * above[:, 1:] < 0.0)
    return grid[place], grid[place + 1], row


def _turning_points(
    function: Function, values: FloatArray, grid: FloatArray
) -> tuple[FloatArray, FloatArray, IntArray]:
    """Brackets on both sides of a turning point beyond zero that the grid steps over."""
    from scipy.optimize.elementwise import find_minimum

    before, here, after = values[:, :-2], values[:, 1:-1], values[:, 2:]
    with np.errstate(invalid="ignore"):
        below = (before < 0.0) & (here < 0.0) & (after < 0.0) & (here > before) & (here > after)
        above = (before > 0.0) & (here > 0.0) & (after > 0.0) & (here < before) & (here < after)
    row, place = np.nonzero(below | above)
    if row.size == 0:
        return np.zeros(0), np.zeros(0), row
    sign = np.where(above[row, place], 1.0, -1.0)
    ends = grid[place], grid[place + 1], grid[place + 2]

    def towards_zero(position: FloatArray, row: IntArray, sign: FloatArray) -> FloatArray:
        return sign * function(position, row)

    found = find_minimum(towards_zero, ends, args=(row, sign))
    with np.errstate(invalid="ignore"):
        beyond = found.f_x < 0.0
    turn, row = found.x[beyond], row[beyond]
    return (
        np.concatenate([ends[0][beyond], turn]),
        np.concatenate([turn, ends[2][beyond]]),
        np.concatenate([row, row]),
    )


def _closed_in(
    function: Function, left: FloatArray, right: FloatArray, row: IntArray
) -> tuple[FloatArray, FloatArray]:
    """Zeros (k,), NaN where there is none to be had, and the gap (2, k) left in that case."""
    position = _root(function, left, right, row)
    gaps = np.stack([left, right])
    lost = np.flatnonzero(np.isnan(position))
    if lost.size:
        left, right, row = left[lost], right[lost], row[lost]
        sides = [np.sign(function(end, row)) for end in (right, left)]
        # A missing value counts as beyond zero, then as before it: the edges of what is missing.
        gaps[:, lost] = [_root(_filled(function), left, right, row, side) for side in sides]
    return position, gaps


def _root(
    function: Callable[..., FloatArray], left: FloatArray, right: FloatArray, *arguments: Any
) -> FloatArray:
    from scipy.optimize.elementwise import find_root

    found = find_root(
        function,
        (left, right),
        args=arguments,
        tolerances={"xatol": 0.0, "xrtol": _RELATIVE, "fatol": 0.0, "frtol": 0.0},
    )
    return np.where(found.success, found.x, np.nan)


def _filled(function: Function) -> Callable[..., FloatArray]:
    """The function with a value of its own where it has none."""

    def filled(position: FloatArray, row: IntArray, missing: FloatArray) -> FloatArray:
        value = function(position, row)
        return np.where(np.isnan(value), missing, value)

    return filled
