"""Exact-zero linear algebra on the balance: pivoting, a feasible vertex, independent columns.

Balances are made of small whole numbers and of supplies that cancel, so that a sum which is zero
in arithmetic comes out as round-off.  Every subtraction here sets such a sum to exactly zero;
what is zero can then be told from what is merely small.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import FloatArray, IntArray

ROUND_OFF = 1e-13
"""Result of a subtraction, relative to its terms, below which it is zero."""

_INDEPENDENT = 1e-8


def subtract(minuend: FloatArray, subtrahend: FloatArray) -> FloatArray:
    """Difference, with what is round-off of its terms set to zero."""
    difference = minuend - subtrahend
    small = np.abs(difference) <= ROUND_OFF * np.maximum(np.abs(minuend), np.abs(subtrahend))
    return np.where(small, 0.0, difference)


@dataclass(slots=True)
class Tableau:
    """B⁻¹A and B⁻¹b for the columns ``basis``, one a row.

    ``scale`` is the largest term that went into each value so far: what it has lost to round-off.
    """

    entries: FloatArray
    values: FloatArray
    scale: FloatArray
    basis: IntArray

    def pivot(self, row: int, column: int) -> None:
        """Bring a column into the basis in place of the one that holds the row."""
        pivot = self.entries[row, column]
        factors = self.entries[:, column].copy()
        factors[row] = 0.0
        self.entries[row] /= pivot
        self.values[row] /= pivot
        self.scale[row] /= abs(pivot)
        self.entries = subtract(self.entries, np.outer(factors, self.entries[row]))
        self.values -= factors * self.values[row]
        self.scale = np.maximum(self.scale, np.abs(factors) * self.scale[row])
        self.values[np.abs(self.values) <= ROUND_OFF * self.scale] = 0.0
        self.basis[row] = column

    def leaving_row(self, column: int, rows: IntArray) -> int | None:
        """Of some rows, the first to reach zero as the column grows; ties by basis index."""
        candidates = rows[self.entries[rows, column] > 0]
        if candidates.size == 0:
            return None
        ratios = self.values[candidates] / self.entries[candidates, column]
        return int(candidates[np.lexsort((self.basis[candidates], ratios))[0]])


def feasible_vertex(matrix: FloatArray, supplies: FloatArray) -> Tableau | None:
    """A vertex of {n ≥ 0: A n = b} by the simplex method, or None where there is none.

    Rows of A that depend on others vanish from the tableau.  One artificial column a row starts
    the basis; the sum of the artificials is driven to zero with Bland's rule against cycling
    (R. G. Bland, Math. Oper. Res. 2 (1977) 103).
    """
    rows, species = matrix.shape
    sign = np.where(supplies < 0, -1.0, 1.0)
    tableau = Tableau(
        entries=np.hstack([sign[:, None] * matrix, np.eye(rows)]),
        values=np.abs(supplies),
        scale=np.abs(supplies),
        basis=np.arange(species, species + rows),
    )
    while True:
        artificial = tableau.basis >= species
        short = artificial & (tableau.values > 0)
        if not short.any():
            break
        gain = tableau.entries[artificial, :species].sum(axis=0)
        entering = np.flatnonzero(gain > _INDEPENDENT)
        if entering.size == 0:
            return None
        column = int(entering[0])
        row = tableau.leaving_row(column, np.arange(rows))
        assert row is not None  # noqa: S101  # a positive gain has a positive entry
        tableau.pivot(row, column)
    return _without_artificials(tableau, species)


def _without_artificials(tableau: Tableau, species: int) -> Tableau:
    """Pivot zero artificials out; a row that offers no pivot depends on the others."""
    kept = []
    for row in range(tableau.basis.size):
        if tableau.basis[row] >= species:
            sizes = np.abs(tableau.entries[row, :species])
            if sizes.max(initial=0.0) < _INDEPENDENT:
                continue
            tableau.pivot(row, int(np.argmax(sizes)))
        kept.append(row)
    return Tableau(
        entries=tableau.entries[kept, :species],
        values=tableau.values[kept],
        scale=tableau.scale[kept],
        basis=tableau.basis[kept],
    )


def cheapest_vertex(tableau: Tableau, costs: FloatArray) -> Tableau:
    """Move a feasible vertex to one of least Σ cost·n, which must be bounded (Bland's rule)."""
    tolerance = ROUND_OFF * (1.0 + np.abs(costs).max(initial=0.0))
    while True:
        reduced = costs - costs[tableau.basis] @ tableau.entries
        reduced[tableau.basis] = 0.0
        entering = np.flatnonzero(reduced < -tolerance)
        if entering.size == 0:
            return tableau
        column = int(entering[0])
        row = tableau.leaving_row(column, np.arange(tableau.basis.size))
        assert row is not None  # noqa: S101  # the direction of the programme bounds it
        tableau.pivot(row, column)


def independent_columns(matrix: FloatArray, order: Iterable[int]) -> IntArray:
    """The first independent columns met in the given order, by Gram and Schmidt."""
    rows = matrix.shape[0]
    directions = np.zeros((rows, rows))
    chosen: list[int] = []
    for column in order:
        if len(chosen) == rows:
            break
        vector = matrix[:, column]
        rest = vector - directions.T @ (directions @ vector)
        rest = rest - directions.T @ (directions @ rest)
        length = np.linalg.norm(rest)
        if length > _INDEPENDENT * np.linalg.norm(vector):
            directions[len(chosen)] = rest / length
            chosen.append(column)
    return np.array(chosen, dtype=np.int64)
