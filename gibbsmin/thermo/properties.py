"""Standard properties as functions of temperature: Cp, H, S and G of many records at once.

With t = T/(1000 K) and the coefficients A … E of the piece that holds T,

    Cp = A + B t + C t² + D t³ + E/t²
    H  = 1000 (A t + B t²/2 + C t³/3 + D t⁴/4 − E/t) + h
    S  = A ln t + B t + C t²/2 + D t³/3 − E/(2 t²) + s
    G  = H − T S

where h and s join the pieces: H(298.15 K) is the enthalpy of formation, S(298.15 K) the absolute
entropy, and at a transition H steps by its enthalpy and S by that enthalpy over T.  Enthalpies are
thus counted from the elements in their reference states at 298.15 K.
"""

from __future__ import annotations

import threading
from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from functools import lru_cache
from typing import Final, Self

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import BoolArray, FloatArray, IntArray
from gibbsmin.constants import GAS_CONSTANT, REFERENCE_TEMPERATURE
from gibbsmin.errors import InputError
from gibbsmin.thermo.species import Piece, Species

# Values handled at a time: temporaries of this size stay in the processor's cache.
_BLOCK: Final = 16384

_MANY: Final = 5000
"""Temperatures from which the different ones are found by hashing."""


@dataclass(frozen=True, eq=False)
class Deviations:
    """By how much the records' H and S stand off their values, in each of B states.

    Attributes
    ----------
    enthalpy, entropy : (B, S) in J/mol and J/mol/K, at every temperature the same
    """

    enthalpy: FloatArray
    entropy: FloatArray


@dataclass(frozen=True, eq=False)
class PropertyTable:
    """The records' heat capacities, joined up and laid out as arrays.

    Each method takes T in K as a scalar or an array of any shape and returns an array of shape
    ``np.shape(T) + (S,)``, S the number of records, in J/mol or J/mol/K at P° = 1 bar.  Beyond a
    record's range its heat capacity is continued as the constant at the nearer end.  At a break
    the upper piece holds.  NaN gives NaN; a temperature that is not above 0 K raises
    :class:`InputError`.  With ``deviations`` of B states T is a scalar or of shape (B,), and the
    shape of H, S and G is (B, S).
    """

    records: tuple[Species, ...]
    T_low: FloatArray
    T_high: FloatArray
    breaks: FloatArray
    """(K − 1, S): the temperatures at which each record's pieces begin, but the first."""
    coefficients: FloatArray
    """(7, S·K): A, B, C, D, E, h, s of piece k of record j at position j·K + k."""
    deviations: Deviations | None = None

    @classmethod
    def of(cls, records: Sequence[Species]) -> Self:
        """Lay out the records; those with fewer pieces repeat their last one, to no effect."""
        return cls._of(tuple(records))

    @classmethod
    @lru_cache(maxsize=64)
    def _of(cls, records: tuple[Species, ...]) -> Self:
        count = max((len(record.pieces) for record in records), default=0) + 2
        rows = [_with_ends(record.pieces, count) for record in records]
        columns = np.array(
            [[(p.T_low, p.A, p.B, p.C, p.D, p.E, p.transition) for p in row] for row in rows],
            dtype=np.float64,
        ).reshape(len(records), count, 7)
        start, transition = columns[..., 0].T, columns[..., 6].T
        shomate = np.moveaxis(columns[..., 1:6], 2, 0)
        h, s = _join(start, shomate, transition)
        table = cls(
            records,
            np.array([record.T_low for record in records]),
            np.array([record.T_high for record in records]),
            np.ascontiguousarray(start[1:]),
            np.concatenate([shomate, h[np.newaxis], s[np.newaxis]]).reshape(7, -1),
        )
        reference = REFERENCE_TEMPERATURE
        h += (np.array([r.dfH298 for r in records]) - table.enthalpy(reference))[:, np.newaxis]
        s += (np.array([r.S298 for r in records]) - table.entropy(reference))[:, np.newaxis]
        table.coefficients[5:] = h.reshape(-1), s.reshape(-1)
        for array in (table.T_low, table.T_high, table.breaks, table.coefficients):
            array.flags.writeable = False
        return table

    def deviating(self, deviations: Deviations | None) -> Self:
        """The same records with other numbers in each state of a batch."""
        return replace(self, deviations=deviations)

    def of_states(self, index: IntArray) -> Self:
        """The table of some of the states, where they differ."""
        if self.deviations is None:
            return self
        off = self.deviations
        return self.deviating(Deviations(off.enthalpy[index], off.entropy[index]))

    def heat_capacity(self, T: npt.ArrayLike) -> FloatArray:
        """Cp in J/mol/K."""

        def kernel(T: FloatArray, piece: IntArray) -> FloatArray:
            A, B, C, D, E, _, _ = self._gather(piece)
            t = T / 1000
            return A + t * (B + t * (C + t * D)) + E / t**2

        return self._evaluate(kernel, T)

    def enthalpy(self, T: npt.ArrayLike) -> FloatArray:
        """H in J/mol, which includes the enthalpy of formation at 298.15 K."""

        def kernel(T: FloatArray, piece: IntArray) -> FloatArray:
            A, B, C, D, E, h, _ = self._gather(piece)
            return _enthalpy_integral(T / 1000, A, B, C, D, E) + h

        H = self._evaluate(kernel, T)
        return H if self.deviations is None else H + self.deviations.enthalpy

    def entropy(self, T: npt.ArrayLike) -> FloatArray:
        """S in J/mol/K, absolute."""

        def kernel(T: FloatArray, piece: IntArray) -> FloatArray:
            A, B, C, D, E, _, s = self._gather(piece)
            return _entropy_integral(T / 1000, A, B, C, D, E) + s

        S = self._evaluate(kernel, T)
        return S if self.deviations is None else S + self.deviations.entropy

    def gibbs_energy(self, T: npt.ArrayLike) -> FloatArray:
        """G = H − T S in J/mol."""

        def kernel(T: FloatArray, piece: IntArray) -> FloatArray:
            A, B, C, D, E, h, s = self._gather(piece)
            t = T / 1000
            enthalpy = _enthalpy_integral(t, A, B, C, D, E) + h
            return enthalpy - T * (_entropy_integral(t, A, B, C, D, E) + s)

        G = self._evaluate(kernel, T)
        if self.deviations is None:
            return G
        column = np.asarray(T, dtype=float)[..., np.newaxis]
        return np.asarray(G + self.deviations.enthalpy - column * self.deviations.entropy)

    def reduced_gibbs_energy(self, T: npt.ArrayLike) -> FloatArray:
        """G/RT."""

        def kernel(T: FloatArray, piece: IntArray) -> FloatArray:
            A, B, C, D, E, h, s = self._gather(piece)
            t = T / 1000
            enthalpy = _enthalpy_integral(t, A, B, C, D, E) + h
            return (enthalpy / T - (_entropy_integral(t, A, B, C, D, E) + s)) / GAS_CONSTANT

        g = self._evaluate(kernel, T)
        if self.deviations is None:
            return g
        column = np.asarray(T, dtype=float)[..., np.newaxis]
        off = self.deviations.enthalpy / column - self.deviations.entropy
        return np.asarray(g + off / GAS_CONSTANT)

    def within_range(self, T: npt.ArrayLike) -> BoolArray:
        """True where the record's heat capacity is not continued beyond its range."""
        T = _checked(T)[..., np.newaxis]
        return (self.T_low <= T) & (self.T_high >= T)

    def _gather(self, piece: IntArray) -> list[FloatArray]:
        return [row.take(piece) for row in self.coefficients]

    def _evaluate(
        self, kernel: Callable[[FloatArray, IntArray], FloatArray], T: npt.ArrayLike
    ) -> FloatArray:
        T = _checked(T)
        # A grid repeats its temperatures: each is evaluated once.
        distinct, places = _distinct(T)
        column = distinct.reshape(-1, 1)
        S = len(self.records)
        first = np.arange(S) * (len(self.breaks) + 1)
        result = np.empty((column.size, S))
        step = max(1, _BLOCK // max(S, 1))
        for begin in range(0, column.size, step):
            block = column[begin : begin + step]
            piece = np.broadcast_to(first, (len(block), S)).copy()
            for start in self.breaks:
                piece += block >= start
            result[begin : begin + step] = kernel(block, piece)
        return result.take(places, axis=0).reshape((*T.shape, S))


class _Remembered(threading.local):
    """The last large batch of temperatures of a thread, and what :func:`_distinct` found."""

    T: FloatArray = np.zeros(0)
    found: tuple[FloatArray, IntArray] = (np.zeros(0), np.zeros(0, dtype=np.int64))


_remembered = _Remembered()


def _distinct(T: FloatArray) -> tuple[FloatArray, IntArray]:
    """The different temperatures, and which of them stands at each place (flat)."""
    if T.size < _MANY:
        distinct, places = np.unique(T, return_inverse=True)
        return distinct, places.reshape(-1)
    # G, H and S of a batch are asked for one after another, at the same temperatures.
    if np.array_equal(_remembered.T, T):
        return _remembered.found
    # Hashing is many times faster than sorting; only large batches wait for pandas to load.
    import pandas as pd

    places, distinct = pd.factorize(T.reshape(-1), use_na_sentinel=False)
    _remembered.T, _remembered.found = T.copy(), (np.asarray(distinct), np.asarray(places))
    return _remembered.found


def _checked(T: npt.ArrayLike) -> FloatArray:
    T = np.asarray(T, dtype=np.float64)
    if np.any(T <= 0):
        raise InputError(
            f"found a temperature of {np.nanmin(T):.10g} K",
            "accepted is a temperature above absolute zero",
        )
    return T


def _with_ends(pieces: tuple[Piece, ...], count: int) -> list[Piece]:
    """The pieces between constant ones, the upper of which fills the row up to ``count``."""
    first, last = pieces[0], pieces[-1]
    below = Piece(0.0, first.T_low, _heat_capacity(first, first.T_low))
    above = Piece(last.T_high, np.inf, _heat_capacity(last, last.T_high))
    return [below, *pieces, *[above] * (count - 1 - len(pieces))]


def _heat_capacity(piece: Piece, T: float) -> float:
    t = T / 1000
    return piece.A + t * (piece.B + t * (piece.C + t * piece.D)) + piece.E / t**2


def _join(
    start: FloatArray, shomate: FloatArray, transition: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Constants h and s, (S, K), that make H and S continuous but for the transitions."""
    h = np.zeros(shomate.shape[1:])
    s = np.zeros_like(h)
    for k in range(1, len(start)):
        t = start[k] / 1000
        below, above = shomate[:, :, k - 1], shomate[:, :, k]
        h[:, k] = (
            h[:, k - 1]
            + _enthalpy_integral(t, *below)
            - _enthalpy_integral(t, *above)
            + transition[k]
        )
        s[:, k] = (
            s[:, k - 1]
            + _entropy_integral(t, *below)
            - _entropy_integral(t, *above)
            + transition[k] / start[k]
        )
    return h, s


def _enthalpy_integral(t: FloatArray, *coefficients: FloatArray) -> FloatArray:
    A, B, C, D, E = coefficients
    return 1000 * (t * (A + t * (B / 2 + t * (C / 3 + t * (D / 4)))) - E / t)


def _entropy_integral(t: FloatArray, *coefficients: FloatArray) -> FloatArray:
    A, B, C, D, E = coefficients
    return A * np.log(t) + t * (B + t * (C / 2 + t * (D / 3))) - E / (2 * t**2)
