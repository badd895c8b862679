"""Eight doubles side by side, each a state's: what the lanes compute with.

A vector is a row of eight numbers to the interpreter and one value of the vector unit to the
compiler, whose form of the functions below is :mod:`gibbsmin.minimise.kernel.vector_code`; both
take the signs +, −, * and /.  Loops over lanes that are left to the compiler end up slower than one
state after another, because it must check before each whether arrays overlap.
"""

from __future__ import annotations

import numpy as np

from gibbsmin.arrays import FloatArray

LANES = 8

BIAS = 1023
"""Of the exponent of a double, which stands in its bits from ``MANTISSA`` on."""

MANTISSA = 52

ROOT_HALF = 0x3FE6A09E667F3BCD
"""The bits of √½."""


def load(array: FloatArray, row: int) -> FloatArray:
    """A row of an array of eight columns."""
    return np.array(array[row])


def store(array: FloatArray, row: int, vector: FloatArray) -> None:
    """Set a row of an array of eight columns."""
    array[row] = vector


def spread(value: float) -> FloatArray:
    """One number in all lanes."""
    return np.full(LANES, value)


def larger(one: FloatArray, other: FloatArray) -> FloatArray:
    """The larger of each two; the other where one is no number."""
    return np.where(one > other, one, other)


def smaller(one: FloatArray, other: FloatArray) -> FloatArray:
    """The smaller of each two; the other where one is no number."""
    return np.where(one < other, one, other)


def magnitude(vector: FloatArray) -> FloatArray:
    """Absolute values."""
    return np.abs(vector)


def where_above(
    vector: FloatArray, limit: FloatArray, above: FloatArray, otherwise: FloatArray
) -> FloatArray:
    """``above`` in the lanes where the vector is above the limit."""
    return np.where(vector > limit, above, otherwise)


def power_of_two(shifted: FloatArray) -> FloatArray:
    """2^k of whole numbers k, given as k + 1.5 · 2⁵², so that k stands at the end of the bits."""
    return ((shifted.view(np.int64) + BIAS) << MANTISSA).view(np.float64)


def mantissa_of(vector: FloatArray) -> FloatArray:
    """m of x = m 2^k with √½ ≤ m < √2, of positive normal numbers."""
    bits = vector.view(np.int64)
    k = (bits - ROOT_HALF) >> MANTISSA
    return (bits - (k << MANTISSA)).view(np.float64)


def exponent_of(vector: FloatArray) -> FloatArray:
    """k of x = m 2^k with √½ ≤ m < √2, of positive normal numbers."""
    return ((vector.view(np.int64) - ROOT_HALF) >> MANTISSA).astype(np.float64)
