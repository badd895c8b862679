"""The log balances of eight states of one basis, side by side.

The equations are those of :mod:`gibbsmin.minimise.kernel.residuals`; here the vector unit runs over
states, not over species, so that sums need no reduction across it and ν is one number for all.  The
two do not share code because what is contiguous differs: a lone state in lanes would cost as much
as eight.  Elimination needs no exchange of rows: about the solution the matrix is a positive
definite one with its rows scaled, and the last unknown only borders it.
"""

from __future__ import annotations

from gibbsmin.arrays import FloatArray, IntArray
from gibbsmin.minimise.kernel.elementary import exponential, logarithm
from gibbsmin.minimise.kernel.lane_storage import Lanes
from gibbsmin.minimise.kernel.storage import Tableau
from gibbsmin.minimise.kernel.vector import larger, load, magnitude, spread, store

_TOGETHER = 4


def evaluate_lanes(
    tableau: Tableau, unknown: IntArray, size: int, lanes: Lanes, gases: int
) -> None:
    """ln y and n of each gas, Σ y, and the total amount of gas."""
    total = exponential(load(lanes.log_total, 0))
    fractions = spread(0.0)
    for i in range(gases):
        exponent = 0.0 - load(lanes.reduced, i)
        for k in range(size):
            j = unknown[k]
            exponent = exponent + tableau.entries[j, i] * load(lanes.log_fraction, j)
        y = exponential(exponent)
        fractions = fractions + y
        store(lanes.amounts, i, total * y)
    store(lanes.sums, 0, fractions)
    store(lanes.sums, 1, total * fractions)


def list_entries(tableau: Tableau, unknown: IntArray, size: int, lanes: Lanes, gases: int) -> None:
    """List the gases of each unknown's row, those of positive entries first."""
    at = 0
    for k in range(size):
        j = unknown[k]
        lanes.part[2 * k] = at
        for i in range(gases):
            if tableau.entries[j, i] > 0.0:
                lanes.listed[at] = i
                at += 1
        lanes.part[2 * k + 1] = at
        for i in range(gases):
            if tableau.entries[j, i] < 0.0:
                lanes.listed[at] = i
                at += 1
    lanes.part[2 * size] = at


def sum_listed(tableau: Tableau, lanes: Lanes, j: int, side: int) -> FloatArray:
    """Σ |ν_ji| n_i over one sign of a row."""
    total = spread(0.0)
    for p in range(lanes.part[side], lanes.part[side + 1]):
        i = lanes.listed[p]
        total = total + abs(tableau.entries[j, i]) * load(lanes.amounts, i)
    return total


def fill_lane_residuals(tableau: Tableau, unknown: IntArray, size: int, lanes: Lanes) -> None:
    """The sums of either sign, the right-hand side −residual, and its largest of each lane."""
    zero = spread(0.0)
    largest = zero
    for k in range(size):
        j = unknown[k]
        supply = load(lanes.supply, j)
        gain = sum_listed(tableau, lanes, j, 2 * k)
        loss = sum_listed(tableau, lanes, j, 2 * k + 1)
        store(lanes.gain, k, gain)
        store(lanes.loss, k, loss)
        gain = gain + larger(zero - supply, zero)
        loss = loss + larger(supply, zero)
        store(lanes.per_part, 2 * k, 1.0 / gain)
        store(lanes.per_part, 2 * k + 1, 1.0 / loss)
        residual = logarithm(gain / loss)
        store(lanes.step, k, zero - residual)
        largest = larger(magnitude(residual), largest)
    residual = logarithm(load(lanes.sums, 0))
    store(lanes.step, size, zero - residual)
    store(lanes.residual, 0, larger(magnitude(residual), largest))


def fill_lane_jacobian(tableau: Tableau, unknown: IntArray, size: int, lanes: Lanes) -> None:
    """Derivatives of the residuals to u of each unknown, and last to ln N."""
    width = size + 1
    per_gas = 1.0 / load(lanes.sums, 1)
    for k in range(size):
        gain, loss = load(lanes.gain, k), load(lanes.loss, k)
        total = gain * load(lanes.per_part, 2 * k) - loss * load(lanes.per_part, 2 * k + 1)
        store(lanes.jacobian, k * width + size, total)
        store(lanes.jacobian, size * width + k, (gain - loss) * per_gas)
        weigh_row(tableau, unknown[k], lanes, k)
        for h in range(0, size, _TOGETHER):
            fill_entries(tableau, unknown, size, lanes, k, h)
    store(lanes.jacobian, width * width - 1, spread(0.0))


def weigh_row(tableau: Tableau, j: int, lanes: Lanes, k: int) -> None:
    """ν n over the part of the row that the gas belongs to."""
    for side in range(2 * k, 2 * k + 2):
        per_part = load(lanes.per_part, side)
        for p in range(lanes.part[side], lanes.part[side + 1]):
            i = lanes.listed[p]
            store(lanes.weight, p, tableau.entries[j, i] * per_part * load(lanes.amounts, i))


def fill_entries(
    tableau: Tableau, unknown: IntArray, size: int, lanes: Lanes, k: int, h: int
) -> None:
    """Some entries of a row together, as one sum would wait for each of its terms."""
    entries = tableau.entries
    last = size - 1
    j0, j1 = unknown[h], unknown[min(h + 1, last)]
    j2, j3 = unknown[min(h + 2, last)], unknown[min(h + 3, last)]
    sum0, sum1, sum2, sum3 = spread(0.0), spread(0.0), spread(0.0), spread(0.0)
    for p in range(lanes.part[2 * k], lanes.part[2 * k + 2]):
        i = lanes.listed[p]
        weight = load(lanes.weight, p)
        sum0 = sum0 + entries[j0, i] * weight
        sum1 = sum1 + entries[j1, i] * weight
        sum2 = sum2 + entries[j2, i] * weight
        sum3 = sum3 + entries[j3, i] * weight
    row = k * (size + 1)
    store(lanes.jacobian, row + min(h + 3, last), sum3)
    store(lanes.jacobian, row + min(h + 2, last), sum2)
    store(lanes.jacobian, row + min(h + 1, last), sum1)
    store(lanes.jacobian, row + h, sum0)


def solve_lanes(lanes: Lanes, width: int) -> None:
    """Eliminate in place; the step takes the place of the right-hand side."""
    matrix, step = lanes.jacobian, lanes.step
    for k in range(width):
        inverse = 1.0 / load(matrix, k * width + k)
        for i in range(k + 1, width):
            factor = load(matrix, i * width + k) * inverse
            for j in range(k + 1, width):
                changed = load(matrix, i * width + j) - factor * load(matrix, k * width + j)
                store(matrix, i * width + j, changed)
            store(step, i, load(step, i) - factor * load(step, k))
    for k in range(width - 1, -1, -1):
        total = load(step, k)
        for j in range(k + 1, width):
            total = total - load(matrix, k * width + j) * load(step, j)
        store(step, k, total / load(matrix, k * width + k))


def judge_phases(tableau: Tableau, unknown: IntArray, size: int, lanes: Lanes, gases: int) -> None:
    """Amounts of the condensed members, and by how much the phases are at odds with the basis.

    That is the largest driving force of an absent one and the largest relative amount below zero
    of a present one.
    """
    zero = spread(0.0)
    worst = zero
    for i in range(gases, tableau.reduced.size):
        force = zero - load(lanes.reduced, i)
        for k in range(size):
            j = unknown[k]
            force = force + tableau.entries[j, i] * load(lanes.log_fraction, j)
        store(lanes.amounts, i, zero)
        worst = larger(force, worst)
    for j in range(tableau.rank[0]):
        if tableau.basis[j] < gases:
            continue
        amount = load(lanes.supply, j)
        terms = magnitude(amount)
        for i in range(gases):
            term = tableau.entries[j, i] * load(lanes.amounts, i)
            amount = amount - term
            terms = terms + magnitude(term)
        store(lanes.amounts, tableau.basis[j], larger(amount, zero))
        worst = larger((zero - amount) / terms, worst)
    store(lanes.odds, 0, worst)
