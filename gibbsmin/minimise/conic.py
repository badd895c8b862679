"""The conic method: the programme on the exponential cone, by an interior-point solver.

n ln(n/N) is the relative entropy, whose epigraph is an exponential cone; the condensed species
are linear.  The solver's answer gives the value of the optimum and the set of phases; its
composition is off by the square root of its gap and must be polished.
"""

from __future__ import annotations

import warnings
from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray

_ATTEMPTS = ((1e-11, 0.99), (1e-8, 0.9))
"""Tolerance, and share of the way to the cones' border that a step may go, tried in turn: a start
that is loose is better than none, and shorter steps arrive where long ones lose their digits."""


@dataclass(frozen=True, slots=True, eq=False)
class Start:
    """Approximate amounts (species,) and multipliers (rows,) of one state."""

    amounts: FloatArray
    multipliers: FloatArray


class ConicProgramme:
    """One parametrised programme for all states that share A (independent rows) and the gas."""

    def __init__(self, matrix: FloatArray, gas: BoolArray) -> None:
        import cvxpy as cp  # slow to import, and seldom needed

        # Amounts count in the species' atoms: where C16H34 stands beside H2 in moles, the solver
        # gives up.
        self._size = np.maximum(np.abs(matrix).sum(axis=0), 1.0)
        self._matrix = matrix / self._size
        self._amounts = cp.Variable(matrix.shape[1], nonneg=True)
        self._costs = cp.Parameter(matrix.shape[1])
        self._supplies = cp.Parameter(matrix.shape[0])
        self._balance = self._matrix @ self._amounts == self._supplies
        constraints = [self._balance]
        objective = self._costs @ self._amounts
        if gas.any():
            gases = np.flatnonzero(gas)
            moles = cp.multiply(1.0 / self._size, self._amounts)  # type: ignore[attr-defined]  # likewise
            fractions = moles[gases]
            # A variable of its own: a sum in every cone would make the solver's matrix dense.
            total = cp.Variable()
            constraints.append(total == cp.sum(fractions))  # type: ignore[attr-defined]  # likewise
            entropy = cp.rel_entr(fractions, total)  # type: ignore[attr-defined]  # likewise
            objective += cp.sum(entropy)  # type: ignore[attr-defined]  # likewise
        self._problem = cp.Problem(cp.Minimize(objective), constraints)

    def solve(self, supplies: FloatArray, energies: FloatArray) -> Start | None:
        """Approximate optimum of one state; None where the solver gives up.

        The supplies are scaled to one mole, and the energies are shifted along the rows of A,
        which moves the multipliers by the same and leaves the amounts unchanged.
        """
        scale = np.abs(supplies).max()
        costs = energies / self._size
        shift = np.linalg.lstsq(self._matrix.T, costs, rcond=None)[0]
        self._supplies.value = supplies / scale
        self._costs.value = costs - shift @ self._matrix
        if not any(self._solved(*attempt) for attempt in _ATTEMPTS):
            return None
        return Start(
            amounts=np.maximum(self._amounts.value / self._size, 0.0) * scale,
            multipliers=shift - self._balance.dual_value,
        )

    def _solved(self, tolerance: float, longest_step: float) -> bool:
        import cvxpy as cp

        try:
            with warnings.catch_warnings():
                # An inaccurate answer is still a start; the certificate judges what comes of it.
                warnings.filterwarnings("ignore", message="Solution may be inaccurate")
                self._problem.solve(  # type: ignore[no-untyped-call]  # cvxpy types it not
                    solver=cp.CLARABEL,
                    tol_gap_abs=tolerance,
                    tol_gap_rel=tolerance,
                    tol_feas=tolerance,
                    max_step_fraction=longest_step,
                )
        except cp.error.SolverError:
            return False
        return self._amounts.value is not None
