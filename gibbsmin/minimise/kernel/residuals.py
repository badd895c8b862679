"""Residuals of the log balances and their derivatives.

Row j of the tableau says Σ ν_ji n_i = b′_j.  For each row whose basis member is a gas, collect
what is positive on the left and what is positive on the right,

    P_j = Σ_{ν>0} ν_ji n_i + max(0, −b′_j),   Q_j = Σ_{ν<0} |ν_ji| n_i + max(0, b′_j);

the residual is ln P_j − ln Q_j, nearly linear in the logarithms of the fractions however large
or small the amounts.  The last residual is ln Σ y_i.  Unknowns are u_j = ln y of the gas members
and ln N, and n_i = N y_i with ln y_i = Σ_j ν_ji u_j − reduced_i.
"""

from __future__ import annotations

from math import exp, inf, log

from gibbsmin.minimise.kernel.exponential import exponentials
from gibbsmin.minimise.kernel.storage import Equations, Point, Tableau

_ROUND_OFF = 1e-12


def list_unknowns(tableau: Tableau, point: Point, equations: Equations, gases: int) -> int:
    """List the rows whose member is a gas; return their number."""
    size = 0
    for j in range(tableau.rank[0]):
        if tableau.basis[j] < gases:
            equations.unknown[size] = j
            size += 1
        else:
            point.log_fraction[j] = 0.0
    return size


def evaluate_gas(tableau: Tableau, point: Point, gases: int, log_total: float) -> float:
    """Fill ln y_i and n_i of every gas; return Σ y_i."""
    exponent, amounts = point.exponent, point.amounts
    for i in range(gases):
        exponent[i] = -tableau.reduced[i]
    for j in range(tableau.rank[0]):
        u = point.log_fraction[j]
        if u != 0.0:
            for i in range(gases):
                exponent[i] += u * tableau.entries[j, i]
    exponentials(point, gases)
    total = exp(log_total)
    fractions = 0.0
    for i in range(gases):
        y = point.fraction[i]
        fractions += y
        amounts[i] = total * y
    return fractions


def evaluate_condensed(tableau: Tableau, point: Point, gases: int, with_gas: bool) -> int:
    """Amounts of the condensed members by their rows; return the row most below zero, else −1.

    Judged relative to the terms of the row, so that round-off about zero drops no phase.
    """
    lowest = -_ROUND_OFF
    row = -1
    for j in range(tableau.rank[0]):
        if tableau.basis[j] < gases:
            continue
        total = tableau.supply[j]
        size = abs(total)
        if with_gas:
            for i in range(gases):
                term = tableau.entries[j, i] * point.amounts[i]
                total -= term
                size += abs(term)
        point.condensed[j] = total
        if total < lowest * size:
            row, lowest = j, total / size
    return row


def row_parts(
    tableau: Tableau, point: Point, gases: int, j: int
) -> tuple[float, float, float, float]:
    """P_j, Q_j and the sums Σ ν² n of either part, which are their slopes to u_j."""
    gain = max(0.0, -tableau.supply[j])
    loss = max(0.0, tableau.supply[j])
    slope_gain = 0.0
    slope_loss = 0.0
    for i in range(gases):
        entry = tableau.entries[j, i]
        term = entry * point.amounts[i]
        if term > 0.0:
            gain += term
            slope_gain += entry * term
        else:
            loss -= term
            slope_loss += entry * term
    return gain, loss, slope_gain, slope_loss


def fill_residuals(
    tableau: Tableau, point: Point, equations: Equations, gases: int, size: int, fractions: float
) -> float:
    """Fill P, Q and the right-hand side −residual; return the largest |residual| of a row.

    The residual of Σ y, ``fractions``, stands last and is not counted.
    """
    amounts = point.amounts
    largest = 0.0
    for k in range(size):
        j = equations.unknown[k]
        gain = max(0.0, -tableau.supply[j])
        loss = max(0.0, tableau.supply[j])
        for i in range(gases):
            term = tableau.entries[j, i] * amounts[i]
            gain += max(term, 0.0)
            loss -= min(term, 0.0)
        equations.gain[k] = gain
        equations.loss[k] = loss
        residual = inf if gain <= 0.0 or loss <= 0.0 else log(gain / loss)
        equations.step[k] = -residual
        largest = max(largest, abs(residual))
    equations.step[size] = -log(fractions) if fractions > 0.0 else inf
    return largest


def fill_jacobian(
    tableau: Tableau, point: Point, equations: Equations, gases: int, size: int
) -> None:
    """Derivatives of the residuals to u of each unknown, and last to ln N."""
    entries, jacobian, weight = tableau.entries, equations.jacobian, equations.weight
    amounts = point.amounts
    for k in range(size):
        j = equations.unknown[k]
        per_gain = 1.0 / equations.gain[k]
        per_loss = 1.0 / equations.loss[k]
        total = 0.0
        for i in range(gases):
            term = entries[j, i] * amounts[i]
            value = term * (per_gain if term > 0.0 else per_loss)
            weight[i] = value
            total += value
        jacobian[k, size] = total
        for h in range(size):
            row = equations.unknown[h]
            total = 0.0
            for i in range(gases):
                total += weight[i] * entries[row, i]
            jacobian[k, h] = total
    gas = 0.0
    for i in range(gases):
        gas += amounts[i]
    for h in range(size):
        row = equations.unknown[h]
        total = 0.0
        for i in range(gases):
            total += amounts[i] * entries[row, i]
        jacobian[size, h] = total / gas
    jacobian[size, size] = 0.0
