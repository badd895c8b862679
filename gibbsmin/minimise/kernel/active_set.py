"""Which species stand in the basis: condensed phases appear and vanish, abundant gases enter.

Where a gas enters, its ln y is the one it has, and no potential changes.  Where a phase enters,
the potentials move to its saturation.
"""

from __future__ import annotations

from math import inf, log

from gibbsmin.minimise.kernel.storage import ZERO, Equations, Point, State, Tableau
from gibbsmin.minimise.kernel.tableau import exchange, renew_supply

_SUPERSATURATED = 1e-12
_ROUND_OFF = 4e-15
_ABUNDANT = 33.0  # e^3.5
_FIRM = 0.2
_TINY = 1e-300


def seat_gas(state: State, tableau: Tableau, point: Point, row: int, column: int) -> None:
    """Give a gas a row, at the fraction that it has."""
    exchange(tableau, row, column)
    point.log_fraction[row] = point.exponent[column]
    renew_supply(state, tableau)


def drop_phase(state: State, tableau: Tableau, point: Point, gases: int, row: int) -> bool:
    """Let the gas that carries most of the row take the place of its condensed member."""
    column = carrier(tableau, point, gases, row)
    if column >= 0:
        seat_gas(state, tableau, point, row, column)
    return column >= 0


def carrier(tableau: Tableau, point: Point, gases: int, row: int) -> int:
    """The gas that carries most of a row, −1 where none does."""
    column = -1
    most = 0.0
    for i in range(gases):
        entry = abs(tableau.entries[row, i])
        if entry > ZERO and entry * point.amounts[i] > most:
            column, most = i, entry * point.amounts[i]
    return column


def most_supersaturated(state: State, tableau: Tableau, point: Point, gases: int) -> int:
    """The absent phase of largest driving force a·λ − g̃, −1 where none is positive."""
    column = -1
    most = 0.0
    for i in range(gases, tableau.reduced.size):
        force = -tableau.reduced[i] - _SUPERSATURATED - _ROUND_OFF * abs(state.energies[i])
        for j in range(tableau.rank[0]):
            force += point.log_fraction[j] * tableau.entries[j, i]
        if force > most:
            column, most = i, force
    return column


def add_phase(
    state: State, tableau: Tableau, point: Point, gases: int, column: int, keep: bool
) -> bool:
    """Seat a phase in the row of the member that leaves for it."""
    row = leaving_member(tableau, point, gases, column, keep)
    if row >= 0:
        seat_phase(state, tableau, point, row, column)
    return row >= 0


def leaving_member(tableau: Tableau, point: Point, gases: int, column: int, keep: bool) -> int:
    """The row of the member that leaves for a phase, −1 where there is none.

    With ``keep`` all present phases stay until a solution shows one below zero, and the
    scarcest gas member of the phase's substance leaves; otherwise, or where no gas member
    shares its substance, the member that the growing phase uses up first.
    """
    row = -1
    least = inf
    if keep:
        for j in range(tableau.rank[0]):
            entry = abs(tableau.entries[j, column])
            if tableau.basis[j] < gases and entry > ZERO:
                ratio = point.amounts[tableau.basis[j]] / entry
                if ratio < least:
                    row, least = j, ratio
    if row < 0:
        for j in range(tableau.rank[0]):
            entry = tableau.entries[j, column]
            if entry > ZERO:
                member = tableau.basis[j]
                amount = point.amounts[member] if member < gases else point.condensed[j]
                ratio = max(amount, 0.0) / entry
                if ratio < least:
                    row, least = j, ratio
    return row


def seat_phase(state: State, tableau: Tableau, point: Point, row: int, column: int) -> None:
    """Give a phase a row, at its saturation."""
    exchange(tableau, row, column)
    point.log_fraction[row] = 0.0
    renew_supply(state, tableau)


def feed_row(state: State, tableau: Tableau, point: Point, gases: int, row: int) -> bool:
    """Bring in the phase that can balance a row which the gas alone could only leave empty."""
    column = -1
    for i in range(gases, tableau.reduced.size):
        if tableau.entries[row, i] < -ZERO and (
            column < 0 or tableau.reduced[i] < tableau.reduced[column]
        ):
            column = i
    if column < 0:
        return False
    seat_phase(state, tableau, point, row, column)
    return True


def admit_gas(state: State, tableau: Tableau, point: Point, gases: int) -> float:
    """Bring the likeliest gas into a basis that holds gas at amount zero only.

    Return ln of the amount to which it can grow, or +∞ where no phase can feed it.
    """
    column = -1
    row = -1
    most = 0.0
    largest = inf
    for i in range(gases):
        if point.amounts[i] <= most:
            continue
        least = inf
        feeding = -1
        for j in range(tableau.rank[0]):
            entry = tableau.entries[j, i]
            if tableau.basis[j] >= gases and entry > ZERO:
                ratio = max(tableau.supply[j], 0.0) / entry
                if ratio < least:
                    feeding, least = j, ratio
        if feeding >= 0:
            column, row, most, largest = i, feeding, point.amounts[i], least
    if column < 0:
        return inf
    seat_gas(state, tableau, point, row, column)
    return log(max(largest, _TINY))


def consumed_phase(tableau: Tableau, point: Point, gases: int) -> int:
    """The row of the phase that a growing gas of the present composition uses up first, else −1.

    Where the present phases hold the fractions above a sum of one, no amount of gas balances
    them: the gas grows until one phase is gone.
    """
    row = -1
    least = inf
    for j in range(tableau.rank[0]):
        if tableau.basis[j] < gases:
            continue
        drawn = 0.0
        for i in range(gases):
            drawn += tableau.entries[j, i] * point.amounts[i]
        if drawn > 0.0 and max(tableau.supply[j], 0.0) / drawn < least:
            row, least = j, max(tableau.supply[j], 0.0) / drawn
    return row


def seat_abundant(
    state: State, tableau: Tableau, point: Point, equations: Equations, gases: int, size: int
) -> bool:
    """Exchange each gas member that another gas of its row outweighs by far."""
    exchanged = False
    for k in range(size):
        j = equations.unknown[k]
        column = -1
        most = _ABUNDANT * point.amounts[tableau.basis[j]]
        for i in range(gases):
            entry = abs(tableau.entries[j, i])
            if entry > _FIRM and entry * point.amounts[i] > most:
                column, most = i, entry * point.amounts[i]
        if column >= 0:
            seat_gas(state, tableau, point, j, column)
            exchanged = True
    return exchanged
