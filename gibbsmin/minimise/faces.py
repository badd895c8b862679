"""Face reduction: which species the supplies allow to be positive at all.

With a supply of zero (of an element, or of a combination of rows such as O − C over CO and CO2)
every species in it is zero at any feasible point, and the multipliers run to infinity.  The
programme without those species, the face, has an interior, and so a dual optimum.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray, IntArray
from gibbsmin.minimise.tableau import Tableau, feasible_vertex, independent_columns

_ZERO_COST = 1e-9


@dataclass(frozen=True, slots=True, eq=False)
class Face:
    """The reduced programme of one state, and the way back.

    Parameters
    ----------
    species
        Whether each species may be positive, shape (species,).
    rows
        Independent rows of A over those species; the others follow from them.
    empty
        Whether each row holds no such species, shape (rows,): its multiplier is unbounded.
    """

    species: BoolArray
    rows: IntArray
    empty: BoolArray

    def reduced(self, matrix: FloatArray) -> FloatArray:
        """A of the face."""
        return matrix[np.ix_(self.rows, np.flatnonzero(self.species))]

    def restored_amounts(self, amounts: FloatArray) -> FloatArray:
        """Amounts of all species: 0 outside the face."""
        full = np.zeros(self.species.size)
        full[self.species] = amounts
        return full

    def restored_multipliers(self, multipliers: FloatArray) -> FloatArray:
        """Multipliers of all rows: NaN where unbounded, 0 where the row depends on others."""
        full = np.where(self.empty, np.nan, 0.0)
        full[self.rows] = multipliers
        return full


def find_face(matrix: FloatArray, supplies: FloatArray) -> Face | None:
    """Smallest face of {n ≥ 0: A n = b} that holds every feasible point; None if there is none.

    At a feasible vertex the basis species at zero span a cone of directions in which other
    species may grow.  Each species in doubt is maximised over that cone (a linear programme
    without supplies, so that nothing in it is small): it grows for ever along some ray, and all
    species of the ray may be positive, or it stays at zero.  Rows of either sign and combinations
    of rows need no special case; an element that is not there is taken out first, exactly, lest
    round-off of the vertex leave a trace of it.
    """
    possible = np.flatnonzero(_possible(matrix, supplies))
    tableau = feasible_vertex(matrix[:, possible], supplies)
    if tableau is None:
        return None
    species = np.zeros(matrix.shape[1], dtype=np.bool_)
    species[possible] = _growing_species(tableau)
    kept = matrix[:, species]
    empty = ~np.any(kept != 0, axis=1)
    # Of dependent rows the smallest say most: a sum of large ones loses their digits.
    order = np.argsort(np.abs(supplies), kind="stable")
    rows = np.sort(independent_columns(kept.T, order[~empty[order]]))
    return Face(species=species, rows=rows, empty=empty)


def _possible(matrix: FloatArray, supplies: FloatArray) -> BoolArray:
    """Species without a row of no supply whose entries are all of one sign."""
    possible = np.ones(matrix.shape[1], dtype=np.bool_)
    absent = matrix[supplies == 0]
    while True:
        left = np.where(possible, absent, 0.0)
        one_signed = (left >= 0).all(axis=1) | (left <= 0).all(axis=1)
        taken = (left[one_signed] != 0).any(axis=0)
        if not taken.any():
            return possible
        possible &= ~taken


def _growing_species(tableau: Tableau) -> BoolArray:
    size = tableau.entries.shape[1]
    zero_rows = np.flatnonzero(tableau.values == 0)
    growing = np.zeros(size, dtype=np.bool_)
    growing[tableau.basis[tableau.values > 0]] = True
    growing |= ~np.any(tableau.entries[zero_rows] != 0, axis=0)
    stuck = np.zeros(size, dtype=np.bool_)
    for species in range(size):
        if not (growing[species] or stuck[species]):
            _decide(tableau, zero_rows, species, growing, stuck)
    return growing


def _decide(
    tableau: Tableau, zero_rows: IntArray, species: int, growing: BoolArray, stuck: BoolArray
) -> None:
    """Maximise one species over the cone (Bland's rule) and mark what that decides."""
    size = growing.size
    while True:
        holds = np.flatnonzero(tableau.basis == species)
        gain = -tableau.entries[holds[0]] if holds.size else np.eye(size)[species]
        gain = np.where(stuck, 0.0, gain)
        gain[tableau.basis] = 0.0
        entering = np.flatnonzero(gain > _ZERO_COST)
        if entering.size == 0:
            stuck[species] = True
            stuck |= gain < -_ZERO_COST
            return
        column = int(entering[0])
        row = tableau.leaving_row(column, zero_rows)
        if row is None:
            growing[column] = True
            shrinking = tableau.entries[zero_rows, column] < 0
            growing[tableau.basis[zero_rows[shrinking]]] = True
            return
        tableau.pivot(row, column)
