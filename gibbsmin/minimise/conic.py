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

_TOLERANCE = 1e-11


@dataclass(frozen=True, slots=True, eq=False)
class Start:
    """Approximate amounts (species,) and multipliers (rows,) of one state."""

    amounts: FloatArray
    multipliers: FloatArray


class ConicProgramme:
    """One parametrised programme for all states that share A (independent rows) and the gas."""

    def __init__(self, matrix: FloatArray, gas: BoolArray) -> None:
        import cvxpy as cp  # slow to import, and seldom needed

        self._matrix = matrix
        self._amounts = cp.Variable(matrix.shape[1], nonneg=True)
        self._costs = cp.Parameter(matrix.shape[1])
        self._supplies = cp.Parameter(matrix.shape[0])
        self._balance = matrix @ self._amounts == self._supplies
        objective = self._costs @ self._amounts
        if gas.any():
            fractions = self._amounts[np.flatnonzero(gas)]
            total = cp.sum(fractions)  # type: ignore[attr-defined]  # exported by a star import
            entropy = cp.rel_entr(fractions, total)  # type: ignore[attr-defined]  # likewise
            objective += cp.sum(entropy)  # type: ignore[attr-defined]  # likewise
        self._problem = cp.Problem(cp.Minimize(objective), [self._balance])

    def solve(self, supplies: FloatArray, energies: FloatArray) -> Start | None:
        """Approximate optimum of one state; None where the solver gives up.

        The supplies are scaled to one mole, and the energies are shifted along the rows of A,
        which moves the multipliers by the same and leaves the amounts unchanged.
        """
        import cvxpy as cp

        scale = np.abs(supplies).max()
        shift = np.linalg.lstsq(self._matrix.T, energies, rcond=None)[0]
        self._supplies.value = supplies / scale
        self._costs.value = energies - shift @ self._matrix
        try:
            with warnings.catch_warnings():
                # An inaccurate answer is still a start; the certificate judges what comes of it.
                warnings.filterwarnings("ignore", message="Solution may be inaccurate")
                self._problem.solve(  # type: ignore[no-untyped-call]  # cvxpy types it not
                    solver=cp.CLARABEL,
                    tol_gap_abs=_TOLERANCE,
                    tol_gap_rel=_TOLERANCE,
                    tol_feas=_TOLERANCE,
                )
        except cp.error.SolverError:
            return None
        if self._amounts.value is None:
            return None
        return Start(
            amounts=np.maximum(self._amounts.value, 0.0) * scale,
            multipliers=shift - self._balance.dual_value,
        )
