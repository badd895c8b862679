"""Arithmetic of rows of changes."""

from __future__ import annotations

from math import sqrt

from gibbsmin.arrays import FloatArray


def add(target: FloatArray, factor: float, values: FloatArray, width: int) -> None:
    """target += factor × values."""
    for k in range(width):
        target[k] += factor * values[k]


def copy(target: FloatArray, values: FloatArray, width: int) -> None:
    """The first values of a row."""
    for k in range(width):
        target[k] = values[k]


def deviation(row: FloatArray, count: int) -> float:
    """Root of the sum of squares."""
    squares = 0.0
    for k in range(count):
        squares += row[k] * row[k]
    return sqrt(squares)
