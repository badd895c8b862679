"""The tableaus met so far, kept by the pivots that lead to them.

B⁻¹[A | I] depends on the pivots alone and not on the state, and many states take the same ones.
So each tableau is computed once and found again by its path: which supplies were negative or
zero, then one exchange after another.  A tableau found is to the bit what it would be if computed
anew.  When the memory is full, one spare place serves all further tableaus.
"""

from __future__ import annotations

from gibbsmin.arrays import FloatArray, IntArray
from gibbsmin.minimise.kernel.storage import Network, Pivots, State, Tableau
from gibbsmin.minimise.kernel.tableau import set_aside, turn

_NOWHERE = -1


def spare_place(pivots: Pivots) -> int:
    """The place that keeps nothing."""
    return int(pivots.key.size) - 1


def forget_all(pivots: Pivots) -> None:
    """Make all places free."""
    pivots.taken[0] = 0
    pivots.root[0] = _NOWHERE


def seen_from(pivots: Pivots, place: int, tableau: Tableau) -> Tableau:
    """The tableau at a place, with the supplies and reduced costs of the state at hand."""
    return Tableau(
        pivots.entries[place],
        pivots.basis[place],
        tableau.supply,
        tableau.reduced,
        pivots.rank[place : place + 1],
    )


def first_place(network: Network, state: State, pivots: Pivots) -> int:
    """Where the artificial basis stands, rows turned so that no supply is negative."""
    place = pivots.root[0]
    while place != _NOWHERE:
        if same_signs(network, state, pivots, place):
            return int(place)
        place = pivots.sibling[place]
    place = take_place(pivots, _NOWHERE, 0)
    fill_first(network, state, pivots, place)
    return place


def same_signs(network: Network, state: State, pivots: Pivots, place: int) -> bool:
    """Whether a first place was made for supplies of these signs."""
    for e in range(state.supplies.size):
        if pivots.sign[place, e] != sign_of(network, state, e):
            return False
    return True


def sign_of(network: Network, state: State, e: int) -> int:
    """−1 for a negative supply, 0 for one that forbids species, else 1."""
    if state.supplies[e] < 0.0:
        return -1
    return 0 if state.supplies[e] == 0.0 and network.sign[e] != 0 else 1


def fill_first(network: Network, state: State, pivots: Pivots, place: int) -> None:
    """[A | I] with the rows of negative supplies turned and no forbidden species."""
    entries, matrix = pivots.entries[place], network.matrix
    rows, species = matrix.shape
    for j in range(rows):
        pivots.sign[place, j] = sign_of(network, state, j)
        turned = -1.0 if state.supplies[j] < 0.0 else 1.0
        for i in range(species):
            entries[j, i] = turned * matrix[j, i] if state.face[i] else 0.0
        for e in range(rows):
            entries[j, species + e] = 0.0
        entries[j, species + j] = turned
        pivots.basis[place, j] = species + j
    pivots.rank[place] = rows


def after_exchange(pivots: Pivots, place: int, row: int, column: int) -> int:
    """Where the exchange of ``column`` for the member of ``row`` leads."""
    key = row * pivots.entries.shape[2] + column
    known = known_after(pivots, place, key)
    if known != _NOWHERE:
        return known
    following = copy_place(pivots, place, key)
    turn(pivots.entries[following], pivots.basis[following], row, column)
    return following


def after_retiring(pivots: Pivots, place: int, row: int) -> int:
    """Where moving a row beyond the rank leads."""
    rows, width = pivots.entries.shape[1:]
    key = rows * width + row
    known = known_after(pivots, place, key)
    if known != _NOWHERE:
        return known
    following = copy_place(pivots, place, key)
    last = pivots.rank[following] - 1
    set_aside(pivots.entries[following], pivots.basis[following], row, last)
    pivots.rank[following] = last
    return following


def known_after(pivots: Pivots, place: int, key: int) -> int:
    """The place already reached by this step, −1 where there is none."""
    following = pivots.child[place]
    while following != _NOWHERE and pivots.key[following] != key:
        following = pivots.sibling[following]
    return int(following)


def take_place(pivots: Pivots, before: int, key: int) -> int:
    """A new place, linked to the one before it; the spare one where none is left."""
    spare = spare_place(pivots)
    place = pivots.taken[0]
    if place == spare or before == spare:
        return spare
    pivots.taken[0] = place + 1
    pivots.key[place] = key
    pivots.child[place] = _NOWHERE
    links = pivots.root if before == _NOWHERE else pivots.child[before : before + 1]
    pivots.sibling[place] = links[0]
    links[0] = place
    return int(place)


def copy_place(pivots: Pivots, place: int, key: int) -> int:
    """A new place that holds what the one before it holds."""
    following = take_place(pivots, place, key)
    if following != place:
        copy_tableau(pivots, place, pivots.entries[following], pivots.basis[following])
        pivots.rank[following] = pivots.rank[place]
    return following


def copy_tableau(pivots: Pivots, place: int, entries: FloatArray, basis: IntArray) -> None:
    """Copy what a place holds, but for its rank."""
    rows, width = entries.shape
    for j in range(rows):
        basis[j] = pivots.basis[place, j]
        for i in range(width):
            entries[j, i] = pivots.entries[place, j, i]
