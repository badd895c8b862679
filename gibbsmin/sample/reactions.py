"""Reactions of a sample against equilibrium: Q, K, affinity, equilibrium temperature, approach.

For each reaction ln Q = Σ ν ln(y φ P/P°) over its gases, ln K = −ΔrG°/RT; the affinity is
−RT ln(Q/K); the equilibrium temperature is the one at which K = Q, its uncertainty
u(ln Q) R T_eq²/|ΔrH|, after van 't Hoff.  φ is 1 in an ideal gas; in a real one it is that of the
gas as measured, here and at all temperatures that are looked at.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Protocol

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray
from gibbsmin.constants import GAS_CONSTANT, STANDARD_PRESSURE
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.uncertainty import record_uncertainties

LOWEST, HIGHEST = 200.0, 4000.0
"""K; where an equilibrium temperature is looked for."""

_GRID = 381
_FLAT = 0.25
"""|ΔrH| below this share of RT leaves the equilibrium temperature undefined."""

_STEPS = 60


class Constant(Protocol):
    """K as a function of temperature."""

    def log_K(self, T: FloatArray) -> FloatArray:
        """ln K, P° = 1 bar."""

    def enthalpy(self, T: FloatArray) -> FloatArray:
        """ΔrH, J/mol."""

    def u_log_K(self, T: FloatArray) -> FloatArray:
        """Standard uncertainty of ln K from that of the values behind it; NaN where unknown."""


@dataclass(frozen=True, eq=False)
class LibraryConstant:
    """K from the library's Gibbs energies."""

    properties: PropertyTable
    coefficients: FloatArray

    def log_K(self, T: FloatArray) -> FloatArray:
        """ln K = −Σ ν G°/RT."""
        return np.asarray(
            -(self.properties.gibbs_energy(T) @ self.coefficients) / (GAS_CONSTANT * T)
        )

    def enthalpy(self, T: FloatArray) -> FloatArray:
        """ΔrH = Σ ν H."""
        return np.asarray(self.properties.enthalpy(T) @ self.coefficients)

    def u_log_K(self, T: FloatArray) -> FloatArray:
        """u² = Σ ν² (u(ΔfH)²/(RT)² + u(S)²/R²), the values of all records taken as independent."""
        squares = self.coefficients**2
        known = record_uncertainties(self.properties.records)
        of_H, of_S = squares @ known.enthalpy**2, squares @ known.entropy**2
        return np.asarray(np.sqrt(of_H / T**2 + of_S) / GAS_CONSTANT)


@dataclass(frozen=True, eq=False)
class GivenConstant:
    """K that the user gives at some temperatures, ln K straight in 1/T between and beyond them.

    ``temperatures`` rise, in K; at least two.
    """

    temperatures: FloatArray
    log_constants: FloatArray

    def log_K(self, T: FloatArray) -> FloatArray:
        """ln K by van 't Hoff's line through the two nearest points."""
        k = self._piece(T)
        start = 1.0 / self.temperatures[k]
        return np.asarray(self.log_constants[k] + self._slope(k) * (1.0 / T - start))

    def enthalpy(self, T: FloatArray) -> FloatArray:
        """ΔrH = −R d ln K/d(1/T)."""
        return np.asarray(-GAS_CONSTANT * self._slope(self._piece(T)))

    def u_log_K(self, T: FloatArray) -> FloatArray:
        """Nothing is known of it."""
        return np.full(T.shape, np.nan)

    def _piece(self, T: FloatArray) -> FloatArray:
        return np.clip(np.searchsorted(self.temperatures, T) - 1, 0, len(self.temperatures) - 2)

    def _slope(self, k: FloatArray) -> FloatArray:
        inverse = 1.0 / self.temperatures
        return np.asarray(
            (self.log_constants[k + 1] - self.log_constants[k]) / (inverse[k + 1] - inverse[k])
        )


@dataclass(frozen=True, eq=False)
class JudgedReaction:
    """A reaction and its K."""

    text: str
    coefficients: Mapping[str, float]
    constant: Constant
    own_constant: bool


def judged_reaction(
    text: str,
    coefficients: Mapping[str, float],
    library: Library,
    own: GivenConstant | None = None,
) -> JudgedReaction:
    """A reaction with the user's K, or the library's."""
    if own is not None:
        return JudgedReaction(text, coefficients, own, True)
    table = PropertyTable.of([library[name] for name in coefficients])
    constant = LibraryConstant(table, np.array(list(coefficients.values())))
    return JudgedReaction(text, coefficients, constant, False)


def log_quotient(nu: FloatArray, y: FloatArray, pressure: FloatArray) -> FloatArray:
    """ln Q (B,) of an ideal gas y (B, n).

    It is ±∞ where a product or a reactant is zero, NaN where both are.
    """
    with np.errstate(divide="ignore", invalid="ignore"):
        logs = np.where(nu == 0.0, 0.0, nu * np.log(np.where(nu == 0.0, 1.0, y)))
        total = np.log(y.sum(axis=-1))
        return np.asarray(
            logs.sum(axis=-1) + nu.sum() * (np.log(pressure / STANDARD_PRESSURE) - total)
        )


def quotient_slopes(nu: FloatArray, y: FloatArray) -> FloatArray:
    """∂ ln Q/∂y (B, n); 0 for amounts that are zero."""
    total = y.sum(axis=-1, keepdims=True)
    own = np.divide(nu, y, out=np.zeros_like(y), where=y > 0.0)
    return np.asarray(own - nu.sum() / total)


def equilibrium_temperature(
    constant: Constant, log_Q: FloatArray, near: FloatArray
) -> tuple[FloatArray, BoolArray]:
    """T (B,) at which K = Q, the one nearest to ``near`` (B,) K; NaN where there is none.

    Also whether the reaction has next to no enthalpy at it (or at ``near``), so that the figure
    means nothing.
    """
    grid = np.linspace(LOWEST, HIGHEST, _GRID)
    tabulated = constant.log_K(grid)
    finite = np.isfinite(log_Q)
    sign = np.sign(tabulated - np.where(finite, log_Q, np.inf)[:, np.newaxis])
    crossing = (sign[:, :-1] * sign[:, 1:] < 0.0) | (sign[:, :-1] == 0.0)
    middle = 0.5 * (grid[:-1] + grid[1:])
    distance = np.where(crossing, np.abs(middle - near[:, np.newaxis]), np.inf)
    place = distance.argmin(axis=1)
    found = crossing.any(axis=1) & finite
    low, high = grid[place].copy(), grid[place + 1].copy()
    rising = tabulated[place + 1] > tabulated[place]
    T = np.where(found, 0.5 * (low + high), near)
    target = np.where(found, log_Q, 0.0)
    for _ in range(_STEPS):
        miss = constant.log_K(T) - target
        above = (miss > 0.0) == rising
        high, low = np.where(above, T, high), np.where(above, low, T)
        slope = constant.enthalpy(T) / (GAS_CONSTANT * T**2)
        with np.errstate(divide="ignore", invalid="ignore"):
            new = T - miss / slope
        inside = (new >= low) & (new <= high)
        new = np.where(found, np.where(inside, new, 0.5 * (low + high)), T)
        done = np.abs(new - T) <= 1e-12 * T
        T = new
        if done.all():
            break
    flat = np.abs(constant.enthalpy(T)) < _FLAT * GAS_CONSTANT * T
    flat |= np.abs(constant.enthalpy(near)) < _FLAT * GAS_CONSTANT * near
    return np.where(found & ~flat, T, np.nan), flat
