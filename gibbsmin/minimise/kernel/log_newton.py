"""Newton's method on the logarithms of the balances, with phases entering and leaving the basis.

The unknowns are the logarithms of the fractions of a few abundant species, the optimised basis
of S. R. Brinkley, J. Chem. Phys. 15 (1947) 107–110; every other amount follows from the
equilibrium of its formation from the basis.  Newton's method runs on the logarithm of each
balance, in which power laws of the fractions are straight lines.
"""

from __future__ import annotations

from math import exp, inf, log, nan

from gibbsmin.arrays import FloatArray
from gibbsmin.minimise.kernel.active_set import (
    add_phase,
    admit_gas,
    consumed_phase,
    drop_phase,
    feed_row,
    most_supersaturated,
    seat_abundant,
)
from gibbsmin.minimise.kernel.heat import (
    border,
    evaluate_energies,
    heat_residual,
    longest_step,
    reduce_enthalpies,
)
from gibbsmin.minimise.kernel.linear import solve_in_place
from gibbsmin.minimise.kernel.residuals import (
    evaluate_condensed,
    evaluate_gas,
    fill_jacobian,
    fill_residuals,
    list_unknowns,
    row_parts,
)
from gibbsmin.minimise.kernel.storage import Equations, Heat, Point, State, Tableau
from gibbsmin.minimise.kernel.tableau import renew_reduced

_BALANCING = 40
_BALANCED = 0.1
_BRACKET = 100.0
_CONVERGED = 1e-13
_STALLED = 1e-11
_NEAR = 1.0  # residual below which phases are judged, less after each exchange
_CAUTION = 0.6
_LONG_STEP = 8.0
_SHORT_STEP = 2.0
_LONG_STEPS = 25
_SLOW = 0.95
_PATIENCE = 4  # slow steps before a phase is taken out
_LARGEST_LOG = 600.0

CONVERGED, EXCHANGED, UNCHANGED, STUCK = 0, 1, 2, 3


def guess_fractions(tableau: Tableau, point: Point, equations: Equations, gases: int) -> float:
    """u_j = ln(b′_j / Σ b′) from a basis alone; return ln N.

    A gas member without a supply of its own gets the fraction that balances its row.
    """
    total = 0.0
    for j in range(tableau.rank[0]):
        if tableau.basis[j] < gases:
            total += max(tableau.supply[j], 0.0)
    if total == 0.0:
        total = 1.0
    without = False
    for j in range(tableau.rank[0]):
        point.log_fraction[j] = 0.0
        if tableau.basis[j] < gases:
            if tableau.supply[j] > 0.0:
                point.log_fraction[j] = log(tableau.supply[j] / total)
            else:
                without = True
    log_total = log(total)
    if without:
        size = list_unknowns(tableau, point, equations, gases)
        for k in range(size):
            if tableau.supply[equations.unknown[k]] <= 0.0:
                balance_row(tableau, point, equations, gases, k, log_total)
    return log_total


def balance_row(
    tableau: Tableau, point: Point, equations: Equations, gases: int, k: int, log_total: float
) -> None:
    """Solve the k-th log balance for its own u, the others held.

    ln P_j − ln Q_j rises with u_j; Newton's steps are bounded and stay within the bracket that
    the signs seen so far leave.
    """
    j = equations.unknown[k]
    low, high = -inf, inf
    for _ in range(_BALANCING):
        evaluate_gas(tableau, point, gases, log_total)
        gain, loss, slope_gain, slope_loss = row_parts(tableau, point, gases, j)
        u = point.log_fraction[j]
        if gain <= 0.0 or loss <= 0.0:
            return
        residual = log(gain / loss)
        if residual > 0.0:
            high = u
        else:
            low = u
        if abs(residual) < _BALANCED:
            return
        step = -residual / (slope_gain / gain + slope_loss / loss)
        step = min(max(step, -_BRACKET), _BRACKET)
        target = u + step
        if not low < target < high:
            target = 0.5 * (low + high)
        point.log_fraction[j] = target


def minimise_from(
    state: State,
    tableau: Tableau,
    point: Point,
    equations: Equations,
    heat: Heat,
    temperature: FloatArray,
    gases: int,
    log_total: float,
    keep: bool,
    limit: int,
) -> float:
    """Run to convergence from the basis, its fractions and ln N; leave n in ``amounts``.

    A temperature above 0 is an unknown, at which the state has the enthalpy given in ``heat``.
    ``keep`` chooses which member leaves for a new phase (:func:`add_phase`).  Return ln N, or
    NaN where ``limit`` iterations do not suffice.
    """
    heated = temperature[0] > 0.0
    size = list_unknowns(tableau, point, equations, gases)
    settled = True  # no exchange since the last Newton step: two exchanges in a row cascade
    previous = inf
    near = _NEAR
    stalls = 0
    for iteration in range(limit):
        supplied = has_supply(tableau, equations, size)
        if not supplied:
            log_total = 0.0
        if not abs(log_total) < _LARGEST_LOG or (heated and not supplied):
            return nan
        if heated:
            evaluate_energies(state, heat, temperature[0])
            renew_reduced(state, tableau)
            reduce_enthalpies(tableau, heat, gases)
        fractions = evaluate_gas(tableau, point, gases, log_total)
        residual = fill_residuals(tableau, point, equations, gases, size, fractions)
        if supplied:
            residual = max(residual, abs(equations.step[size]))
        excess = 0.0
        if heated:
            excess = heat_residual(tableau, point, heat, gases, temperature[0])
            residual = max(residual, abs(excess))
        converged = residual <= _CONVERGED or (
            residual <= _STALLED and 0.3 * previous < residual <= previous
        )
        if converged and not supplied and fractions > 1.0 + _CONVERGED:
            log_total = admit_gas(state, tableau, point, gases)
            if log_total == inf:
                return nan
            outcome = EXCHANGED
        elif residual == inf:
            row = empty_row(equations, size)
            fed = row >= 0 and feed_row(state, tableau, point, gases, row)
            outcome = EXCHANGED if fed else STUCK
        elif stalls == _PATIENCE:
            row = consumed_phase(tableau, point, gases)
            dropped = row >= 0 and drop_phase(state, tableau, point, gases, row)
            outcome = EXCHANGED if dropped else UNCHANGED
            stalls = 0
        elif (settled and residual < near) or converged:
            outcome = update_phases(state, tableau, point, gases, supplied, keep)
        else:
            outcome = UNCHANGED
        if outcome == STUCK:
            return nan
        if outcome == EXCHANGED:
            size = list_unknowns(tableau, point, equations, gases)
            settled = False
            previous = inf
            near *= _CAUTION
            continue
        if converged:
            write_amounts(tableau, point, gases, supplied)
            return log_total
        if iteration in (3, 6, 12, 20, 30) and seat_abundant(
            state, tableau, point, equations, gases, size
        ):
            fill_residuals(tableau, point, equations, gases, size, fractions)
            if heated:
                reduce_enthalpies(tableau, heat, gases)
        fill_jacobian(tableau, point, equations, gases, size)
        unknowns = size + 1 if supplied else size
        if heated:
            border(tableau, point, equations, heat, gases, size, temperature[0], excess)
            unknowns += 1
        if not solve_in_place(equations.jacobian, equations.step, unknowns):
            return nan
        longest = _LONG_STEP if iteration < _LONG_STEPS else _SHORT_STEP
        scale = step_scale(equations, unknowns, longest)
        if heated:
            change = equations.step[size + 1]
            scale = min(scale, longest_step(change))
            temperature[0] *= exp(scale * change)
            if not heat.target[1] <= temperature[0] <= heat.target[2]:
                return nan
        log_total += take_step(point, equations, size, supplied, scale)
        settled = True
        stalls = stalls + 1 if residual > _SLOW * previous else 0
        previous = residual
    return nan


def update_phases(
    state: State, tableau: Tableau, point: Point, gases: int, with_gas: bool, keep: bool
) -> int:
    """Drop the phase most below zero; where there is none, add the most supersaturated."""
    row = evaluate_condensed(tableau, point, gases, with_gas)
    if row >= 0:
        return EXCHANGED if drop_phase(state, tableau, point, gases, row) else STUCK
    column = most_supersaturated(state, tableau, point, gases)
    if column >= 0:
        return EXCHANGED if add_phase(state, tableau, point, gases, column, keep) else STUCK
    return UNCHANGED


def empty_row(equations: Equations, size: int) -> int:
    """The row whose positive or negative part holds nothing, −1 where there is none."""
    for k in range(size):
        if equations.gain[k] <= 0.0 or equations.loss[k] <= 0.0:
            return int(equations.unknown[k])
    return -1


def has_supply(tableau: Tableau, equations: Equations, size: int) -> bool:
    """Whether a gas row has a supply of its own, so that gas must be present."""
    for k in range(size):
        if tableau.supply[equations.unknown[k]] != 0.0:
            return True
    return False


def step_scale(equations: Equations, unknowns: int, limit: float) -> float:
    """The share of a step whose longest component is no longer than ``limit``."""
    longest = 0.0
    for k in range(unknowns):
        longest = max(longest, abs(equations.step[k]))
    return limit / longest if longest > limit else 1.0


def take_step(point: Point, equations: Equations, size: int, with_gas: bool, scale: float) -> float:
    """Move the fractions by a share of the step; return the change of ln N."""
    for k in range(size):
        point.log_fraction[equations.unknown[k]] += scale * equations.step[k]
    return scale * equations.step[size] if with_gas else 0.0


def write_amounts(tableau: Tableau, point: Point, gases: int, with_gas: bool) -> None:
    """Set the condensed amounts beside those of the gas, or no gas at all."""
    amounts = point.amounts
    for i in range(0 if not with_gas else gases, amounts.size):
        amounts[i] = 0.0
    for j in range(tableau.rank[0]):
        if tableau.basis[j] >= gases:
            amounts[tableau.basis[j]] = max(point.condensed[j], 0.0)
