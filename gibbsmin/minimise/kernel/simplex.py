"""A linear programme for a start: Dantzig's simplex method on the tableau.

The gas is taken at guessed fractions, which makes the Gibbs energy linear: minimise c·n subject
to A n = b, n ≥ 0.  Source of the method: G. B. Dantzig, "Linear Programming and Extensions",
Princeton University Press, 1963; the linear programme as the start of a Gibbs-energy
minimisation follows W. B. White, S. M. Johnson, G. B. Dantzig, J. Chem. Phys. 28 (1958) 751–755.
"""

from __future__ import annotations

from math import inf, log

from gibbsmin.arrays import FloatArray
from gibbsmin.minimise.kernel.pivots import (
    after_exchange,
    after_retiring,
    copy_tableau,
    first_place,
    seen_from,
)
from gibbsmin.minimise.kernel.storage import (
    FORBIDDEN,
    ZERO,
    Equations,
    Network,
    Pivots,
    State,
    Tableau,
)
from gibbsmin.minimise.kernel.tableau import exclude, renew_costs, renew_supply, retire

_FEASIBLE = 1e-11  # residual supply, relative to its terms, that counts as unmet
_OPTIMAL = 1e-9
_PIVOTS_PER_ROW = 60


def start_from_costs(
    network: Network,
    state: State,
    tableau: Tableau,
    pivots: Pivots,
    equations: Equations,
    diluted: bool,
) -> bool:
    """Find the basis of least linear cost; False where the supplies are infeasible.

    Species and rows that the supplies force to zero leave the tableau.
    """
    place = find_basis(network, state, tableau, pivots, equations, diluted)
    if place < 0:
        return False
    copy_tableau(pivots, place, tableau.entries, tableau.basis)
    tableau.rank[0] = pivots.rank[place]
    remove_forced_zeros(state, tableau)
    return True


def find_basis(
    network: Network,
    state: State,
    tableau: Tableau,
    pivots: Pivots,
    equations: Equations,
    diluted: bool,
) -> int:
    """The place of the basis of least linear cost; −1 where the supplies are infeasible.

    ``diluted`` adds to each gas the logarithm of the largest fraction that the supplies allow.
    Reduced costs and supplies are left in the tableau.
    """
    restrict_to_face(network, state)
    place = first_place(network, state, pivots)
    for j in range(state.supplies.size):
        tableau.supply[j] = abs(state.supplies[j])
    set_costs(network, state, tableau, equations.step, diluted)
    place = find_feasible(state, tableau, pivots, place, equations.weight)
    place = expel_artificials(state, tableau, pivots, place)
    if place >= 0:
        place = improve(state, tableau, pivots, place)
        renew_supply(state, seen_from(pivots, place, tableau))
    return place


def restrict_to_face(network: Network, state: State) -> None:
    """Forbid the species of each one-signed row without supply."""
    rows, species = network.matrix.shape
    for i in range(species):
        state.face[i] = True
    for e in range(rows):
        if state.supplies[e] == 0.0 and network.sign[e] != 0:
            for i in range(species):
                if network.matrix[e, i] != 0.0:
                    state.face[i] = False
                    state.energies[i] = FORBIDDEN


def set_costs(
    network: Network, state: State, tableau: Tableau, log_supply: FloatArray, diluted: bool
) -> None:
    """c_i = g̃_i, for gases + ln min(1, min_e b_e/(a_ei N)) with N half the feed's atoms.

    ``log_supply`` is scratch memory, one number a row.
    """
    rows, species = network.matrix.shape
    total = 0.0
    for e in range(rows):
        total += network.direction[e] * state.supplies[e]
    dilute = diluted and total > 0.0
    half = log(0.5 * total) if dilute else 0.0
    for e in range(rows):
        bounds = network.sign[e] != 0 and state.supplies[e] != 0.0
        log_supply[e] = log(abs(state.supplies[e])) - half if bounds else inf
    reduced = tableau.reduced
    for i in range(species):
        reduced[i] = 0.0
    if dilute:
        for e in range(rows):
            for i in range(network.gases):
                reduced[i] = min(reduced[i], log_supply[e] - network.log_matrix[e, i])
    for i in range(species):
        reduced[i] = reduced[i] + state.energies[i] if state.face[i] else 0.0


def find_feasible(
    state: State, tableau: Tableau, pivots: Pivots, place: int, price: FloatArray
) -> int:
    """Phase one: drive the artificial variables to zero, least cost per unit of supply first.

    ``price`` holds what one unit of each species takes off their sum.
    """
    reduced = tableau.reduced
    species = reduced.size
    rows = tableau.supply.size
    for i in range(species):
        price[i] = 0.0
    for j in range(rows):
        for i in range(species):
            price[i] += pivots.entries[place, j, i]
    for _ in range(_PIVOTS_PER_ROW * rows):
        column = -1
        best = inf
        for i in range(species):
            if price[i] > ZERO and reduced[i] < best * price[i]:
                best = reduced[i] / price[i]
                column = i
        if column < 0:
            return place
        row = leaving_row(seen_from(pivots, place, tableau), column)
        place = enter(state, tableau, pivots, place, row, column)
        factor = price[column]
        for i in range(species):
            price[i] -= factor * pivots.entries[place, row, i]
        price[column] = 0.0
    return place


def enter(state: State, tableau: Tableau, pivots: Pivots, place: int, row: int, column: int) -> int:
    """Exchange, and hold the supplies of the basis at or above zero."""
    following = after_exchange(pivots, place, row, column)
    seen = seen_from(pivots, following, tableau)
    renew_costs(seen, row, column)
    renew_supply(state, seen)
    for j in range(seen.rank[0]):
        seen.supply[j] = max(seen.supply[j], 0.0)
    return following


def leaving_row(tableau: Tableau, column: int) -> int:
    """Ratio test: the row whose member first reaches zero as ``column`` grows, else −1."""
    supply, species = tableau.supply, tableau.reduced.size
    row = -1
    least = inf
    size = 0.0
    for j in range(tableau.rank[0]):
        entry = tableau.entries[j, column]
        if tableau.basis[j] >= species and supply[j] == 0.0:
            entry = abs(entry)
        if entry > ZERO:
            ratio = supply[j] / entry
            if ratio < least or (ratio == least and entry > size):
                row, least, size = j, ratio, entry
    return row


def expel_artificials(state: State, tableau: Tableau, pivots: Pivots, place: int) -> int:
    """Replace artificial variables at zero, retire rows without species; −1: infeasible."""
    reduced, supply, species = tableau.reduced, tableau.supply, tableau.reduced.size
    j = 0
    while j < pivots.rank[place]:
        if pivots.basis[place, j] < species:
            j += 1
            continue
        entries = pivots.entries[place]
        size = 0.0
        for e in range(state.supplies.size):
            size += abs(entries[j, species + e] * state.supplies[e])
        if supply[j] > _FEASIBLE * size:
            return -1
        supply[j] = 0.0
        column = -1
        for i in range(species):
            if abs(entries[j, i]) > ZERO and (column < 0 or reduced[i] < reduced[column]):
                column = i
        if column < 0:
            last = pivots.rank[place] - 1
            supply[j], supply[last] = supply[last], supply[j]
            place = after_retiring(pivots, place, j)
        else:
            place = after_exchange(pivots, place, j, column)
            renew_costs(seen_from(pivots, place, tableau), j, column)
            j += 1
    return place


def improve(state: State, tableau: Tableau, pivots: Pivots, place: int) -> int:
    """Phase two: enter the most negative reduced cost until none is left."""
    reduced = tableau.reduced
    for _ in range(_PIVOTS_PER_ROW * tableau.supply.size):
        column = 0
        for i in range(1, reduced.size):
            if reduced[i] < reduced[column]:
                column = i
        if reduced[column] > -_OPTIMAL:
            return place
        row = leaving_row(seen_from(pivots, place, tableau), column)
        if row < 0:
            return place
        place = enter(state, tableau, pivots, place, row, column)
    return place


def remove_forced_zeros(state: State, tableau: Tableau) -> None:
    """Drop rows that force their species to zero, and those species, repeatedly."""
    entries, species = tableau.entries, tableau.reduced.size
    j = 0
    while j < tableau.rank[0]:
        if not forces_zero(tableau, j):
            j += 1
            continue
        for i in range(species):
            if entries[j, i] > 0.0:
                exclude(state, tableau, i)
        retire(tableau, j)
        j = 0


def forces_zero(tableau: Tableau, j: int) -> bool:
    """Whether a row has no supply and entries of one sign only."""
    if tableau.supply[j] != 0.0:
        return False
    for i in range(tableau.reduced.size):
        if tableau.entries[j, i] < 0.0:
            return False
    return True


def feeds_gas(tableau: Tableau, gases: int) -> bool:
    """Whether a gas row has a supply of its own, and no row forces species to zero."""
    fed = False
    for j in range(tableau.rank[0]):
        if tableau.supply[j] == 0.0:
            if forces_zero(tableau, j):
                return False
        elif tableau.basis[j] < gases:
            fed = True
    return fed
