"""Pieces of a fit: their layout, their local coefficients, and the rounded ones that are stored.

While a fit is sought, the Cp of a piece is a sum of 1, x, x², x³ and (T_low/T)², with x from −1 to
1 along the piece, which keeps the problem well conditioned however narrow the piece.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from math import floor, log10

import numpy as np

from gibbsmin.arrays import FloatArray, IntArray
from gibbsmin.thermo.fit_table import CONSTANT_WITHIN, Table
from gibbsmin.thermo.species import Piece

# A piece gets no more coefficients than its width T_high/T_low can tell apart.
_COEFFICIENTS_BY_WIDTH = ((1.02, 2), (1.1, 3), (1.45, 4), (np.inf, 5))

# Digits after the point of local coefficients, J/mol/K; and the part of Cp, in J/mol/K, that
# rounding a Shomate coefficient may change.
_LOCAL_DIGITS = 5
_NEGLIGIBLE_CP = 1e-5


def layout(table: Table, joints: tuple[int, ...]) -> tuple[FloatArray, IntArray, list[int]]:
    """Limits and segment of each piece, and how many coefficients it may have."""
    upper = np.flatnonzero(np.diff(table.segment)) + 1
    starts = sorted({0, *upper.tolist(), *joints})
    # H and S tell of the shape of Cp between two rows, too.
    spare = 2 if table.has_functions else 0
    limits, counts = [], []
    for start, following in zip(starts, [*starts[1:], len(table.T)], strict=True):
        end = following if following in joints else following - 1
        limits.append((table.T[start], table.T[end]))
        values = table.Cp[start : end + 1]
        width = table.T[end] / table.T[start]
        widest = next(count for limit, count in _COEFFICIENTS_BY_WIDTH if width <= limit)
        constant = np.nanmax(values) - np.nanmin(values) <= CONSTANT_WITHIN
        counts.append(1 if constant else min(widest, len(values) + spare))
    return np.array(limits), table.segment[starts], counts


def continuous(limits: FloatArray, segments: IntArray, counts: list[int]) -> FloatArray:
    """Matrix from free unknowns to all local coefficients, (pieces, 5, unknowns).

    The first coefficient of a piece follows from Cp at the joint below, if there is one.
    """
    pieces, following = len(counts), np.diff(segments, prepend=-1) == 0
    unknowns = [(k, j) for k in range(pieces) for j in range(counts[k]) if j or not following[k]]
    free = np.zeros((pieces, 5, len(unknowns)))
    for column, (k, j) in enumerate(unknowns):
        free[k, j, column] = 1.0
    at_low = np.array([1.0, -1.0, 1.0, -1.0, 1.0])
    for k in np.flatnonzero(following).tolist():
        at_high = np.array([1.0, 1.0, 1.0, 1.0, (limits[k - 1, 0] / limits[k - 1, 1]) ** 2])
        free[k, 0] = at_high @ free[k - 1] - at_low[1:] @ free[k, 1:]
    return free


def to_shomate(limits: FloatArray) -> FloatArray:
    """Matrix from the local coefficients of each piece to A, B, C, D, E, (pieces, 5, 5)."""
    low, high = limits.T / 1000
    m, h = (low + high) / 2, (high - low) / 2
    one, zero = np.ones_like(m), np.zeros_like(m)
    columns = (
        (one, zero, zero, zero, zero),
        (-m / h, one / h, zero, zero, zero),
        (m * m / (h * h), -2 * m / (h * h), one / (h * h), zero, zero),
        (
            -m * m * m / (h * h * h),
            3 * m * m / (h * h * h),
            -3 * m / (h * h * h),
            one / (h * h * h),
            zero,
        ),
        (zero, zero, zero, zero, low * low),
    )
    return np.array(columns).transpose(2, 1, 0)


def rounded_pieces(
    table: Table, limits: FloatArray, local: FloatArray, labels: Mapping[float, str]
) -> tuple[Piece, ...]:
    """The pieces with their coefficients rounded where Cp no longer feels it.

    The local coefficients are rounded first and everything after is plain arithmetic, so that
    machines which differ in the last bits of the least squares give the same pieces.
    """
    steps = dict(zip(table.T[np.flatnonzero(np.diff(table.segment)) + 1], table.steps, strict=True))
    pieces: list[Piece] = []
    for (low, high), matrix, found in zip(limits, to_shomate(limits), local, strict=True):
        known = [round(float(value), _LOCAL_DIGITS) for value in found]
        size = np.maximum(_functions(low), _functions(high))
        A, B, C, D, E = (
            _rounded(_dot(row, known), _NEGLIGIBLE_CP / float(largest))
            for row, largest in zip(matrix.tolist(), size, strict=True)
        )
        if pieces and low not in steps:
            below = pieces[-1]
            at_joint = _dot((below.A, below.B, below.C, below.D, below.E), _functions(low))
            A = round(at_joint - _dot((0.0, B, C, D, E), _functions(low)), 9)
        pieces.append(
            Piece(
                float(low),
                float(high),
                A,
                B,
                C,
                D,
                E,
                transition=float(steps.get(low, 0.0)),
                label=labels.get(float(low), ""),
            )
        )
    return tuple(pieces)


def _functions(T: float) -> list[float]:
    t = float(T) / 1000
    return [1.0, t, t * t, t * t * t, 1 / (t * t)]


def _dot(left: Sequence[float], right: Sequence[float]) -> float:
    return sum((a * b for a, b in zip(left, right, strict=True)), 0.0)


def _rounded(value: float, unit: float) -> float:
    """Rounded to the power of ten at or below the unit; never −0."""
    return round(value, -floor(log10(unit))) + 0.0
