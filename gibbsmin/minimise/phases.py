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
from gibbsmin.minimise.tableau import independent_columns

_PRESENT = (1e-6, 1e-9, 1e-3)
_DRIVING_FORCE = 1e-13


def polish(state: Reduced, start: Start) -> Iterator[tuple[FloatArray, FloatArray]]:
    """Amounts and multipliers to be tried in turn; the certificate decides.

    The start tells the phases only as well as its accuracy allows, so several shares of the
    total are tried as the least that counts as present, each with a gas and without.
    """
    total = start.amounts.sum()
    gas_share = start.amounts[state.gas].sum() / total
    for least in _PRESENT:
        phases = np.flatnonzero(~state.gas & (start.amounts > least * total))
        with_gas = state.gas.any() and gas_share > 0
        if with_gas and gas_share > least:
            yield from _with_gas(state, phases, start)
            yield _without_gas(state, phases, start)
        else:
            yield _without_gas(state, phases, start)
            if with_gas:
                yield from _with_gas(state, phases, start)


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
            phases = _with_phase(state, phases, point.wanted, point)
        elif (held < 0).any():
            phases = np.delete(phases, np.argmin(held))
        elif not point.converged:
            return
        else:
            forces = point.multipliers @ state.matrix - state.energies
            forces[state.gas] = -np.inf
            forces[phases] = -np.inf
            worst = int(np.argmax(forces))
            if forces[worst] <= tolerance:
                yield point.amounts, point.multipliers
                return
            phases = _with_phase(state, phases, worst, point)
        if point.converged or point.wanted is not None:
            multipliers, log_total = point.multipliers, point.log_total


def _independent(state: Reduced, phases: IntArray, amounts: FloatArray) -> IntArray:
    """Independent phases, the most abundant first, and at least one row left for the gas."""
    order = phases[np.argsort(-amounts[phases], kind="stable")]
    chosen = independent_columns(state.matrix, order)
    return np.sort(chosen[: state.supplies.size - 1])


def _with_phase(state: Reduced, phases: IntArray, added: int, point: Point) -> IntArray:
    """Add a phase; where it is made of those present, the first to run out leaves."""
    columns = state.matrix[:, phases]
    shares, *_ = np.linalg.lstsq(columns, state.matrix[:, added], rcond=None)
    rest = np.linalg.norm(state.matrix[:, added] - columns @ shares)
    made_of_present = rest < 1e-8 * np.linalg.norm(state.matrix[:, added])
    if made_of_present or phases.size == state.supplies.size - 1:
        giving = np.flatnonzero(shares > 1e-9)
        if giving.size:
            ratios = point.amounts[phases[giving]] / shares[giving]
            phases = np.delete(phases, giving[np.argmin(ratios)])
    return np.sort(np.append(phases, added))


def _without_gas(state: Reduced, phases: IntArray, start: Start) -> tuple[FloatArray, FloatArray]:
    """Condensed phases alone: amounts from the balance, multipliers from their energies.

    Both are the smallest corrections of the start, which lies inside the set of optima where
    that is not a point, so that what it satisfies strictly stays so.
    """
    columns = state.matrix[:, phases]
    weight = start.amounts[phases]
    size = np.abs(columns) @ weight + np.abs(state.supplies)
    rows = 1.0 / np.where(size > 0, size, 1.0)
    amounts = np.zeros(state.gas.size)
    amounts[phases] = weight
    multipliers = start.multipliers
    for _ in range(2):
        short = state.supplies - columns @ amounts[phases]
        scaled = columns * weight * rows[:, None]
        amounts[phases] += weight * np.linalg.lstsq(scaled, short * rows, rcond=None)[0]
        excess = state.energies[phases] - multipliers @ columns
        multipliers = multipliers + np.linalg.lstsq(columns.T, excess, rcond=None)[0]
    return np.maximum(amounts, 0.0), multipliers
