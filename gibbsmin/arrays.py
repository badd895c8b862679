"""Array types used throughout: double precision, booleans and indices."""

from typing import TypeAlias

import numpy as np
import numpy.typing as npt

FloatArray: TypeAlias = npt.NDArray[np.float64]
BoolArray: TypeAlias = npt.NDArray[np.bool_]
IntArray: TypeAlias = npt.NDArray[np.int64]


def shared(values: npt.ArrayLike) -> FloatArray:
    """One value in place of an array that only repeats it (strides of 0), to be used once."""
    array = np.asarray(values, dtype=float)
    return np.asarray(array[0]) if array.ndim and not any(array.strides) else array
