"""Fits a table of heat capacities by pieces in the Shomate form.

The unknowns are the coefficients of all pieces at once.  Cp, H − H(Tr) and S − S(Tr) are linear
in them, so a table that prints the three is fitted by one linear least-squares problem; Cp is
made continuous at the ordinary joints by eliminating those equations, and H and S are exact at
Tr = 298.15 K because they are integrals from there.  Joints are added one at a time, each where
it lowers the largest error in G most, until the tolerance is met.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import FloatArray
from gibbsmin.thermo.fit_pieces import continuous, layout, rounded_pieces, to_shomate
from gibbsmin.thermo.fit_table import (
    Matrices,
    Table,
    errors_of,
    gibbs_errors,
    heat_capacities,
)
from gibbsmin.thermo.species import Piece

__all__ = ["Table", "fit_heat_capacity", "gibbs_errors"]

MOST_JOINTS = 6
"""Joints beyond which a table that still misses the tolerance is left as it is."""

# Standard deviations that weigh the rows of the least-squares problem, J/mol/K and J/mol: tables
# print Cp and the functions of T to 0.001 J/mol/K, H to 1 J/mol, and Cp need follow to 0.01.
_SIGMA_CP = 0.01
_SIGMA_FUNCTION = 0.0005
_SIGMA_ENTHALPY = 0.5
_SIGMA_UNKNOWN = 1000.0

# Joints are chosen by the sum of this power of the errors, smoother than their maximum.
_NORM = 4
_COARSE_TRIALS = 30
_LARGEST_BEND = 0.32
_BETWEEN = np.array([0.15, 0.5, 0.85])


def fit_heat_capacity(
    T: npt.ArrayLike,
    Cp: npt.ArrayLike,
    enthalpy: npt.ArrayLike | None = None,
    entropy: npt.ArrayLike | None = None,
    gibbs_function: npt.ArrayLike | None = None,
    *,
    tolerance: float = 1e-4,
    heat_capacity_tolerance: float = 1e-3,
    labels: Mapping[float, str] | None = None,
) -> tuple[Piece, ...]:
    """Fit heat capacities by as many pieces as the tolerance needs.

    Parameters
    ----------
    T
        Temperatures in K, shape (n,), rising; a temperature that stands twice is a transition,
        and the second row is the upper form.
    Cp
        Heat capacities, J/mol/K, shape (n,); NaN marks a cell to leave out.
    enthalpy, entropy, gibbs_function
        H − H(Tr) in J/mol, S − S(Tr) in J/mol/K and −[G − H(Tr)]/T − S(Tr) in J/mol/K, with
        Tr = 298.15 K, shape (n,), where the table prints them; NaN marks a cell to leave out.
        The steps of ``enthalpy`` at the transitions become the transition enthalpies, which are
        zero without it.
    tolerance
        Largest |ΔG/RT| to aim at, see :func:`gibbs_errors`.
    heat_capacity_tolerance
        Largest relative error in Cp at the rows to aim at; G goes first where the two disagree.
    labels
        Names of the transitions by temperature.

    Returns
    -------
    tuple of Piece
        Pieces that abut, from the first temperature to the last.  Cp is continuous except at
        transitions.

    Raises
    ------
    InputError
        If the columns differ in length, T falls, a Cp is not a positive number, or fewer than
        two rows are given.
    """
    table = Table.read(T, Cp, enthalpy, entropy, gibbs_function)
    aim = _Aim(tolerance, heat_capacity_tolerance)
    best = found = _solve(table, (), aim)
    while not best.meets(aim) and len(best.joints) < MOST_JOINTS:
        further = _with_joint(table, best, aim)
        if further is None:
            break
        best = further
        found = min(found, best, key=lambda solution: solution.rank(aim))
    return rounded_pieces(table, found.limits, found.local, labels or {})


@dataclass(frozen=True)
class _Aim:
    gibbs: float
    heat_capacity: float


@dataclass(frozen=True)
class _Solution:
    joints: tuple[int, ...]
    limits: FloatArray
    local: FloatArray
    error: float
    heat_capacity_error: float
    misfit: float

    def meets(self, aim: _Aim) -> bool:
        return self.error <= aim.gibbs and self.heat_capacity_error <= aim.heat_capacity

    def rank(self, aim: _Aim) -> tuple[float, float]:
        """Smaller is better: G down to its aim, then both together."""
        return max(self.error, aim.gibbs), self.misfit


def _solve(table: Table, joints: tuple[int, ...], aim: _Aim) -> _Solution:
    """Least squares for the coefficients of all pieces, Cp continuous at the joints."""
    limits, segments, counts = layout(table, joints)
    free, shomate = continuous(limits, segments, counts), to_shomate(limits)
    matrices = Matrices.of(table, limits)
    T = table.T
    rows = np.concatenate(
        [
            matrices.heat_capacity / _SIGMA_CP,
            matrices.enthalpy / _SIGMA_ENTHALPY,
            matrices.entropy / _SIGMA_FUNCTION,
            (matrices.entropy - matrices.enthalpy / T[:, None]) / _SIGMA_FUNCTION,
        ]
    )
    right = np.concatenate(
        [
            table.Cp / _SIGMA_CP,
            table.enthalpy / _SIGMA_ENTHALPY,
            table.entropy / _SIGMA_FUNCTION,
            table.gibbs_function / _SIGMA_FUNCTION,
        ]
    )
    known = ~np.isnan(right)
    system = rows[known] @ np.einsum("kij,kjn->kin", shomate, free).reshape(-1, free.shape[-1])
    # A faint pull to zero decides what the table leaves open.
    system = np.concatenate([system, np.eye(free.shape[-1]) / _SIGMA_UNKNOWN])
    right = np.concatenate([right[known], np.zeros(free.shape[-1])])
    local = free @ np.linalg.lstsq(system, right, rcond=None)[0]
    coefficients = np.einsum("kij,kj->ki", shomate, local)
    if joints and not _smooth(table, limits, coefficients):
        return _Solution(joints, limits, local, np.inf, np.inf, np.inf)
    x = coefficients.ravel()
    errors = np.abs(errors_of(table, matrices, x))
    in_Cp = np.abs(np.nan_to_num(matrices.heat_capacity @ x / table.Cp - 1))
    misfit = float(np.sum((errors / aim.gibbs) ** _NORM + (in_Cp / aim.heat_capacity) ** _NORM))
    return _Solution(joints, limits, local, float(errors.max()), float(in_Cp.max()), misfit)


def _smooth(table: Table, limits: FloatArray, coefficients: FloatArray) -> bool:
    """Whether Cp stays near the chords of the table; a lambda peak bends as far as is allowed."""
    lower = np.flatnonzero(np.diff(table.T) > 0.0)
    T, chord = (
        (np.outer(1 - _BETWEEN, values[lower]) + np.outer(_BETWEEN, values[lower + 1])).ravel()
        for values in (table.T, table.Cp)
    )
    piece = np.searchsorted(limits[:, 0], T) - 1
    Cp = np.sum(heat_capacities(T) * coefficients[piece], axis=1)
    return not np.any(np.abs(Cp - chord) > _LARGEST_BEND * chord)


def _with_joint(table: Table, solution: _Solution, aim: _Aim) -> _Solution | None:
    """The best solution with one joint more, sought on a coarse grid and then beside its best."""
    rows = table.possible_joints(solution.joints)
    if not rows:
        return None

    def trial(place: int) -> tuple[float, int, _Solution]:
        further = _solve(table, tuple(sorted((*solution.joints, rows[place]))), aim)
        # Digits that rounding may have touched do not decide between equals.
        return float(f"{further.misfit:.9g}"), place, further

    stride = 1 + len(rows) // _COARSE_TRIALS
    coarse = min(trial(place) for place in range(0, len(rows), stride))
    near = range(max(coarse[1] - stride + 1, 0), min(coarse[1] + stride, len(rows)))
    return min([coarse, *(trial(place) for place in near if place != coarse[1])])[2]
