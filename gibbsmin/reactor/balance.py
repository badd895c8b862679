"""The balance of a stage: what the amounts of its outlet must add up to.

In general elements (and charge) are conserved; where nothing reacts substances are, and where only
named reactions run every combination of amounts that these leave alone.  Holds are further rows.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from gibbsmin.arrays import FloatArray, IntArray
from gibbsmin.errors import BalanceError
from gibbsmin.reactor.holds import Hold
from gibbsmin.reactor.streams import Values
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Species

CHARGE = "charge"
_RANK_TOLERANCE = 1e-10


@dataclass(frozen=True)
class Balance:
    """Rows A n = b of a stage.

    Attributes
    ----------
    elements : symbols of the first rows (and ``charge``); empty where elements have no rows
    rows : names of all m rows
    matrix : (m, S) coefficients of the candidates
    feed_matrix : coefficients of the feed's records, so that b = feed_matrix @ feed; (m, F), or
        (B, m, F) where B states differ in what they hold
    direction : (m,) a dual direction d with Aᵀd ≥ 1 for every candidate
    atoms : (S,) element atoms of each candidate
    """

    elements: tuple[str, ...]
    rows: tuple[str, ...]
    matrix: FloatArray
    feed_matrix: FloatArray
    direction: FloatArray
    atoms: FloatArray

    def supplies(self, feed: FloatArray) -> FloatArray:
        """b of feed amounts; (..., F) to (..., m)."""
        if self.feed_matrix.ndim == 2:
            return feed @ self.feed_matrix.T
        return np.asarray(np.einsum("bmf,bf->bm", self.feed_matrix, feed))

    def of_states(self, index: IntArray) -> Balance:
        """The balance of some of the states."""
        if self.feed_matrix.ndim == 2:
            return self
        return replace(self, feed_matrix=self.feed_matrix[index])

    def with_holds(
        self, candidates: Sequence[Species], feed: Sequence[Species], holds: Sequence[Hold]
    ) -> Balance:
        """The balance with a row for each hold, on which the dual direction is 0."""
        if not holds:
            return self
        return replace(
            self,
            rows=(*self.rows, *(hold.label for hold in holds)),
            matrix=np.vstack(
                [self.matrix, [[h.outlet.get(r.name, 0.0) for r in candidates] for h in holds]]
            ),
            feed_matrix=_stacked(
                [*self.feed_matrix, *([h.feed.get(r.name, 0.0) for r in feed] for h in holds)]
            ),
            direction=np.concatenate([self.direction, np.zeros(len(holds))]),
        )


def _stacked(rows: Sequence[Sequence[Values] | FloatArray]) -> FloatArray:
    """Rows of coefficients, some of which may be arrays (B,), as (m, F) or (B, m, F)."""
    cells = np.broadcast_arrays(*(np.asarray(cell, dtype=float) for row in rows for cell in row))
    return np.stack(cells, axis=-1).reshape(*np.shape(cells[0]), len(rows), -1)


def element_counts(records: Sequence[Species], rows: Sequence[str]) -> FloatArray:
    """Counts of each element (or charge) in each record, shape (rows, records)."""
    index = {row: i for i, row in enumerate(rows)}
    counts = np.zeros((len(rows), len(records)))
    for j, record in enumerate(records):
        for symbol, count in record.elements:
            if symbol in index:
                counts[index[symbol], j] = count
        if CHARGE in index:
            counts[index[CHARGE], j] = record.charge
    return counts


def elements_of(records: Sequence[Species]) -> tuple[str, ...]:
    """Symbols of all elements in these records, sorted."""
    return tuple(sorted({symbol for record in records for symbol, _ in record.elements}))


def element_balance(candidates: Sequence[Species], feed: Sequence[Species]) -> Balance:
    """Elements are conserved, and charge where ions take part.

    The dual direction is 1 on element rows; with ions it is 1 + Z on elements and −1 on charge,
    Z being the largest positive charge per atom, because an electron has no atoms.
    """
    elements = elements_of([*candidates, *feed])
    charged = any(record.charge for record in [*candidates, *feed])
    rows = (*elements, CHARGE) if charged else elements
    atoms = np.array([record.atoms for record in candidates])
    direction = np.ones(len(rows))
    if charged:
        largest = max((r.charge / r.atoms for r in candidates if r.atoms > 0), default=0.0)
        direction[:-1] += max(0.0, largest)
        direction[-1] = -1.0
    return Balance(
        elements=rows,
        rows=rows,
        matrix=element_counts(candidates, rows),
        feed_matrix=element_counts(feed, rows),
        direction=direction,
        atoms=atoms,
    )


def substance_balance(candidates: Sequence[Species], feed: Sequence[Species]) -> Balance:
    """Nothing reacts: each substance is conserved, though its forms may change."""
    substances = tuple(dict.fromkeys(record.formula for record in [*feed, *candidates]))

    def membership(records: Sequence[Species]) -> FloatArray:
        return np.array([[float(r.formula == name) for r in records] for name in substances])

    return Balance(
        elements=(),
        rows=tuple(f"substance {name}" for name in substances),
        matrix=membership(candidates),
        feed_matrix=membership(feed),
        direction=np.ones(len(substances)),
        atoms=np.array([record.atoms for record in candidates]),
    )


def reaction_balance(
    candidates: Sequence[Species], feed: Sequence[Species], stoichiometry: FloatArray
) -> Balance:
    """Only named reactions run: what they leave alone is conserved.

    The rows are a basis of the null space of ν (R, S): unit rows for candidates in no named
    reaction, an orthonormal basis for the rest.  Every feed record must be a candidate.
    """
    names = [record.name for record in candidates]
    taking_part = np.flatnonzero(np.any(stoichiometry != 0.0, axis=0)).tolist()
    others = [j for j in range(len(names)) if j not in taking_part]
    _, sizes, directions = np.linalg.svd(stoichiometry[:, taking_part])
    kept = directions[np.count_nonzero(sizes > _RANK_TOLERANCE * sizes[0]) :]
    matrix = np.zeros((len(others) + len(kept), len(names)))
    matrix[range(len(others)), others] = 1.0
    matrix[len(others) :, taking_part] = kept
    atoms = np.array([record.atoms for record in candidates])
    direction = np.linalg.lstsq(matrix.T, atoms, rcond=None)[0]
    return Balance(
        elements=(),
        rows=tuple(
            [f"{names[j]} frozen" for j in others] + [f"kept {i}" for i in range(len(kept))]
        ),
        matrix=matrix,
        feed_matrix=matrix[:, [names.index(record.name) for record in feed]],
        direction=direction,
        atoms=atoms,
    )


def require_every_element_held(
    candidates: Sequence[Species], feed: Sequence[Species], library: Library
) -> None:
    """Refuse a feed with an element that no candidate contains.

    Raises
    ------
    BalanceError
        names the element, the feed record that brings it and a record that could hold it.
    """
    held = set(elements_of(candidates))
    for record in feed:
        for symbol, _ in record.elements:
            if symbol not in held:
                simplest = min(
                    library.of_elements([symbol]), key=lambda r: (r.atoms, r.name), default=record
                )
                raise BalanceError(
                    f'found the element {symbol} in the feed (from "{record.name}"), which no '
                    "candidate can hold",
                    f'accepted is a list with a record of {symbol}, for instance "{record.name}"'
                    + (f' or "{simplest.name}"' if simplest.name != record.name else ""),
                    key="species.consider",
                )
