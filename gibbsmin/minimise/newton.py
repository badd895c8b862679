"""Newton's method on the logarithms of the balances, for a given set of condensed phases.

The unknowns are u_j = ln y_j of r basis species (0 for a condensed one), the most abundant that
are independent, and η = ln N.  With ν = B⁻¹A and b′ = B⁻¹b every gas has

    n_i = exp(η + Σ_j ν_ji u_j − red_i),   red_i = g̃_i − Σ_j ν_ji g̃_j,

and the equations are, for the row j of each basis gas, ln P_j = ln Q_j, where P_j gathers the
positive terms of Σ_i ν_ji n_i − b′_j and Q_j the negative ones, and ln Σ y = 0.  Nothing is
ill-scaled: a row all of whose terms are tiny (hydrogen over a stoichiometric flame at 300 K)
counts as much as any other.  The rows of condensed basis species give their amounts.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray, IntArray
from gibbsmin.minimise.tableau import ROUND_OFF, independent_columns

_ITERATIONS = 60
_BOLD_ITERATIONS = 25
_BOLD_STEP = 8.0
_CAREFUL_STEP = 2.0
_CONVERGED = 1e-13
_ROUND_OFF_FLOOR = 3e-12
_QUADRATIC = 1e-7
_OVERTAKEN = 3.5
_LOST = 150.0


@dataclass(frozen=True, slots=True, eq=False)
class Reduced:
    """One state on its face: A of full row rank, b, g̃ and which columns are gas."""

    matrix: FloatArray
    supplies: FloatArray
    energies: FloatArray
    gas: BoolArray


@dataclass(frozen=True, slots=True, eq=False)
class Point:
    """Amounts and multipliers, η = ln N, and whether the equations are met.

    ``wanted`` is the condensed phase without which the equations have no solution, if any.
    """

    amounts: FloatArray
    multipliers: FloatArray
    log_total: float
    converged: bool
    wanted: int | None = None


@dataclass(frozen=True, slots=True, eq=False)
class _Basis:
    """The balance in terms of a basis: ν, b′, and what of it concerns the gas."""

    columns: IntArray
    is_gas: BoolArray
    coefficients: FloatArray
    supplies: FloatArray
    energies: FloatArray

    @classmethod
    def of(cls, state: Reduced, columns: IntArray) -> _Basis:
        inverse = np.asarray(np.linalg.inv(state.matrix[:, columns]), dtype=np.float64)
        coefficients = _product(inverse, state.matrix)
        energies = state.energies - state.energies[columns] @ coefficients
        energies[columns] = 0.0
        return cls(
            columns=columns,
            is_gas=state.gas[columns],
            coefficients=coefficients,
            supplies=_product(inverse, state.supplies),
            energies=energies,
        )


def _product(inverse: FloatArray, right: FloatArray) -> FloatArray:
    """B⁻¹ times A or b, with round-off set to zero."""
    product = inverse @ right
    return np.where(np.abs(product) <= ROUND_OFF * (np.abs(inverse) @ np.abs(right)), 0.0, product)


def solve_gas(
    state: Reduced, phases: IntArray, multipliers: FloatArray, log_total: float
) -> Point | None:
    """Equilibrium of the gas with independent condensed ``phases``, of whatever sign they are.

    Returns None where the phases leave the gas no room or the equations are singular.
    """
    gas = np.flatnonzero(state.gas)
    log_reference = np.log(np.abs(state.supplies).max())
    residual = np.inf
    basis: _Basis | None = None
    for iteration in range(_ITERATIONS):
        if basis is None:
            log_n = log_total + multipliers @ state.matrix[:, gas] - state.energies[gas]
            columns = np.r_[phases, gas[np.argsort(-log_n, kind="stable")]]
            columns = independent_columns(state.matrix, columns)
            if not state.gas[columns].any():
                return None
            if columns.size < state.supplies.size:
                return _completed(state, columns, multipliers, log_total)
            basis = _Basis.of(state, columns)
            wanting = _balanced(state, basis, multipliers, log_total)
            if wanting is not None:
                return wanting
            nu = basis.coefficients[np.ix_(basis.is_gas, gas)]
            u = multipliers @ state.matrix[:, columns] - state.energies[columns]
            unknowns = np.r_[u[basis.is_gas], log_total]
        log_y = unknowns[:-1] @ nu - basis.energies[gas]
        log_n = log_y + unknowns[-1]
        mismatch, jacobian = _equations(nu, basis.supplies[basis.is_gas], log_y, log_n)
        previous, residual = residual, float(np.abs(mismatch).max())
        if not np.isfinite(residual):
            return None
        converged = residual <= _CONVERGED or (
            residual <= _ROUND_OFF_FLOOR and previous <= _QUADRATIC
        )
        overtaken = _overtaken(nu, log_n, log_n[np.searchsorted(gas, columns[basis.is_gas])])
        lost = abs(unknowns[-1] - log_reference) > _LOST
        if not converged and not lost:
            try:
                step = np.linalg.solve(jacobian, -mismatch)
            except np.linalg.LinAlgError:
                return None
            limit = max(_BOLD_STEP if iteration < _BOLD_ITERATIONS else _CAREFUL_STEP, residual / 2)
            unknowns = unknowns + step * min(1.0, limit / np.abs(step).max())
        multipliers, log_total = _multipliers(state, basis, unknowns), float(unknowns[-1])
        if converged or lost:
            break
        if overtaken and iteration % 3 == 2:
            basis = None
    assert basis is not None  # noqa: S101  # a basis made at the last iteration is used there
    return Point(_amounts(state, basis, log_n), multipliers, log_total, converged)


def _equations(
    nu: FloatArray, supplies: FloatArray, log_y: FloatArray, log_n: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Residuals of the log balances and of ln Σ y, and their derivatives to (u, η)."""
    with np.errstate(divide="ignore"):
        log_terms = np.column_stack([np.log(np.abs(nu)) + log_n, np.log(np.abs(supplies))])
    signs = np.column_stack([nu, -supplies])
    log_gains, gains = _log_sum(np.where(signs > 0, log_terms, -np.inf))
    log_losses, losses = _log_sum(np.where(signs < 0, log_terms, -np.inf))
    log_total, fractions = _log_sum(log_y[None])
    mismatch = np.r_[log_gains - log_losses, log_total]
    weights = (gains - losses)[:, :-1]
    directions = np.vstack([nu, np.ones(log_n.size)])
    jacobian = np.vstack([weights @ directions.T, fractions @ directions.T])
    jacobian[-1, -1] = 0.0
    return mismatch, jacobian


def _log_sum(log_terms: FloatArray) -> tuple[FloatArray, FloatArray]:
    """ln Σ exp of each row, and the share of each term in its sum."""
    top = log_terms.max(axis=1, keepdims=True)
    terms = np.exp(log_terms - np.where(np.isfinite(top), top, 0.0))
    total = terms.sum(axis=1, keepdims=True)
    with np.errstate(divide="ignore"):
        log_total = top + np.log(total)
    return log_total[:, 0], terms / np.where(total > 0, total, 1.0)


def _completed(
    state: Reduced, columns: IntArray, multipliers: FloatArray, log_total: float
) -> Point:
    """Want the absent phase nearest to forming that holds what no gas or phase present can."""
    absent = np.setdiff1d(np.flatnonzero(~state.gas), columns)
    lacks = state.energies[absent] - multipliers @ state.matrix[:, absent]
    order = np.r_[columns, absent[np.argsort(lacks, kind="stable")]]
    wanted = int(independent_columns(state.matrix, order)[columns.size])
    present = state.matrix[:, columns]
    direction = state.matrix[:, wanted]
    shares = np.linalg.lstsq(present, direction, rcond=None)[0]
    return _wanting(
        state,
        wanted,
        np.asarray(direction - present @ shares, dtype=np.float64),
        multipliers,
        log_total,
    )


def _balanced(
    state: Reduced, basis: _Basis, multipliers: FloatArray, log_total: float
) -> Point | None:
    """Want the phase that a gas row without terms to balance its basis member must have.

    The potential of that member falls until the first phase on the other side comes in.
    """
    one_sided = (basis.coefficients[:, state.gas] >= 0).all(axis=1) & (basis.supplies <= 0)
    rows = np.flatnonzero(one_sided & basis.is_gas)
    if rows.size == 0:
        return None
    coefficients = basis.coefficients[rows[0]]
    able = np.flatnonzero(~state.gas & (coefficients < 0))
    if able.size == 0:
        return None
    lacks = state.energies[able] - multipliers @ state.matrix[:, able]
    wanted = int(able[np.argmin(lacks / -coefficients[able])])
    inverse = np.asarray(np.linalg.inv(state.matrix[:, basis.columns]), dtype=np.float64)
    return _wanting(state, wanted, -inverse[rows[0]], multipliers, log_total)


def _wanting(
    state: Reduced, wanted: int, direction: FloatArray, multipliers: FloatArray, log_total: float
) -> Point:
    """Move the multipliers along a direction until the wanted phase is at equilibrium."""
    column = state.matrix[:, wanted]
    step = (state.energies[wanted] - multipliers @ column) / (direction @ column)
    return Point(
        amounts=np.zeros(state.gas.size),
        multipliers=multipliers + step * direction,
        log_total=log_total,
        converged=False,
        wanted=wanted,
    )


def _overtaken(nu: FloatArray, log_n: FloatArray, log_basis: FloatArray) -> bool:
    """Whether a gas outweighs a basis member that it could replace."""
    lead = np.where(nu != 0, log_n - log_basis[:, None], -np.inf)
    return bool(lead.max() > _OVERTAKEN)


def _multipliers(state: Reduced, basis: _Basis, unknowns: FloatArray) -> FloatArray:
    """λ with a_j·λ = g̃_j + u_j for the basis species."""
    potentials = state.energies[basis.columns].copy()
    potentials[basis.is_gas] += unknowns[:-1]
    return np.asarray(np.linalg.solve(state.matrix[:, basis.columns].T, potentials))


def _amounts(state: Reduced, basis: _Basis, log_n: FloatArray) -> FloatArray:
    """Gas amounts, and those of the condensed basis species from their rows."""
    amounts = np.zeros(state.gas.size)
    amounts[state.gas] = np.exp(np.minimum(log_n, 700.0))
    condensed = ~basis.is_gas
    taken = basis.coefficients[condensed][:, state.gas] @ amounts[state.gas]
    amounts[basis.columns[condensed]] = basis.supplies[condensed] - taken
    return amounts
