"""A table of heat capacities as the fit reads it, and how pieces compare with it."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Self

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import FloatArray, IntArray
from gibbsmin.constants import GAS_CONSTANT, REFERENCE_TEMPERATURE
from gibbsmin.errors import InputError
from gibbsmin.thermo.species import Piece

CONSTANT_WITHIN = 0.0021
"""J/mol/K; heat capacities that differ by no more, two units of the last digit, are one value."""


@dataclass(frozen=True)
class Table:
    """Columns of a heat capacity table with the steps at its transitions taken out of H and S.

    Fields as the arguments of :func:`gibbsmin.thermo.fit.fit_heat_capacity`; ``segment`` counts
    the transitions below each row, ``steps`` are the transition enthalpies in J/mol.
    """

    T: FloatArray
    Cp: FloatArray
    enthalpy: FloatArray
    entropy: FloatArray
    gibbs_function: FloatArray
    segment: IntArray
    steps: FloatArray

    @property
    def has_functions(self) -> bool:
        """Whether the table prints H or S, so that Cp need not be pinned by its rows alone."""
        return not (np.isnan(self.enthalpy).all() and np.isnan(self.entropy).all())

    @classmethod
    def read(
        cls,
        T: npt.ArrayLike,
        Cp: npt.ArrayLike,
        enthalpy: npt.ArrayLike | None = None,
        entropy: npt.ArrayLike | None = None,
        gibbs_function: npt.ArrayLike | None = None,
    ) -> Self:
        """Read columns as :func:`gibbsmin.thermo.fit.fit_heat_capacity` takes them."""
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
        """Rows where a further joint may stand: inside a segment, where Cp is not constant."""
        rows = np.arange(1, len(self.T) - 1)
        around = np.stack([self.Cp[rows - 1], self.Cp[rows], self.Cp[rows + 1]])
        free = (self.segment[rows - 1] == self.segment[rows + 1]) & ~(
            around.max(axis=0) - around.min(axis=0) <= CONSTANT_WITHIN
        )
        return [int(row) for row in rows[free] if row not in joints]


@dataclass(frozen=True)
class Matrices:
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
        cp = within[:, :, None] * heat_capacities(T)[:, None, :]
        reference = np.clip(REFERENCE_TEMPERATURE, low, high)
        inside = np.clip(T[:, None], low, high)
        H, S = (f(inside) - f(reference) for f in (_enthalpies, _entropies))
        n = len(T)
        return cls(cp.reshape(n, -1), H.reshape(n, -1), S.reshape(n, -1))


def gibbs_errors(pieces: tuple[Piece, ...], table: Table) -> FloatArray:
    """ΔG/RT of pieces against a table's points, shape (n,).

    G − H(Tr) is taken from the table's Gibbs function; where that is not known, from H and S;
    and where they are not known either, the error in Cp is integrated by the trapezoidal rule.
    """
    limits = np.array([[piece.T_low, piece.T_high] for piece in pieces])
    coefficients = np.array([[p.A, p.B, p.C, p.D, p.E] for p in pieces])
    return errors_of(table, Matrices.of(table, limits), coefficients.ravel())


def errors_of(table: Table, matrices: Matrices, x: FloatArray) -> FloatArray:
    """:func:`gibbs_errors` of coefficients ``x``, those of all pieces in a row."""
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


def heat_capacities(T: FloatArray) -> FloatArray:
    """The five functions of the Shomate form at T, a further axis at the end."""
    t = T / 1000
    return np.stack([np.ones_like(t), t, t**2, t**3, t**-2], axis=-1)


def _enthalpies(T: FloatArray) -> FloatArray:
    t = T / 1000
    return 1000 * np.stack([t, t**2 / 2, t**3 / 3, t**4 / 4, -1 / t], axis=-1)


def _entropies(T: FloatArray) -> FloatArray:
    t = T / 1000
    return np.stack([np.log(t), t, t**2 / 2, t**3 / 3, -(t**-2) / 2], axis=-1)


def _check(T: FloatArray, Cp: FloatArray, *columns: FloatArray) -> None:
    if T.ndim != 1 or len(T) < 2 or any(column.shape != T.shape for column in (Cp, *columns)):
        raise InputError(
            "found columns of different lengths, or less than two rows",
            "accepted are two or more temperatures and one value of each column for each",
        )
    if not (np.all(np.diff(T) >= 0.0) and np.all(T[2:] > T[:-2]) and T[0] > 0.0):
        raise InputError(
            "found temperatures that fall, or one that stands more than twice",
            "accepted are rising temperatures in K, doubled at a transition",
        )
    if np.any(Cp <= 0.0) or np.isnan(Cp[[0, -1]]).any():
        raise InputError(
            "found a heat capacity that is no positive number",
            "accepted are heat capacities in J/mol/K above zero",
        )
