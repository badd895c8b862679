"""The active set: which condensed phases, and whether a gas, are present.

A condensed phase whose amount comes out negative is dropped, and the absent phase of the largest
driving force a_c·λ − g̃_c > 0 is added, one at a time, until the answer has neither.
"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from gibbsmin.arrays import FloatArray, IntArray
from gibbsmin.minimise.conic import Start
from gibbsmin.minimise.newton import Point, Reduced, solve_gas
from gibbsmin.minimise.tableau import cheapest_vertex, feasible_vertex, independent_columns

_PRESENT = (1e-6, 1e-9, 1e-3)
_DRIVING_FORCE = 1e-13
_SHARE = 1e-9


def polish(state: Reduced, start: Start) -> Iterator[tuple[FloatArray, FloatArray]]:
    """Amounts and multipliers to be tried in turn; the certificate decides.

    The start tells the phases only as well as its accuracy allows, so several shares of the
    total are tried as the least that counts as present.
    """
    total = start.amounts.sum()
    gas_share = start.amounts[state.gas].sum() / total
    if gas_share < _PRESENT[0]:
        yield from _without_gas(state, start)
    if gas_share > 0:
        for least in _PRESENT:
            phases = np.flatnonzero(~state.gas & (start.amounts > least * total))
            yield from _with_gas(state, phases, start)
    if gas_share >= _PRESENT[0]:
        yield from _without_gas(state, start)


def _with_gas(
    state: Reduced, phases: IntArray, start: Start
) -> Iterator[tuple[FloatArray, FloatArray]]:
    multipliers = start.multipliers
    log_total = float(np.log(start.amounts[state.gas].sum()))
    tolerance = _DRIVING_FORCE * (1.0 + np.abs(state.energies).max())
    phases = _independent(state, phases, start.amounts)
    seen: set[tuple[int, ...]] = set()
    while tuple(phases) not in seen:
        seen.add(tuple(phases))
        point = solve_gas(state, phases, multipliers, log_total)
        if point is None:
            return
        held = point.amounts[phases]
        if point.wanted is not None:
            phases = np.sort(np.append(phases, point.wanted))
            multipliers = point.multipliers
        elif (held < 0).any():
            phases = np.delete(phases, np.argmin(held))
            if point.converged:
                multipliers, log_total = point.multipliers, point.log_total
        elif point.converged:
            forces = point.multipliers @ state.matrix - state.energies
            forces[state.gas] = -np.inf
            forces[phases] = -np.inf
            worst = int(np.argmax(forces))
            if forces[worst] <= tolerance:
                yield point.amounts, point.multipliers
                return
            phases, multipliers = _with_phase(state, phases, worst, point)
            log_total = point.log_total
        else:
            return


def _independent(state: Reduced, phases: IntArray, amounts: FloatArray) -> IntArray:
    """Independent phases, the most abundant first, and at least one row left for the gas."""
    order = phases[np.argsort(-amounts[phases], kind="stable")]
    chosen = independent_columns(state.matrix, order)
    return np.sort(chosen[: state.supplies.size - 1])


def _with_phase(
    state: Reduced, phases: IntArray, added: int, point: Point
) -> tuple[IntArray, FloatArray]:
    """Add a phase; the basis species that it uses up first leaves, or its potential falls.

    The multipliers move along that species' potential until the phase is at equilibrium.
    """
    gas = np.flatnonzero(state.gas)
    order = np.r_[phases, gas[np.argsort(-point.amounts[gas], kind="stable")]]
    basis = independent_columns(state.matrix, order)
    inverse = np.linalg.inv(state.matrix[:, basis])
    shares = inverse @ state.matrix[:, added]
    able = np.flatnonzero(shares > _SHARE)
    leaving = able[np.argmin(point.amounts[basis[able]] / shares[able])]
    force = point.multipliers @ state.matrix[:, added] - state.energies[added]
    kept = phases[phases != basis[leaving]]
    multipliers = point.multipliers - inverse[leaving] * force / shares[leaving]
    return np.sort(np.append(kept, added)), multipliers


def _without_gas(state: Reduced, start: Start) -> Iterator[tuple[FloatArray, FloatArray]]:
    """Condensed phases alone: a linear programme.

    Where fewer phases than rows are present the multipliers are not unique, and those of the
    vertex need not keep the gas away.  The start lies inside the set of optimal multipliers: its
    smallest correction that puts the phases present at equilibrium stays there.
    """
    condensed = np.flatnonzero(~state.gas)
    columns = state.matrix[:, condensed]
    vertex = feasible_vertex(columns, state.supplies)
    if vertex is None:
        return
    vertex = cheapest_vertex(vertex, state.energies[condensed])
    amounts = np.zeros(state.gas.size)
    amounts[condensed[vertex.basis]] = vertex.values
    for basis in (vertex.basis[vertex.values > 0], vertex.basis):
        excess = state.energies[condensed[basis]] - start.multipliers @ columns[:, basis]
        correction = np.linalg.lstsq(columns[:, basis].T, excess, rcond=None)[0]
        yield amounts, start.multipliers + correction
