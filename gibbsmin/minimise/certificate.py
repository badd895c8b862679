"""The proof that comes with a state: it holds whatever method found the amounts.

Weak duality: for λ′ with log Σ_gas exp(a_i·λ′ − g̃_i) ≤ 0 and a_c·λ′ ≤ g̃_c, no amounts with
A n = b, n ≥ 0 have a Gibbs energy below b·λ′.  The multipliers λ that come with the amounts
violate this by some ε ≥ 0; λ′ = λ − ε d (Aᵀd ≥ 1) does not.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray
from gibbsmin.minimise.programme import Programme
from gibbsmin.minimise.settings import Settings

SMALLEST_FRACTION = 1e-300
"""Mole fractions below this lose digits to underflow and are not judged."""


@dataclass(frozen=True, slots=True, eq=False)
class Certificate:
    """Bounds on the error of each state.

    Parameters
    ----------
    gap
        Bound on (Gibbs energy − its minimum)/RT per mole of feed atoms, shape (states,):
        [Σ_gas n (g̃ + ln y − a·λ′) + Σ_condensed n (g̃ − a·λ′) + |λ′·(b − A n)|] / Σ n atoms.
    balance
        Largest |A n − b| / (|A| n + |b|) of a row, shape (states,).
    stationarity
        Largest |g̃ + ln y − a·λ| of the gases with y ≥ 1e-300 and |g̃ − a·λ| of the condensed
        species with n > 0, shape (states,), unweighted: the relative error of a mole fraction
        however small.  Infinite where a gas is zero though exp(a·λ − g̃) > 1e-300.
    driving_forces
        a·λ − g̃, shape (states, species), in RT.  Condensed: 0 where present, ≤ 0 where absent;
        exp of it is the activity.  Gas: ln y where a gas is present.  −∞ for a species outside
        the face, that is one which the supplies force to zero; the proof is that of the face.
    """

    gap: FloatArray
    balance: FloatArray
    stationarity: FloatArray
    driving_forces: FloatArray

    def within(self, settings: Settings) -> BoolArray:
        """Whether each state meets the tolerances, shape (states,); NaN does not."""
        return (
            (self.gap <= settings.gap_tolerance)
            & (self.balance <= settings.balance_tolerance)
            & (self.stationarity <= settings.stationarity_tolerance)
        )


def certify(
    programme: Programme, amounts: FloatArray, multipliers: FloatArray, face: BoolArray
) -> Certificate:
    """Certificate of amounts (states, species) and multipliers (states, rows).

    ``face`` (states, species) tells which species the supplies allow to be positive; the others
    must be zero in ``amounts``.  NaN multipliers (rows without a species on the face) count as 0.
    """
    A, gas = programme.matrix, programme.gas
    multipliers = np.nan_to_num(multipliers, nan=0.0)
    forces = np.where(face, multipliers @ A - programme.energies, -np.inf)
    violation = _violation(forces, gas)
    log_y = _log_fractions(amounts, gas)
    residual = programme.supplies - amounts @ A.T

    excess = np.where(amounts > 0, log_y - forces, 0.0)
    lift = programme.direction @ A
    repaired = multipliers - violation[:, None] * programme.direction
    termwise = (amounts * (excess + violation[:, None] * lift)).sum(axis=1)
    gap = termwise + np.abs((repaired * residual).sum(axis=1))
    return Certificate(
        gap=_ratio(gap, amounts @ programme.atoms),
        balance=_ratio(np.abs(residual), amounts @ np.abs(A).T + np.abs(programme.supplies)).max(
            axis=1
        ),
        stationarity=_stationarity(amounts, excess, forces, log_y, gas),
        driving_forces=forces,
    )


def _violation(forces: FloatArray, gas: BoolArray) -> FloatArray:
    """ε: the largest amount by which the dual constraints are missed, at least 0."""
    condensed = forces[:, ~gas].max(axis=1, initial=0.0)
    top = forces[:, gas].max(axis=1, initial=-np.inf)
    shift = np.where(np.isfinite(top), top, 0.0)
    with np.errstate(divide="ignore", over="ignore"):
        total = np.log(np.exp(forces[:, gas] - shift[:, None]).sum(axis=1)) + shift
    violation: FloatArray = np.maximum(condensed, total)
    return violation


def _log_fractions(amounts: FloatArray, gas: BoolArray) -> FloatArray:
    """ln y of the gases present, 0 elsewhere."""
    present = gas & (amounts > 0)
    total = amounts[:, gas].sum(axis=1, keepdims=True)
    logs = np.log(np.where(present, amounts, 1.0)) - np.log(np.where(total > 0, total, 1.0))
    return np.where(present, logs, 0.0)


def _stationarity(
    amounts: FloatArray, excess: FloatArray, forces: FloatArray, log_y: FloatArray, gas: BoolArray
) -> FloatArray:
    smallest = np.log(SMALLEST_FRACTION)
    judged = (amounts > 0) & (log_y >= smallest)
    has_gas = (amounts[:, gas] > 0).any(axis=1, keepdims=True)
    missing = gas & has_gas & (amounts == 0) & (forces > smallest)
    errors = np.where(missing, np.inf, np.where(judged, np.abs(excess), 0.0))
    return np.asarray(errors.max(axis=1))


def _ratio(numerator: FloatArray, denominator: FloatArray) -> FloatArray:
    """Quotient with 0/0 = 0, for states and rows that hold nothing."""
    with np.errstate(divide="ignore"):
        return numerator / np.where((numerator == 0) & (denominator == 0), 1.0, denominator)
