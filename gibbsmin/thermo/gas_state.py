"""A real-gas mixture at one temperature, pressure and composition: what follows from its volume.

Every property is a derivative of the residual Helmholtz energy of :mod:`gibbsmin.thermo.cubic`,
evaluated when it is asked for.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING

import numpy as np

from gibbsmin.arrays import FloatArray, IntArray
from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.thermo.cubic import Potential

if TYPE_CHECKING:
    from gibbsmin.thermo.real_gas import RealGas


@dataclass(frozen=True, eq=False)
class Pulls:
    """√a of S gases at temperatures (...), and with θ = d/d ln T how it changes.

    Attributes
    ----------
    root : (..., S) √a, √(Pa m⁶)/mol
    slope, bend : (..., S) θ√a/√a and θ²√a/√a
    """

    root: FloatArray
    slope: FloatArray
    bend: FloatArray

    def of_states(self, index: IntArray) -> Pulls:
        """Those of some of the states."""
        return Pulls(self.root[index], self.slope[index], self.bend[index])


@dataclass(frozen=True, eq=False)
class GasState:
    """A real-gas mixture at T, P and composition; (...) is the shape of the states.

    ``Z`` is the compressibility and ``V`` the molar volume in m³/mol.  The other attributes are
    what its properties are made of: ``weighted`` is y √a, ``pulled``
    Σⱼ yⱼ √aⱼ (1 − kᵢⱼ), ``D`` and ``B`` those of :mod:`gibbsmin.thermo.cubic`.
    """

    gas: RealGas
    T: FloatArray
    P: FloatArray
    y: FloatArray
    Z: FloatArray
    V: FloatArray
    pulls: Pulls
    weighted: FloatArray
    pulled: FloatArray
    D: FloatArray
    B: FloatArray
    potential: Potential

    @cached_property
    def log_fugacity(self) -> FloatArray:
        """ln φᵢ, (..., S)."""
        F, b, T = self.potential, self.gas.volumes, self.T
        own = -2.0 * F.f / T
        shared = -F.g - np.log(self.Z)
        sized = -F.g_B - self.D * F.f_B / T
        pull = self.pulls.root * self.pulled
        return _column(own) * pull + _column(shared) + _column(sized) * b

    @property
    def enthalpy_departure(self) -> FloatArray:
        """H − H of the ideal gas, J/mol, (...)."""
        RT = GAS_CONSTANT * self.T
        return RT * ((self._D1 - self.D) * self.potential.f / self.T + self.Z - 1.0)

    @property
    def entropy_departure(self) -> FloatArray:
        """S − S of the ideal gas at the same T and P, J/mol/K, (...)."""
        F = self.potential
        return GAS_CONSTANT * (F.g + np.log(self.Z) + self._D1 * F.f / self.T)

    @property
    def heat_capacity_departure(self) -> FloatArray:
        """Cp − Cp of the ideal gas, J/mol/K, (...)."""
        R = GAS_CONSTANT
        at_volume = R * (self._D2 - self._D1) * self.potential.f / self.T
        return at_volume - self.T * self._P_T**2 / self._P_V - R

    @property
    def expansion(self) -> FloatArray:
        """∂ ln V/∂ ln T at constant P and composition, (...)."""
        return -self.T * self._P_T / (self._P_V * self.V)

    @property
    def compression(self) -> FloatArray:
        """∂ ln V/∂ ln P at constant T and composition, (...)."""
        return self.P / (self._P_V * self.V)

    @property
    def partial_compressibility(self) -> FloatArray:
        """P V̄ᵢ/(R T), (..., S); ∂ ln φᵢ/∂ ln P at constant T is this less 1."""
        per_mole = -self._P_n / _column(self._P_V)
        return per_mole * _column(self.P / (GAS_CONSTANT * self.T))

    @property
    def log_fugacity_by_temperature(self) -> FloatArray:
        """∂ ln φᵢ/∂ ln T at constant P and composition, (..., S): −H̄ᵢ departure/(R T)."""
        F, b, T = self.potential, self.gas.volumes, self.T
        pull = self.pulls.root * self.pulled
        g = self.pulls.slope
        heated = g * pull + self.pulls.root * ((self.weighted * g) @ self.gas.coupling)
        sized = b * _column((self._D1 - self.D) / T * F.f_B)
        F_nT = -2.0 * _column(F.f / T) * (heated - pull) - sized
        volume = self.partial_compressibility * _column(T * self._P_T / self.P)
        return F_nT + 1.0 - volume

    @property
    def log_fugacity_by_amounts(self) -> FloatArray:
        """N ∂ ln φᵢ/∂nⱼ at constant T and P, (..., S, S), symmetric."""
        F, b, T = self.potential, self.gas.volumes, self.T
        pull = 2.0 * self.pulls.root * self.pulled
        pairs = (
            2.0
            * self.pulls.root[..., np.newaxis]
            * self.gas.coupling
            * self.pulls.root[..., np.newaxis, :]
        )
        each = _column(-F.g_B) * b
        sums = each[..., np.newaxis] + each[..., np.newaxis, :]
        mixed = pull[..., np.newaxis] * b + b[:, np.newaxis] * pull[..., np.newaxis, :]
        sizes = np.multiply.outer(b, b)
        F_nn = (
            sums
            - _square(F.f / T) * pairs
            - _square(F.f_B / T) * mixed
            - _square(F.g_BB + self.D * F.f_BB / T) * sizes
        )
        slopes = self._P_n[..., np.newaxis] * self._P_n[..., np.newaxis, :]
        return F_nn + 1.0 + slopes * _square(1.0 / (GAS_CONSTANT * T * self._P_V))

    @cached_property
    def _D1(self) -> FloatArray:
        """θD."""
        g = self.pulls.slope
        return 2.0 * dot(self.weighted * g, self.pulled)

    @cached_property
    def _D2(self) -> FloatArray:
        """θ²D."""
        g, bend = self.pulls.slope, self.pulls.bend
        turned = self.weighted * g
        both = dot(self.weighted * bend, self.pulled) + dot(turned, turned @ self.gas.coupling)
        return 2.0 * both

    @cached_property
    def _P_V(self) -> FloatArray:
        F, RT = self.potential, GAS_CONSTANT * self.T
        return RT * (F.g_VV + self.D * F.f_VV / self.T) - RT / self.V**2

    @cached_property
    def _P_T(self) -> FloatArray:
        """∂P/∂T at constant V."""
        R = GAS_CONSTANT
        return R * self.potential.g_V + R / self.V + R * self.potential.f_V * self._D1 / self.T

    @cached_property
    def _P_n(self) -> FloatArray:
        """∂P/∂nᵢ at constant T and V, one mole in all."""
        F, b, RT = self.potential, self.gas.volumes, GAS_CONSTANT * self.T
        pull = 2.0 * self.pulls.root * self.pulled
        F_nV = (
            _column(-F.g_V)
            - _column(F.g_BV) * b
            - (_column(F.f_V) * pull + _column(self.D * F.f_BV) * b) / _column(self.T)
        )
        return _column(RT) * (_column(1.0 / self.V) - F_nV)


def dot(a: FloatArray, b: FloatArray) -> FloatArray:
    """Σ a b over the gases."""
    return np.asarray(np.einsum("...s,...s->...", a, b))


def _column(x: FloatArray) -> FloatArray:
    return np.asarray(x)[..., np.newaxis]


def _square(x: FloatArray) -> FloatArray:
    return np.asarray(x)[..., np.newaxis, np.newaxis]
