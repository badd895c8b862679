"""The element balance in terms of the most abundant records.

Where a gas holds CO2 and only traces of CO and O2, the potentials of C and O are known apart far
less well than their sum in CO2.  Written for the records that are there in plenty, A′ = B⁻¹A with
B the columns of these records, the equations of a small change stay well conditioned whatever the
amounts: each other record is made of basis records that are at least as abundant.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import FloatArray, IntArray

_ZERO = 1e-9
"""Entries of the reduced matrix below this are round-off; counts of atoms are far larger."""


@dataclass(frozen=True)
class AbundantBasis:
    """The balance of B states, each in its own basis.

    Attributes
    ----------
    matrix : (B, m, S) A′, in which each basis column is a unit vector
    directions : (B, m, K) the columns given beside A, reduced in the same way
    columns : (B, m) the record that each row stands for, −1 for a row that no record present fills
    """

    matrix: FloatArray
    directions: FloatArray
    columns: IntArray


def abundant_basis(
    matrix: FloatArray, directions: FloatArray, weights: FloatArray
) -> AbundantBasis:
    """Choose the heaviest independent columns of each state and reduce the balance to them.

    Gauss-Jordan elimination that takes columns in falling weight; this greedy choice gives the
    heaviest basis there is.

    Parameters
    ----------
    matrix
        A, shape (m, S).
    directions
        Columns to reduce beside it, shape (m, K) or (B, m, K).
    weights
        Shape (B, S); a column of weight 0 is never chosen.
    """
    (m, S), B = matrix.shape, len(weights)
    sides = [np.broadcast_to(part, (B, *part.shape[-2:])) for part in (matrix, directions)]
    work = np.concatenate(sides, axis=2)
    columns = np.full((B, m), -1, dtype=np.int64)
    state = np.arange(B)
    for _ in range(m):
        free = columns < 0
        size = np.abs(work[:, :, :S]) * free[:, :, np.newaxis]
        eligible = np.where(size.max(axis=1) > _ZERO, weights, 0.0)
        column = eligible.argmax(axis=1)
        row = size[state, :, column].argmax(axis=1)
        found = np.flatnonzero(eligible[state, column] > 0.0)
        _eliminate(work, found, row[found], column[found])
        columns[found, row[found]] = column[found]
    return AbundantBasis(work[:, :, :S], work[:, :, S:], columns)


def _eliminate(work: FloatArray, states: IntArray, rows: IntArray, columns: IntArray) -> None:
    """Make the column of each state a unit vector with its 1 in the row."""
    pivot_row = work[states, rows] / work[states, rows, columns][:, np.newaxis]
    factors = work[states, :, columns]
    work[states] -= factors[:, :, np.newaxis] * pivot_row[:, np.newaxis]
    work[states, rows] = pivot_row
    work[states, :, columns] = 0.0
    work[states, rows, columns] = 1.0
