"""The last correction: amounts that close every row of the balance to its own size."""

from __future__ import annotations

import numpy as np

from gibbsmin.arrays import FloatArray

_RESOLVED = 1e-5


def close_balance(matrix: FloatArray, supplies: FloatArray, amounts: FloatArray) -> FloatArray:
    """Smallest relative change of the amounts that closes A n = b, rows taken relatively.

    A row of traces carries the round-off of the large amounts that its species share with other
    rows; here it counts as much as they do.  Rows that nearly coincide are closed together, not
    in their difference, which is round-off: singular values below 1e-5 are left alone, so that a
    residual of 1e-16 changes no amount by more than 1e-11 of itself.
    """
    for _ in range(2):
        shares = matrix * amounts
        size = np.abs(shares).sum(axis=1) + np.abs(supplies)
        size = np.where(size > 0, size, 1.0)
        residual = (supplies - shares.sum(axis=1)) / size
        change = np.linalg.lstsq(shares / size[:, None], residual, rcond=_RESOLVED)[0]
        amounts = amounts * (1.0 + np.maximum(change, -0.5))
    return amounts
