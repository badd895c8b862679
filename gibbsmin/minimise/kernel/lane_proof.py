"""The certificates of eight states of one basis, side by side.

The statement is that of :mod:`gibbsmin.minimise.kernel.proof`, from each state's own g̃ and b; see
:mod:`gibbsmin.minimise.kernel.lane_equations` for why the code is another.  Whatever is out of
the ordinary spoils the figures, and the state is left to the other path.
"""

from __future__ import annotations

from math import inf, log

from gibbsmin.minimise.kernel.elementary import logarithm
from gibbsmin.minimise.kernel.lane_storage import Lanes
from gibbsmin.minimise.kernel.proof import BALANCE, GAP, STATIONARITY
from gibbsmin.minimise.kernel.storage import Network, Tableau
from gibbsmin.minimise.kernel.vector import (
    larger,
    load,
    magnitude,
    spread,
    store,
    where_above,
)

_SMALLEST = 1e-300
_SMALLEST_LOG = log(_SMALLEST)


def prove_lanes(network: Network, tableau: Tableau, lanes: Lanes) -> None:
    """Fill gap, balance and stationarity, λ and a·λ − g̃ of each lane, from its amounts."""
    set_lane_multipliers(tableau, lanes)
    set_lane_forces(network, lanes)
    zero = spread(0.0)
    amounts, gases, species = lanes.amounts, network.gases, network.atoms.size
    total = zero
    for i in range(gases):
        total = total + load(amounts, i)
    log_total = logarithm(total)
    violation = zero
    stationarity = zero
    excess = zero
    for i in range(gases):
        amount = load(amounts, i)
        force = load(lanes.forces, i)
        log_fraction = logarithm(larger(amount, spread(_SMALLEST))) - log_total
        error = force - log_fraction
        present = spread(_SMALLEST_LOG)
        absent = where_above(force, present, spread(inf), zero)
        stationarity = larger(
            where_above(log_fraction, present, magnitude(error), absent), stationarity
        )
        violation = larger(where_above(log_fraction, present, error, zero), violation)
        excess = excess - amount * error
    for i in range(gases, species):
        amount = load(amounts, i)
        force = load(lanes.forces, i)
        violation = larger(force, violation)
        stationarity = larger(where_above(amount, zero, magnitude(force), zero), stationarity)
        excess = excess - amount * force
    atoms = zero
    lift = zero
    for i in range(species):
        atoms = atoms + network.atoms[i] * load(amounts, i)
        lift = lift + network.lift[i] * load(amounts, i)
    unmet = zero
    balance = zero
    for e in range(network.direction.size):
        residual = load(lanes.unmet, e)
        unmet = unmet + (load(lanes.multipliers, e) - violation * network.direction[e]) * residual
        size = load(lanes.size, e)
        relative = where_above(size, zero, magnitude(residual) / size, zero)
        balance = larger(relative, balance)
    gap = excess + violation * lift + magnitude(unmet)
    store(lanes.figures, GAP, where_above(atoms, zero, gap / atoms, gap))
    store(lanes.figures, BALANCE, balance)
    store(lanes.figures, STATIONARITY, stationarity)


def set_lane_multipliers(tableau: Tableau, lanes: Lanes) -> None:
    """λ with a_j·λ = g̃_j + u_j for every member of the basis, 0 for dependent rows."""
    species = tableau.reduced.size
    for e in range(tableau.supply.size):
        total = spread(0.0)
        for j in range(tableau.rank[0]):
            potential = load(lanes.energies, tableau.basis[j]) + load(lanes.log_fraction, j)
            total = total + potential * tableau.entries[j, species + e]
        store(lanes.multipliers, e, total)


def set_lane_forces(network: Network, lanes: Lanes) -> None:
    """a·λ − g̃ of each species; b − A n and |b| + |A| n of each row."""
    for e in range(network.direction.size):
        supply = load(lanes.feed, e)
        store(lanes.unmet, e, supply)
        store(lanes.size, e, magnitude(supply))
    for i in range(network.atoms.size):
        force = spread(0.0) - load(lanes.energies, i)
        amount = load(lanes.amounts, i)
        for p in range(network.first[i], network.first[i + 1]):
            e = network.row[p]
            force = force + network.entry[p] * load(lanes.multipliers, e)
            term = network.entry[p] * amount
            store(lanes.unmet, e, load(lanes.unmet, e) - term)
            store(lanes.size, e, load(lanes.size, e) + magnitude(term))
        store(lanes.forces, i, force)
