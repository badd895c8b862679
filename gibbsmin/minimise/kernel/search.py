"""A state of given enthalpy by a search in temperature, each solved at its own temperature.

H never falls as T rises, so that every temperature solved narrows the bracket; Newton's step for
H, from the bordered system of :mod:`gibbsmin.minimise.kernel.heat`, is taken where it stays
inside, else the bracket is halved.  Where H jumps there is no answer here.
"""

from __future__ import annotations

from math import exp, inf, isnan, nan, sqrt

from gibbsmin.minimise.kernel.heat import (
    border,
    evaluate_energies,
    heat_residual,
    reduce_enthalpies,
)
from gibbsmin.minimise.kernel.linear import solve_in_place
from gibbsmin.minimise.kernel.log_newton import guess_fractions, has_supply, minimise_from
from gibbsmin.minimise.kernel.residuals import (
    evaluate_gas,
    fill_jacobian,
    fill_residuals,
    list_unknowns,
)
from gibbsmin.minimise.kernel.simplex import start_from_costs
from gibbsmin.minimise.kernel.storage import Network, Scratch
from gibbsmin.minimise.kernel.tableau import renew_reduced

_SEARCHES = 60
_ITERATIONS = 80
_MET = 1e-13
_STALLED = 1e-11
_NARROW = 1e-14


def search_temperature(network: Network, scratch: Scratch) -> float:
    """Find T and leave the solved state; ln N, or +∞ where no temperature is found."""
    state, tableau, point, heat = scratch.state, scratch.tableau, scratch.point, scratch.heat
    T = scratch.temperature[0]
    low, high = heat.target[1], heat.target[2]
    previous = inf
    for _ in range(_SEARCHES):
        for i in range(state.face.size):
            state.face[i] = True
        evaluate_energies(state, heat, T)
        scratch.temperature[0] = 0.0
        log_total = nan
        if start_from_costs(network, state, tableau, scratch.pivots, scratch.equations, True):
            renew_reduced(state, tableau)
            log_total = guess_fractions(tableau, point, scratch.equations, network.gases)
            log_total = minimise_from(
                state,
                tableau,
                point,
                scratch.equations,
                heat,
                scratch.temperature,
                network.gases,
                log_total,
                True,
                _ITERATIONS,
            )
        scratch.temperature[0] = T
        if isnan(log_total):
            return inf
        excess, change = newton_step(scratch, network.gases, log_total, T)
        if isnan(change):
            return inf
        if abs(excess) <= _MET or (abs(excess) <= 1e-11 and abs(excess) >= 0.3 * previous):
            return log_total
        if excess > 0.0:
            high = T
        else:
            low = T
        previous = abs(excess)
        T *= exp(min(max(change, -1.0), 1.0))
        if not low < T < high:
            T = sqrt(low * high)
        if high - low <= _NARROW * high:
            return inf
    return inf


def newton_step(scratch: Scratch, gases: int, log_total: float, T: float) -> tuple[float, float]:
    """(H − wanted)/(T C) of a solved state, and the change of ln T that would remove it."""
    tableau, point, equations, heat = (
        scratch.tableau,
        scratch.point,
        scratch.equations,
        scratch.heat,
    )
    size = list_unknowns(tableau, point, equations, gases)
    if not has_supply(tableau, equations, size):
        return inf, nan
    reduce_enthalpies(tableau, heat, gases)
    fractions = evaluate_gas(tableau, point, gases, log_total)
    excess = heat_residual(tableau, point, heat, gases, T)
    fill_residuals(tableau, point, equations, gases, size, fractions)
    fill_jacobian(tableau, point, equations, gases, size)
    for k in range(size + 1):
        equations.step[k] = 0.0
    border(tableau, point, equations, heat, gases, size, T, excess)
    if not solve_in_place(equations.jacobian, equations.step, size + 2):
        return excess, nan
    return excess, equations.step[size + 1]
