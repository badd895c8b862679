"""Zeros of a smooth function along an axis, for many rows of states at once.

The function is known on a coarse grid.  Each change of sign holds a zero, which is closed in on;
where it keeps its sign but turns towards zero between neighbours, the turning point is searched,
and may give two more.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray, IntArray

Function = Callable[[FloatArray, IntArray], FloatArray]
"""Of positions (k,) on the axis and the rows (k,) they belong to; NaN where there is no answer."""

_RELATIVE = 1e-13


@dataclass(frozen=True)
class Crossings:
    """Zeros in order of row and position.

    Attributes
    ----------
    row : (Z,) which row each belongs to
    position : (Z,) on the axis
    rising : (Z,) whether the function is above zero beyond it
    unsolved : (m, n) grid points where the function has no value
    """

    row: IntArray
    position: FloatArray
    rising: BoolArray
    unsolved: BoolArray


def find_crossings(function: Function, grid: FloatArray, rows: int) -> Crossings:
    """Zeros between the grid's ends (n,), in each of m rows.

    Zeros nearer together than the grid are found only where the function turns between them.
    """
    places = np.tile(grid, rows)
    of_row = np.repeat(np.arange(rows), grid.size)
    values = function(places, of_row).reshape(rows, grid.size)
    left, right, row = _brackets(values, grid)
    turned = _turning_points(function, values, grid)
    left = np.concatenate([left, turned[0]])
    right = np.concatenate([right, turned[1]])
    row = np.concatenate([row, turned[2]])
    if row.size == 0:
        nothing = np.zeros(0)
        return Crossings(row, nothing, nothing.astype(bool), np.isnan(values))
    position = _closed_in(function, left, right, row)
    rising = function(right, row) > 0.0
    order = np.lexsort((position, row))
    kept = order[np.isfinite(position[order])]
    return Crossings(row[kept], position[kept], rising[kept], np.isnan(values))


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

    empty = np.zeros(0), np.zeros(0), np.zeros(0, dtype=np.int64)
    if grid.size < 3:
        return empty
    before, here, after = values[:, :-2], values[:, 1:-1], values[:, 2:]
    with np.errstate(invalid="ignore"):
        below = (before < 0.0) & (here < 0.0) & (after < 0.0) & (here > before) & (here > after)
        above = (before > 0.0) & (here > 0.0) & (after > 0.0) & (here < before) & (here < after)
    row, place = np.nonzero(below | above)
    if row.size == 0:
        return empty
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
) -> FloatArray:
    from scipy.optimize.elementwise import find_root

    found = find_root(
        function,
        (left, right),
        args=(row,),
        tolerances={"xatol": 0.0, "xrtol": _RELATIVE, "fatol": 0.0, "frtol": 0.0},
    )
    return np.where(found.success, found.x, np.nan)
