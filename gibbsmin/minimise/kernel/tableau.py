"""The tableau B⁻¹[A | I] of a basis B and its exchange step.

Supplies are not carried along but renewed from b itself.
"""

from __future__ import annotations

from gibbsmin.arrays import FloatArray, IntArray
from gibbsmin.minimise.kernel.storage import FORBIDDEN, State, Tableau

_ROUND_OFF = 1e-12
_SNAP = 1e-14


def exchange(tableau: Tableau, row: int, column: int) -> None:
    """Let ``column`` take the place of the basis member of ``row``; reduced costs follow."""
    turn(tableau.entries, tableau.basis, row, column)
    renew_costs(tableau, row, column)


def turn(entries: FloatArray, basis: IntArray, row: int, column: int) -> None:
    """The Gauss–Jordan step of an exchange.

    Entries at round-off are set to zero: the matrix is made of small counts, and a spurious
    1e-17 would couple a trace element to an abundant one.
    """
    rows, width = entries.shape
    inverse = 1.0 / entries[row, column]
    for i in range(width):
        entries[row, i] *= inverse
    entries[row, column] = 1.0
    for j in range(rows):
        factor = entries[j, column]
        if j != row and factor != 0.0:
            for i in range(width):
                value = entries[j, i] - factor * entries[row, i]
                entries[j, i] = value if abs(value) > _ROUND_OFF else 0.0
            entries[j, column] = 0.0
    basis[row] = column


def renew_costs(tableau: Tableau, row: int, column: int) -> None:
    """Reduced costs once ``column`` stands in ``row``."""
    entries, reduced = tableau.entries, tableau.reduced
    factor = reduced[column]
    for i in range(reduced.size):
        reduced[i] -= factor * entries[row, i]
    reduced[column] = 0.0


def renew_supply(state: State, tableau: Tableau) -> None:
    """B⁻¹b from b itself; what is zero but for round-off becomes zero."""
    entries, species = tableau.entries, tableau.reduced.size
    rows = tableau.supply.size
    for j in range(tableau.rank[0]):
        total = 0.0
        size = 0.0
        for e in range(rows):
            term = entries[j, species + e] * state.supplies[e]
            total += term
            size += abs(term)
        tableau.supply[j] = total if abs(total) > _SNAP * size else 0.0


def renew_reduced(state: State, tableau: Tableau) -> None:
    """Reduced energies g̃ − νᵀg̃_B of the present basis."""
    entries, reduced, energies = tableau.entries, tableau.reduced, state.energies
    species = reduced.size
    for i in range(species):
        reduced[i] = energies[i]
    for j in range(tableau.rank[0]):
        member = energies[tableau.basis[j]]
        for i in range(species):
            reduced[i] -= member * entries[j, i]
    for j in range(tableau.rank[0]):
        reduced[tableau.basis[j]] = 0.0


def retire(tableau: Tableau, row: int) -> None:
    """Move a row that binds nothing beyond the rank."""
    supply, last = tableau.supply, tableau.rank[0] - 1
    set_aside(tableau.entries, tableau.basis, row, last)
    supply[row], supply[last] = supply[last], supply[row]
    tableau.rank[0] = last


def set_aside(entries: FloatArray, basis: IntArray, row: int, last: int) -> None:
    """Exchange two rows."""
    for i in range(entries.shape[1]):
        entries[row, i], entries[last, i] = entries[last, i], entries[row, i]
    basis[row], basis[last] = basis[last], basis[row]


def exclude(state: State, tableau: Tableau, column: int) -> None:
    """Take a species off the face: the supplies allow none of it."""
    state.face[column] = False
    state.energies[column] = FORBIDDEN
    tableau.reduced[column] = 0.0
    for j in range(tableau.entries.shape[0]):
        tableau.entries[j, column] = 0.0
