"""exp and ln of eight numbers at a time.

exp as in :mod:`gibbsmin.minimise.kernel.exponential`.  ln x = k ln 2 + ln m with √½ ≤ m < √2, and
ln m = 2 artanh s, s = (m − 1)/(m + 1), by its series to s²¹; s² ≤ 0.0295 leaves below 1e-17.
These functions are compiled without leave to reorder sums, which could cancel what is added and
taken away.
"""

from __future__ import annotations

from gibbsmin.arrays import FloatArray
from gibbsmin.minimise.kernel.vector import (
    exponent_of,
    larger,
    mantissa_of,
    power_of_two,
    smaller,
    spread,
    where_above,
)

_PER_LN2 = 1.4426950408889634
_LN2_HIGH = 0.6931471803691238
_LN2_LOW = 1.9082149292705877e-10
_WHOLE = 6755399441055744.0
_LARGEST = 300.0
_SMALLEST = -700.0


def exponential(vector: FloatArray) -> FloatArray:
    """exp, none above e³⁰⁰; 0 below e⁻⁷⁰⁰."""
    x = smaller(larger(vector, spread(_SMALLEST)), spread(_LARGEST))
    shifted = x * _PER_LN2 + _WHOLE
    k = shifted - _WHOLE
    r = (x - k * _LN2_HIGH) - k * _LN2_LOW
    value = 1.0 + r * (1.0 / 13.0)
    value = 1.0 + r * (value * (1.0 / 12.0))
    value = 1.0 + r * (value * (1.0 / 11.0))
    value = 1.0 + r * (value * (1.0 / 10.0))
    value = 1.0 + r * (value * (1.0 / 9.0))
    value = 1.0 + r * (value * (1.0 / 8.0))
    value = 1.0 + r * (value * (1.0 / 7.0))
    value = 1.0 + r * (value * (1.0 / 6.0))
    value = 1.0 + r * (value * (1.0 / 5.0))
    value = 1.0 + r * (value * (1.0 / 4.0))
    value = 1.0 + r * (value * (1.0 / 3.0))
    value = 1.0 + r * (value * (1.0 / 2.0))
    value = (1.0 + r * value) * power_of_two(shifted)
    return where_above(vector, spread(_SMALLEST), value, spread(0.0))


def logarithm(vector: FloatArray) -> FloatArray:
    """ln of positive normal numbers; about −709 of 0 and 710 of infinity."""
    m = mantissa_of(vector)
    k = exponent_of(vector)
    s = (m - 1.0) / (m + 1.0)
    square = s * s
    value = 1.0 / 19.0 + square * (1.0 / 21.0)
    value = 1.0 / 17.0 + square * value
    value = 1.0 / 15.0 + square * value
    value = 1.0 / 13.0 + square * value
    value = 1.0 / 11.0 + square * value
    value = 1.0 / 9.0 + square * value
    value = 1.0 / 7.0 + square * value
    value = 1.0 / 5.0 + square * value
    value = 1.0 / 3.0 + square * value
    double = s + s
    return k * _LN2_HIGH + (double + (double * (square * value) + k * _LN2_LOW))
