"""Temperature as a further unknown: the enthalpy of the state is given in its place.

With the reduced enthalpies h′_i = h_i − Σ_j ν_ji h_j of the basis members j, all in K,

    H = Σ_j b′_j h_j + Σ_gas n_i h′_i,        ∂ln n_i/∂ln T = h′_i/T at fixed u and ln N,

so the Newton system gains a column and a row, whose residual is that of H over T C, C the frozen
heat capacity: about the relative error of T.  H rises with T at equilibrium, so the first answer
is the only one.
"""

from __future__ import annotations

from math import inf, log

from gibbsmin.arrays import FloatArray
from gibbsmin.minimise.kernel.storage import (
    FORBIDDEN,
    Equations,
    Heat,
    Network,
    Point,
    Scratch,
    State,
    Tableau,
)

_LONGEST = 0.2  # largest change of ln T in a step
_GUESSES = 30
_GUESSED = 1e-3


def load_heated(network: Network, scratch: Scratch, content: float, offsets: FloatArray) -> None:
    """Take what was loaded as g̃ for its constant part, and evaluate all of it at T."""
    state, heat = scratch.state, scratch.heat
    for i in range(state.energies.size):
        heat.constant[i] = state.energies[i]
        heat.offset[i] = offsets[network.order[i]]
    heat.target[0] = content
    evaluate_energies(state, heat, scratch.temperature[0])


def evaluate_energies(state: State, heat: Heat, T: float) -> None:
    """g̃, h = H/R in K and c = Cp/R of every species allowed, at T.

    The pieces are those of :class:`gibbsmin.thermo.properties.PropertyTable`, over R:
    c = A + B t + C t² + D t³ + E/t² with t = T/(1000 K), h and s its integrals; beyond the last
    break the last piece holds.
    """
    t = 1e-3 * T
    log_t = log(t)
    inverse = 1.0 / t
    per_square = inverse * inverse
    per_T = 1.0 / T
    pieces = heat.breaks.shape[0] + 1
    for i in range(state.energies.size):
        if not state.face[i]:
            state.energies[i] = FORBIDDEN
            heat.enthalpy[i] = 0.0
            heat.capacity[i] = 0.0
            continue
        place = i * pieces
        for k in range(pieces - 1):
            if heat.breaks[k, i] <= T:
                place += 1
        A, B, C = heat.pieces[0, place], heat.pieces[1, place], heat.pieces[2, place]
        D, E = heat.pieces[3, place], heat.pieces[4, place]
        h = heat.pieces[5, place] + heat.offset[i]
        h += 1e3 * (t * (A + t * (B / 2.0 + t * (C / 3.0 + t * (D / 4.0)))) - E * inverse)
        s = heat.pieces[6, place] + A * log_t
        s += t * (B + t * (C / 2.0 + t * (D / 3.0))) - 0.5 * E * per_square
        heat.enthalpy[i] = h
        heat.capacity[i] = A + t * (B + t * (C + t * D)) + E * per_square
        state.energies[i] = h * per_T - s + heat.constant[i]


def reduce_enthalpies(tableau: Tableau, heat: Heat, gases: int) -> None:
    """h′ of the gases in the present basis."""
    reduced = heat.reduced
    for i in range(gases):
        reduced[i] = heat.enthalpy[i]
    for j in range(tableau.rank[0]):
        member = heat.enthalpy[tableau.basis[j]]
        for i in range(gases):
            reduced[i] -= member * tableau.entries[j, i]


def guess_temperature(state: State, tableau: Tableau, heat: Heat, start: float) -> float:
    """T at which the basis alone has the wanted enthalpy; +∞ where none is found.

    The basis of the linear programme is what a reaction gone to its end leaves, such as burnt
    gas, so that a flame is sought from above.
    """
    T = start
    for _ in range(_GUESSES):
        evaluate_energies(state, heat, T)
        content = 0.0
        capacity = 0.0
        for j in range(tableau.rank[0]):
            content += tableau.supply[j] * heat.enthalpy[tableau.basis[j]]
            capacity += tableau.supply[j] * heat.capacity[tableau.basis[j]]
        if not capacity > 0.0:
            return inf
        change = (heat.target[0] - content) / (capacity * T)
        T *= 1.0 + min(max(change, -0.5), 1.0)
        T = min(max(T, heat.target[1]), heat.target[2])
        if abs(change) < _GUESSED:
            break
    return T


def heat_residual(tableau: Tableau, point: Point, heat: Heat, gases: int, T: float) -> float:
    """(H − wanted)/(T C); the frozen capacity C/R is left in ``target``."""
    content = -heat.target[0]
    capacity = 0.0
    for i in range(gases):
        content += point.amounts[i] * heat.reduced[i]
        capacity += point.amounts[i] * heat.capacity[i]
    for j in range(tableau.rank[0]):
        member = tableau.basis[j]
        content += tableau.supply[j] * heat.enthalpy[member]
        if member >= gases:
            amount = tableau.supply[j]
            for i in range(gases):
                amount -= tableau.entries[j, i] * point.amounts[i]
            capacity += max(amount, 0.0) * heat.capacity[member]
    heat.target[3] = capacity
    return content / (T * capacity) if capacity > 0.0 else inf


def border(
    tableau: Tableau,
    point: Point,
    equations: Equations,
    heat: Heat,
    gases: int,
    size: int,
    T: float,
    residual: float,
) -> None:
    """Append the column of ln T and the row of H to the Newton system, after that of ln N."""
    entries, jacobian, amounts = tableau.entries, equations.jacobian, point.amounts
    reduced, last = heat.reduced, size + 1
    scale = 1.0 / (T * heat.target[3])
    total = 0.0
    along = 0.0
    square = 0.0
    for i in range(gases):
        total += amounts[i]
        along += amounts[i] * reduced[i]
        square += amounts[i] * reduced[i] * reduced[i]
    for k in range(size):
        j = equations.unknown[k]
        per_gain = 1.0 / equations.gain[k]
        per_loss = 1.0 / equations.loss[k]
        by_T = 0.0
        by_u = 0.0
        for i in range(gases):
            moved = entries[j, i] * amounts[i] * reduced[i]
            by_u += moved
            by_T += moved * (per_gain if entries[j, i] > 0.0 else per_loss)
        jacobian[k, last] = by_T / T
        jacobian[last, k] = by_u * scale
    jacobian[size, last] = along / (T * total)
    jacobian[last, size] = along * scale
    jacobian[last, last] = 1.0 + square * scale / T
    equations.step[last] = -residual


def longest_step(change: float) -> float:
    """The share of a step that keeps the change of ln T within bounds."""
    return _LONGEST / abs(change) if abs(change) > _LONGEST else 1.0
