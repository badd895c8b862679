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

from gibbsmin.arrays import FloatArray, IntArray
from gibbsmin.minimise.coordinates import Basis, Reduced
from gibbsmin.minimise.missing import Missing, balancing_phase, completing_phase
from gibbsmin.minimise.tableau import independent_columns

_ITERATIONS = 100
_BOLD_ITERATIONS = 25
_BOLD_STEP = 8.0
_CAREFUL_STEP = 2.0
_CONVERGED = 1e-13
_STALLED = 1e-9
_OVERTAKEN = 3.5
_LOST = 150.0


@dataclass(frozen=True, slots=True, eq=False)
class Point:
    """Amounts and multipliers, η = ln N, and whether the equations are met."""

    amounts: FloatArray
    multipliers: FloatArray
    log_total: float
    converged: bool


def solve_gas(
    state: Reduced, phases: IntArray, multipliers: FloatArray, log_total: float
) -> Point | Missing | None:
    """Equilibrium of the gas with independent condensed ``phases``, of whatever sign they are.

    Where the gas and these phases cannot meet the supplies, the answer is the phase that is
    missing; where they leave the gas no room, or the equations are singular, it is None.
    """
    log_reference = np.log(np.abs(state.supplies).max())
    residual = np.inf
    system: _System | None = None
    for iteration in range(_ITERATIONS):
        if system is None:
            columns = _abundant(state, phases, multipliers)
            if not state.gas[columns].any():
                return None
            if columns.size < state.supplies.size:
                return completing_phase(state, columns, multipliers)
            basis = Basis.of(state, columns)
            missing = balancing_phase(basis, multipliers)
            if missing is not None:
                return missing
            system = _System.of(basis)
            potentials = state.forces(multipliers)[columns[basis.is_gas]]
            unknowns = np.append(potentials, log_total)
        mismatch, jacobian = system.equations(unknowns)
        previous, residual = residual, float(np.abs(mismatch).max())
        # Newton's method squares the residual, so that one which only halves is round-off.
        converged = residual <= _CONVERGED or (previous / 2 <= residual <= _STALLED)
        lost = not np.isfinite(residual) or abs(unknowns[-1] - log_reference) > _LOST
        if not (converged or lost):
            try:
                step = np.asarray(np.linalg.solve(jacobian, -mismatch), dtype=np.float64)
            except np.linalg.LinAlgError:
                return None
            limit = _BOLD_STEP if iteration < _BOLD_ITERATIONS else _CAREFUL_STEP
            unknowns = unknowns + system.shortened(unknowns, step, limit, residual)
        multipliers, log_total = basis.multipliers(unknowns[:-1]), float(unknowns[-1])
        if converged or lost:
            break
        if iteration % 3 == 2 and system.overtaken(unknowns):
            system = None
    amounts = basis.amounts(_System.of(basis).log_gas(unknowns))
    return Point(amounts, multipliers, log_total, converged)


def _abundant(state: Reduced, phases: IntArray, multipliers: FloatArray) -> IntArray:
    """Independent columns: the phases, then gases from the most abundant down."""
    gas = np.flatnonzero(state.gas)
    order = np.argsort(-state.forces(multipliers)[gas], kind="stable")
    return independent_columns(state.matrix, np.r_[phases, gas[order]])


@dataclass(frozen=True, slots=True, eq=False)
class _System:
    """The equations of the gas: ν and b′ of its basis rows over the gases, and red."""

    nu: FloatArray
    supplies: FloatArray
    energies: FloatArray

    @classmethod
    def of(cls, basis: Basis) -> _System:
        gas = basis.state.gas
        rows = basis.is_gas
        return cls(basis.coefficients[rows][:, gas], basis.supplies[rows], basis.energies[gas])

    def log_gas(self, unknowns: FloatArray) -> FloatArray:
        """ln n of the gases."""
        return np.asarray(unknowns[:-1] @ self.nu - self.energies + unknowns[-1])

    def equations(self, unknowns: FloatArray) -> tuple[FloatArray, FloatArray]:
        """Residuals of the log balances and of ln Σ y, and their derivatives to (u, η)."""
        log_n = self.log_gas(unknowns)
        with np.errstate(divide="ignore"):
            log_terms = np.column_stack(
                [np.log(np.abs(self.nu)) + log_n, np.log(np.abs(self.supplies))]
            )
        signs = np.column_stack([self.nu, -self.supplies])
        log_gains, gains = _log_sum(np.where(signs > 0, log_terms, -np.inf))
        log_losses, losses = _log_sum(np.where(signs < 0, log_terms, -np.inf))
        log_total, fractions = _log_sum(log_n[None] - unknowns[-1])
        mismatch = np.append(log_gains - log_losses, log_total)
        weights = (gains - losses)[:, :-1]
        directions = np.vstack([self.nu, np.ones(log_n.size)])
        jacobian = np.vstack([weights @ directions.T, fractions @ directions.T])
        jacobian[-1, -1] = 0.0
        return mismatch, jacobian

    def shortened(
        self, unknowns: FloatArray, step: FloatArray, limit: float, residual: float
    ) -> FloatArray:
        """A step within the limit, or a longer one that brings the residual down.

        A longer step must also keep Σ y in reach of 1: far above, one gas rules all equations and
        they are singular.
        """
        length = float(np.abs(step).max())
        while length > limit:
            mismatch = self.equations(unknowns + step)[0]
            if np.abs(mismatch).max() < residual and mismatch[-1] < limit:
                break
            shorter = max(limit, length / 2)
            step, length = step * (shorter / length), shorter
        return step

    def overtaken(self, unknowns: FloatArray) -> bool:
        """Whether a gas outweighs a basis member that it could replace."""
        log_n = self.log_gas(unknowns)
        lead = log_n - (unknowns[:-1] + unknowns[-1])[:, None]
        return bool(np.where(self.nu != 0, lead, -np.inf).max() > _OVERTAKEN)


def _log_sum(log_terms: FloatArray) -> tuple[FloatArray, FloatArray]:
    """ln Σ exp of each row, and the share of each term in its sum."""
    top = log_terms.max(axis=1, keepdims=True)
    terms = np.exp(log_terms - np.where(np.isfinite(top), top, 0.0))
    total = terms.sum(axis=1, keepdims=True)
    with np.errstate(divide="ignore"):
        log_total = top + np.log(total)
    return log_total[:, 0], terms / np.where(total > 0, total, 1.0)
