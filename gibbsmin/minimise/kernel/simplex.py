"""A linear programme for a start: Dantzig's simplex method on the tableau.

The gas is taken at guessed fractions, which makes the Gibbs energy linear: minimise c·n subject
to A n = b, n ≥ 0.  Source of the method: G. B. Dantzig, "Linear Programming and Extensions",
Princeton University Press, 1963; the linear programme as the start of a Gibbs-energy
minimisation follows W. B. White, S. M. Johnson, G. B. Dantzig, J. Chem. Phys. 28 (1958) 751–755.
"""

from __future__ import annotations

from math import inf, log

from gibbsmin.arrays import FloatArray
from gibbsmin.minimise.kernel.storage import ZERO, Equations, Network, State, Tableau
from gibbsmin.minimise.kernel.tableau import build, exchange, forbid, renew_supply, retire

_FEASIBLE = 1e-11  # residual supply, relative to its terms, that counts as unmet
_OPTIMAL = 1e-9
_PIVOTS_PER_ROW = 60


def start_from_costs(
    network: Network, state: State, tableau: Tableau, equations: Equations, diluted: bool
) -> bool:
    """Find the basis of least linear cost; False where the supplies are infeasible.

    ``diluted`` adds to each gas the logarithm of the largest fraction that the supplies allow.
    Species and rows that the supplies force to zero leave the tableau.
    """
    restrict_to_face(network, state, tableau)
    build(network, state, tableau)
    set_costs(network, state, tableau, equations.step, diluted)
    find_feasible(state, tableau, equations.weight)
    if not expel_artificials(state, tableau):
        return False
    improve(state, tableau)
    renew_supply(state, tableau)
    remove_forced_zeros(state, tableau)
    return True


def restrict_to_face(network: Network, state: State, tableau: Tableau) -> None:
    """Forbid the species of each one-signed row without supply."""
    rows, species = network.matrix.shape
    for i in range(species):
        state.face[i] = True
    for e in range(rows):
        if state.supplies[e] == 0.0 and network.sign[e] != 0:
            for i in range(species):
                if network.matrix[e, i] != 0.0:
                    forbid(state, tableau, i)


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
    for i in range(species):
        cost = state.energies[i] if state.face[i] else 0.0
        if dilute and i < network.gases and state.face[i]:
            share = 0.0
            for p in range(network.first[i], network.first[i + 1]):
                share = min(share, log_supply[network.row[p]] - network.log_entry[p])
            cost += share
        tableau.reduced[i] = cost


def find_feasible(state: State, tableau: Tableau, price: FloatArray) -> None:
    """Phase one: drive the artificial variables to zero, least cost per unit of supply first.

    ``price`` holds what one unit of each species takes off their sum.
    """
    reduced, entries = tableau.reduced, tableau.entries
    species = reduced.size
    rows = entries.shape[0]
    for i in range(species):
        price[i] = 0.0
    for j in range(rows):
        for i in range(species):
            price[i] += entries[j, i]
    for _ in range(_PIVOTS_PER_ROW * rows):
        column = -1
        best = inf
        for i in range(species):
            if price[i] > ZERO and reduced[i] < best * price[i]:
                best = reduced[i] / price[i]
                column = i
        if column < 0:
            return
        row = leaving_row(tableau, column)
        exchange(tableau, row, column)
        clean_supply(state, tableau)
        factor = price[column]
        for i in range(species):
            price[i] -= factor * entries[row, i]
        price[column] = 0.0


def clean_supply(state: State, tableau: Tableau) -> None:
    """Recompute the supplies of the basis and hold them at or above zero."""
    renew_supply(state, tableau)
    for j in range(tableau.rank[0]):
        tableau.supply[j] = max(tableau.supply[j], 0.0)


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


def expel_artificials(state: State, tableau: Tableau) -> bool:
    """Replace artificial variables at zero, retire rows without species; False: infeasible."""
    entries, reduced, species = tableau.entries, tableau.reduced, tableau.reduced.size
    j = 0
    while j < tableau.rank[0]:
        if tableau.basis[j] < species:
            j += 1
            continue
        size = 0.0
        for e in range(state.supplies.size):
            size += abs(entries[j, species + e] * state.supplies[e])
        if tableau.supply[j] > _FEASIBLE * size:
            return False
        tableau.supply[j] = 0.0
        column = -1
        for i in range(species):
            if abs(entries[j, i]) > ZERO and (column < 0 or reduced[i] < reduced[column]):
                column = i
        if column < 0:
            retire(tableau, j)
        else:
            exchange(tableau, j, column)
            j += 1
    return True


def improve(state: State, tableau: Tableau) -> None:
    """Phase two: enter the most negative reduced cost until none is left."""
    reduced = tableau.reduced
    for _ in range(_PIVOTS_PER_ROW * tableau.supply.size):
        column = 0
        for i in range(1, reduced.size):
            if reduced[i] < reduced[column]:
                column = i
        if reduced[column] > -_OPTIMAL:
            return
        row = leaving_row(tableau, column)
        if row < 0:
            return
        exchange(tableau, row, column)
        clean_supply(state, tableau)


def remove_forced_zeros(state: State, tableau: Tableau) -> None:
    """Drop rows without supply whose entries have one sign, and their species, repeatedly."""
    entries, species = tableau.entries, tableau.reduced.size
    j = 0
    while j < tableau.rank[0]:
        one_signed = tableau.supply[j] == 0.0
        if one_signed:
            for i in range(species):
                if entries[j, i] < 0.0:
                    one_signed = False
                    break
        if not one_signed:
            j += 1
            continue
        for i in range(species):
            if entries[j, i] > 0.0:
                forbid(state, tableau, i)
        retire(tableau, j)
        j = 0
