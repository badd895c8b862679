"""Roots of functions of one variable in many states at once."""

from __future__ import annotations

from collections.abc import Callable
from typing import Final

import numpy as np

from gibbsmin.arrays import FloatArray

_RELATIVE_RESOLUTION: Final = 4 * np.finfo(float).eps

Residual = Callable[..., FloatArray]
"""Of x (k,) and the indices (k,) of the states that are still open."""


def root_near(
    residual: Residual, start: FloatArray, step: float, limits: tuple[float, float]
) -> FloatArray:
    """Root of a rising function near ``start``, or the place of its jump; NaN for none."""
    # scipy.optimize takes a while to load, which a stage of given temperature need not wait for.
    from scipy.optimize.elementwise import bracket_root

    index = np.arange(start.size)
    lowest, highest = limits
    inside = np.clip(start, lowest + step, highest - step)
    bracket = bracket_root(
        residual, inside - step / 2, inside + step / 2, xmin=lowest, xmax=highest, args=(index,)
    )
    left, right = (np.where(bracket.success, end, np.nan) for end in bracket.bracket)
    return roots_between(residual, left, right)


def roots_between(residual: Residual, left: FloatArray, right: FloatArray) -> FloatArray:
    """Roots (..., B) between ends at which the residual of B states has different signs."""
    from scipy.optimize.elementwise import find_root

    index = np.broadcast_to(np.arange(left.shape[-1]), left.shape)
    root = find_root(
        residual,
        (left.ravel(), right.ravel()),
        args=(index.ravel(),),
        tolerances={"xatol": 0.0, "xrtol": _RELATIVE_RESOLUTION, "fatol": 0.0, "frtol": 0.0},
    )
    return np.where(np.isnan(left), np.nan, root.x.reshape(left.shape))
