"""The element balance: element counts (and charge) of the candidates against the feed's totals."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import chain

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray
from gibbsmin.errors import BalanceError
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Species

CHARGE = "charge"


@dataclass(frozen=True)
class ElementBalance:
    """Rows A n = b of a stage: elements, then charge where ions take part, then holds.

    Attributes
    ----------
    rows : names of the m rows: element symbols, ``charge``, and one ``hold <record>`` each inert
    matrix : (m, S) counts of the candidates
    feed_matrix : (m, F) counts of the feed's records, so that b = feed_matrix @ feed amounts
    direction : (m,) a dual direction d with Aᵀd ≥ 1 for every candidate
    atoms : (S,) element atoms of each candidate
    """

    rows: tuple[str, ...]
    matrix: FloatArray
    feed_matrix: FloatArray
    direction: FloatArray
    atoms: FloatArray

    def supplies(self, feed: FloatArray) -> FloatArray:
        """b of feed amounts; (..., F) to (..., m)."""
        return feed @ self.feed_matrix.T


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


def element_balance(
    candidates: Sequence[Species], feed: Sequence[Species], inert: BoolArray
) -> ElementBalance:
    """Build the balance of a stage.

    Each inert candidate adds a row that holds it at its inlet amount.  The dual direction is 1 on
    element rows and 0 on hold rows; with ions it is 1 + Z on elements and −1 on charge, Z being
    the largest positive charge per atom, because an electron has no atoms.
    """
    elements = elements_of([*candidates, *feed])
    charged = any(record.charge for record in [*candidates, *feed])
    rows = (*elements, CHARGE) if charged else elements
    matrix = element_counts(candidates, rows)
    feed_matrix = element_counts(feed, rows)

    atoms = element_counts(candidates, elements).sum(axis=0)
    direction = np.ones(len(rows))
    if charged:
        per_atom = [r.charge / a for r, a in zip(candidates, atoms, strict=True) if a > 0]
        direction[:-1] += max(0.0, *per_atom) if per_atom else 0.0
        direction[-1] = -1.0

    held: list[int] = np.flatnonzero(inert).tolist()
    feed_names = [record.name for record in feed]
    hold_rows = np.zeros((len(held), len(candidates)))
    hold_feed = np.zeros((len(held), len(feed)))
    for row, column in enumerate(held):
        hold_rows[row, column] = 1.0
        hold_feed[row, feed_names.index(candidates[column].name)] = 1.0
    return ElementBalance(
        rows=(*rows, *(f"hold {candidates[column].name}" for column in held)),
        matrix=np.vstack([matrix, hold_rows]),
        feed_matrix=np.vstack([feed_matrix, hold_feed]),
        direction=np.concatenate([direction, np.zeros(len(held))]),
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
    held = set(chain.from_iterable(dict(record.elements) for record in candidates))
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
                )
