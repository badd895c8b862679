"""One-sided limits from the profile of chi-square.

The limit of a function g(x) at a stated confidence is its extreme over all x whose chi-square is
within c of the least: with a covariance Σ about the centre, over (x − x̂)ᵀ Σ⁻¹ (x − x̂) ≤ c.  The
extreme is where the gradient is along the normal, x = x̂ ± √c Σ∇g/√(∇gᵀΣ∇g), which is repeated until
it stands still.  It needs no normal distribution of g, and serves where a trace makes ln Q anything
but normal.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from gibbsmin.arrays import FloatArray

ONE_SIDED = 2.705543454095404
"""Rise of chi-square at a one-sided 95 % limit, 1.6449²."""

TWO_SIDED = 3.841458820694124
"""Rise of chi-square at each end of a two-sided 95 % interval, 1.9600²."""

_STEPS = 60
_STILL = 1e-10

Function = Callable[[FloatArray], tuple[FloatArray, FloatArray]]
"""x (B, n) to g (B,) and ∇g (B, n)."""


def extreme(
    function: Function,
    centre: FloatArray,
    covariance: FloatArray,
    rise: FloatArray,
    sense: FloatArray,
    start: FloatArray,
    lowest: FloatArray,
) -> FloatArray:
    """Largest g where ``sense`` (B,) is +1, least where it is −1.

    It is infinite where nothing settles or a bound is met, where g goes on without end.

    Parameters
    ----------
    centre, covariance
        x̂ (B, n), which need not meet the bounds, and Σ (B, n, n).
    rise
        c, (B,).
    start
        A point where g is defined, (B, n).
    lowest
        Bounds (B, n), above which x is kept while it moves.
    """
    x, held = start, np.zeros(len(start), dtype=bool)
    value = np.full(len(x), np.nan)
    still = np.zeros(len(x), dtype=bool)
    for _ in range(_STEPS):
        new, slope = function(x)
        still = np.abs(new - value) <= _STILL * (1.0 + np.abs(new))
        value = new
        if still.all():
            break
        along = np.einsum("bij,bj->bi", covariance, slope)
        length = np.sqrt(np.maximum(np.einsum("bi,bi->b", along, slope), 0.0))
        scale = np.where(length > 0.0, sense * np.sqrt(rise) / np.where(length > 0, length, 1), 0.0)
        x = centre + scale[:, np.newaxis] * along
        held = np.any(x <= lowest, axis=1)
        x = np.maximum(x, lowest)
    return np.where(still & ~held, value, sense * np.inf)
