"""The kernel's exponential against the library's, in both forms."""

from __future__ import annotations

import numpy as np
from numba import njit

from gibbsmin.minimise.compiling import OPTIONS
from gibbsmin.minimise.kernel.exponential import exponentials
from gibbsmin.minimise.kernel.storage import Point


def point_of(exponent: np.ndarray) -> Point:
    nothing, power = np.zeros(1), np.zeros(exponent.size)
    fraction = np.zeros(exponent.size)
    return Point(nothing, exponent, fraction, nothing, fraction, power, power.view(np.int64))


def test_both_forms_give_the_exponential() -> None:
    exponent = np.concatenate(
        [np.linspace(-699.0, 299.0, 5001), np.linspace(-1.0, 1.0, 1001), [0.0, -1e-17, 1e-300]]
    )
    point = point_of(exponent)
    for form in (exponentials, njit(**OPTIONS)(exponentials)):
        point.fraction[:] = 0.0
        form(point, exponent.size)
        ratio = point.fraction / np.exp(exponent)
        # |x| times the rounding of ln 2 is what reordered sums may lose.
        assert (np.abs(ratio - 1.0) <= 4e-16 + 2e-16 * np.abs(exponent)).all()


def test_ends_are_cut_off() -> None:
    point = point_of(np.array([-1e300, -800.0, 400.0, 1e300]))
    exponentials(point, 4)
    assert point.fraction[:2].tolist() == [0.0, 0.0]
    assert np.allclose(point.fraction[2:], np.exp(300.0), rtol=1e-13)
