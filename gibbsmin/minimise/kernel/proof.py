"""The certificate of one state, computed where the state was solved.

The same statement as :mod:`gibbsmin.minimise.certificate`, which judges whole batches, in the
form that costs no second pass over memory.
"""

from __future__ import annotations

from math import exp, inf, log

from gibbsmin.arrays import FloatArray
from gibbsmin.minimise.kernel.storage import Network, Point, Proof, State, Tableau

GAP, BALANCE, STATIONARITY = 0, 1, 2

_SMALLEST_LOG = log(1e-300)
_LARGEST_EXPONENT = 300.0


def prove(
    network: Network,
    state: State,
    tableau: Tableau,
    point: Point,
    proof: Proof,
    figures: FloatArray,
) -> None:
    """Fill ``figures`` with gap, balance and stationarity, ``proof`` with λ and a·λ − g̃."""
    set_multipliers(state, tableau, point, proof)
    set_forces_and_residuals(network, state, point, proof)
    amounts, forces, gases = point.amounts, proof.forces, network.gases
    violation, stationarity, excess = gas_errors(amounts, forces, gases)
    for i in range(gases, amounts.size):
        violation = max(violation, forces[i])
        if amounts[i] > 0.0:
            stationarity = max(stationarity, abs(forces[i]))
            excess -= amounts[i] * forces[i]
    atoms = 0.0
    for i in range(amounts.size):
        atoms += network.atoms[i] * amounts[i]
        excess += violation * network.lift[i] * amounts[i]
    unmet = 0.0
    balance = 0.0
    for e in range(state.supplies.size):
        unmet += (proof.multipliers[e] - violation * network.direction[e]) * proof.residual[e]
        if proof.size[e] > 0.0:
            balance = max(balance, abs(proof.residual[e]) / proof.size[e])
    gap = excess + abs(unmet)
    figures[GAP] = gap / atoms if atoms > 0.0 else gap
    figures[BALANCE] = balance
    figures[STATIONARITY] = stationarity


def set_multipliers(state: State, tableau: Tableau, point: Point, proof: Proof) -> None:
    """λ with a_j·λ = g̃_j + u_j for every member of the basis, 0 for dependent rows."""
    species = tableau.reduced.size
    rows = proof.multipliers.size
    for e in range(rows):
        proof.multipliers[e] = 0.0
    for j in range(tableau.rank[0]):
        potential = state.energies[tableau.basis[j]] + point.log_fraction[j]
        for e in range(rows):
            proof.multipliers[e] += potential * tableau.entries[j, species + e]


def set_forces_and_residuals(network: Network, state: State, point: Point, proof: Proof) -> None:
    """a·λ − g̃ of each species; b − A n and |b| + |A| n of each row."""
    amounts, residual, size = point.amounts, proof.residual, proof.size
    for e in range(state.supplies.size):
        residual[e] = state.supplies[e]
        size[e] = abs(state.supplies[e])
    for i in range(amounts.size):
        force = -state.energies[i]
        amount = amounts[i]
        for p in range(network.first[i], network.first[i + 1]):
            e = network.row[p]
            force += network.entry[p] * proof.multipliers[e]
            term = network.entry[p] * amount
            residual[e] -= term
            size[e] += abs(term)
        proof.forces[i] = force if state.face[i] else -inf


def gas_errors(amounts: FloatArray, forces: FloatArray, gases: int) -> tuple[float, float, float]:
    """Violation of log Σ exp(a·λ − g̃) ≤ 0, stationarity, and Σ n (ln y − (a·λ − g̃)).

    With y = n/N, log Σ exp(force) = log Σ y exp(force − ln y) is at most the largest
    force − ln y.
    """
    total = 0.0
    for i in range(gases):
        total += amounts[i]
    violation = 0.0
    stationarity = 0.0
    excess = 0.0
    if total == 0.0:
        fractions = 0.0
        for i in range(gases):
            fractions += exp(min(forces[i], _LARGEST_EXPONENT))
        violation = max(log(fractions), 0.0) if fractions > 0.0 else 0.0
        return violation, stationarity, excess
    log_total = log(total)
    for i in range(gases):
        if amounts[i] > 0.0:
            log_fraction = log(amounts[i]) - log_total
            error = forces[i] - log_fraction
            if log_fraction > _SMALLEST_LOG:
                violation = max(violation, error)
                stationarity = max(stationarity, abs(error))
            excess -= amounts[i] * error
        elif forces[i] > _SMALLEST_LOG:
            stationarity = inf
    return violation, stationarity, excess
