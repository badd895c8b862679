"""Fits a table of heat capacities by pieces in the Shomate form.

The unknowns are the coefficients of all pieces at once.  Cp, H − H(Tr) and S − S(Tr) are linear
in them, so a table that prints the three is fitted by one linear least-squares problem; Cp is
made continuous at the ordinary joints by eliminating those equations, and H and S are exact at
Tr = 298.15 K because they are integrals from there.  Joints are added one at a time, each where
it lowers the largest error in G most, until the tolerance is met.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Self

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import FloatArray, IntArray
from gibbsmin.constants import GAS_CONSTANT, REFERENCE_TEMPERATURE
from gibbsmin.errors import InputError
from gibbsmin.thermo.species import Piece

MOST_JOINTS = 6
"""Joints beyond which a table that still misses the tolerance is left as it is."""

# Standard deviations that weigh the rows of the least-squares problem, J/mol/K and J/mol: tables
# print Cp and the functions of T to 0.001 J/mol/K, H to 1 J/mol, and Cp need follow to 0.01.
_SIGMA_CP = 0.01
_SIGMA_FUNCTION = 0.0005
_SIGMA_ENTHALPY = 0.5

# A piece gets no more coefficients than its width T_high/T_low can tell apart.
_COEFFICIENTS_BY_WIDTH = ((1.03, 2), (1.2, 3), (1.6, 4), (np.inf, 5))
_NORM = 4
_CONSTANT_WITHIN = 0.0021
_NEGLIGIBLE_CP = 2e-5

_Primitive = Callable[[FloatArray], FloatArray]


def fit_heat_capacity(
    T: npt.ArrayLike,
    Cp: npt.ArrayLike,
    enthalpy: npt.ArrayLike | None = None,
    entropy: npt.ArrayLike | None = None,
    gibbs_function: npt.ArrayLike | None = None,
    *,
    tolerance: float = 1e-4,
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
    best = found = _solve(table, ())
    while best.error > tolerance and len(best.joints) < MOST_JOINTS:
        trials = [
            _solve(table, tuple(sorted((*best.joints, joint))))
            for joint in table.possible_joints(best.joints)
        ]
        if not trials:
            break
        best = min(trials, key=lambda solution: solution.misfit)
        found = min(found, best, key=lambda solution: solution.error)
    return _pieces(table, found, labels or {})


def gibbs_errors(pieces: tuple[Piece, ...], table: Table) -> FloatArray:
    """ΔG/RT of pieces against a table's points, shape (n,).

    G − H(Tr) is taken from the table's Gibbs function; where that is not known, from H and S;
    and where they are not known either, the error in Cp is integrated by the trapezoidal rule.
    """
    limits = np.array([[piece.T_low, piece.T_high] for piece in pieces])
    coefficients = np.array([[p.A, p.B, p.C, p.D, p.E] for p in pieces])
    return _errors(table, _Matrices.of(table, limits), coefficients.ravel())


@dataclass(frozen=True)
class Table:
    """Columns of a heat capacity table with the steps at its transitions taken out of H and S.

    Fields as the arguments of :func:`fit_heat_capacity`; ``segment`` counts the transitions
    below each row, ``steps`` are the transition enthalpies in J/mol.
    """

    T: FloatArray
    Cp: FloatArray
    enthalpy: FloatArray
    entropy: FloatArray
    gibbs_function: FloatArray
    segment: IntArray
    steps: FloatArray

    @classmethod
    def read(
        cls,
        T: npt.ArrayLike,
        Cp: npt.ArrayLike,
        enthalpy: npt.ArrayLike | None = None,
        entropy: npt.ArrayLike | None = None,
        gibbs_function: npt.ArrayLike | None = None,
    ) -> Self:
        T = np.asarray(T, dtype=np.float64)
        Cp = np.asarray(Cp, dtype=np.float64)
        H, S, function = (
            np.full(T.shape, np.nan) if column is None else np.asarray(column, dtype=np.float64)
            for column in (enthalpy, entropy, gibbs_function)
        )
        _check(T, Cp, H, S, function)
        upper = np.flatnonzero(np.diff(T) == 0.0) + 1
        segment = np.zeros(T.shape, dtype=np.int64)
        segment[upper] = 1
        segment = np.cumsum(segment)
        steps = np.nan_to_num(H[upper] - H[upper - 1])
        # Rows below a transition that lies below Tr miss its step, rows above one above Tr have it.
        home = np.searchsorted(T[upper], REFERENCE_TEMPERATURE)
        in_H = np.concatenate([[0.0], np.cumsum(steps)])
        in_S = np.concatenate([[0.0], np.cumsum(steps / T[upper])])
        taken_H = (in_H - in_H[home])[segment]
        taken_S = (in_S - in_S[home])[segment]
        function = function - taken_S + taken_H / T
        return cls(T, Cp, H - taken_H, S - taken_S, function, segment, steps)

    def possible_joints(self, joints: tuple[int, ...]) -> list[int]:
        """Rows where a further joint may stand: two rows or more from all ends and joints."""
        rows = np.arange(1, len(self.T) - 1)
        free = (self.segment[rows - 1] == self.segment[rows]) & (
            self.segment[rows + 1] == self.segment[rows]
        )
        return [int(row) for row in rows[free] if row not in joints]


@dataclass(frozen=True)
class _Solution:
    joints: tuple[int, ...]
    limits: FloatArray
    segments: IntArray
    coefficients: FloatArray
    error: float
    misfit: float


@dataclass(frozen=True)
class _Matrices:
    """Cp, H − H(Tr) and S − S(Tr) at the rows as linear functions of the coefficients."""

    heat_capacity: FloatArray
    enthalpy: FloatArray
    entropy: FloatArray

    @classmethod
    def of(cls, table: Table, limits: FloatArray) -> Self:
        low, high = limits.T
        T = table.T
        above = np.searchsorted(low, T, side="right") - 1
        # The lower row of a transition belongs to the piece below.
        above[:-1] -= np.diff(T) == 0.0
        within = np.arange(len(low)) == above[:, None]
        cp = within[:, :, None] * _heat_capacities(T)[:, None, :]
        reference = np.clip(REFERENCE_TEMPERATURE, low, high)
        inside = np.clip(T[:, None], low, high)
        H, S = (f(inside) - f(reference) for f in (_enthalpies, _entropies))
        n = len(T)
        return cls(cp.reshape(n, -1), H.reshape(n, -1), S.reshape(n, -1))


def _check(T: FloatArray, Cp: FloatArray, *columns: FloatArray) -> None:
    if T.ndim != 1 or len(T) < 2 or any(column.shape != T.shape for column in (Cp, *columns)):
        raise InputError(
            "found columns of different lengths, or less than two rows",
            "accepted are two or more temperatures and one value of each column for each",
        )
    if not (np.all(np.diff(T) >= 0.0) and T[0] > 0.0):
        raise InputError("found temperatures that fall", "accepted are rising temperatures in K")
    if np.any(Cp <= 0.0) or np.isnan(Cp[[0, -1]]).any():
        raise InputError(
            "found a heat capacity that is no positive number",
            "accepted are heat capacities in J/mol/K above zero",
        )


def _heat_capacities(T: FloatArray) -> FloatArray:
    t = T / 1000
    return np.stack([np.ones_like(t), t, t**2, t**3, t**-2], axis=-1)


def _enthalpies(T: FloatArray) -> FloatArray:
    t = T / 1000
    return 1000 * np.stack([t, t**2 / 2, t**3 / 3, t**4 / 4, -1 / t], axis=-1)


def _entropies(T: FloatArray) -> FloatArray:
    t = T / 1000
    return np.stack([np.log(t), t, t**2 / 2, t**3 / 3, -(t**-2) / 2], axis=-1)


def _errors(table: Table, matrices: _Matrices, x: FloatArray) -> FloatArray:
    T = table.T
    function = matrices.entropy @ x - matrices.enthalpy @ x / T
    tabulated = np.where(
        np.isnan(table.gibbs_function), table.entropy - table.enthalpy / T, table.gibbs_function
    )
    in_Cp = matrices.heat_capacity @ x - table.Cp
    integrated = _integral(in_Cp / T, T) - _integral(in_Cp, T) / T
    error = np.where(np.isnan(tabulated), integrated, function - tabulated)
    return np.asarray(-error / GAS_CONSTANT)


def _integral(values: FloatArray, T: FloatArray) -> FloatArray:
    steps = (values[1:] + values[:-1]) / 2 * np.diff(T)
    from_start = np.concatenate([[0.0], np.cumsum(steps)])
    return np.asarray(from_start - np.interp(REFERENCE_TEMPERATURE, T, from_start))


def _solve(table: Table, joints: tuple[int, ...]) -> _Solution:
    """Least squares for the coefficients of all pieces, Cp continuous at the joints."""
    limits, segments, counts = _layout(table, joints)
    free = _continuous(limits, segments, counts)
    matrices = _Matrices.of(table, limits)
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
    system = rows[known] @ free
    scale = np.sqrt(np.sum(system**2, axis=0))
    y = np.linalg.lstsq(system / scale, right[known], rcond=1e-13)[0] / scale
    x = free @ y
    errors = _errors(table, matrices, x)
    error, misfit = float(np.max(np.abs(errors))), float(np.sum(errors**_NORM))
    return _Solution(joints, limits, segments, x.reshape(-1, 5), error, misfit)


def _layout(table: Table, joints: tuple[int, ...]) -> tuple[FloatArray, IntArray, list[int]]:
    """Limits and segment of each piece, and how many coefficients it may have."""
    upper = np.flatnonzero(np.diff(table.segment)) + 1
    starts = sorted({0, *upper.tolist(), *joints})
    limits, counts = [], []
    for start, following in zip(starts, [*starts[1:], len(table.T)], strict=True):
        end = following if following in joints else following - 1
        limits.append((table.T[start], table.T[end]))
        values = table.Cp[start : end + 1]
        width = table.T[end] / table.T[start]
        widest = next(count for limit, count in _COEFFICIENTS_BY_WIDTH if width <= limit)
        constant = np.nanmax(values) - np.nanmin(values) <= _CONSTANT_WITHIN
        counts.append(1 if constant else min(widest, len(values)))
    return np.array(limits), table.segment[starts], counts


def _continuous(limits: FloatArray, segments: IntArray, counts: list[int]) -> FloatArray:
    """Matrix from free unknowns to all coefficients; A follows from Cp at each ordinary joint."""
    at_joint = _heat_capacities(limits[:, 0])
    pieces, following = len(counts), np.diff(segments, prepend=-1) == 0
    unknowns = [(k, j) for k in range(pieces) for j in range(counts[k]) if j or not following[k]]
    free = np.zeros((pieces, 5, len(unknowns)))
    for column, (k, j) in enumerate(unknowns):
        free[k, j, column] = 1.0
    for k in np.flatnonzero(following):
        free[k, 0] = at_joint[k] @ free[k - 1] - at_joint[k, 1:] @ free[k, 1:]
    return free.reshape(pieces * 5, -1)


def _pieces(table: Table, solution: _Solution, labels: Mapping[float, str]) -> tuple[Piece, ...]:
    """The solution with its coefficients rounded where Cp no longer feels it."""
    steps = dict(zip(table.T[np.flatnonzero(np.diff(table.segment)) + 1], table.steps, strict=True))
    pieces: list[Piece] = []
    for (low, high), coefficients in zip(solution.limits, solution.coefficients, strict=True):
        size = np.maximum(*_heat_capacities(np.array([low, high])))
        digits = -np.floor(np.log10(_NEGLIGIBLE_CP / size)).astype(int)
        rounded = [round(float(c), int(d)) + 0.0 for c, d in zip(coefficients, digits, strict=True)]
        if pieces and low not in steps:
            below, here = pieces[-1], _heat_capacities(np.array(low)).tolist()
            at_joint = sum(
                c * f
                for c, f in zip((below.A, below.B, below.C, below.D, below.E), here, strict=True)
            )
            others = sum(c * f for c, f in zip(rounded[1:], here[1:], strict=True))
            rounded[0] = round(at_joint - others, 9)
        pieces.append(
            Piece(
                float(low),
                float(high),
                *rounded,
                transition=float(steps.get(low, 0.0)),
                label=labels.get(float(low), ""),
            )
        )
    return tuple(pieces)
