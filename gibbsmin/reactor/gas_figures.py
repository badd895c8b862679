"""Density, molar mass, heat capacities and isentropic exponents of a state.

Heat capacities are those of all the state's records together, in thermal contact.  Frozen means
that the amounts stay as they are; at equilibrium they follow the change, reactions and formation
of solids included.  The gas is ideal, and solids and liquids take up no room.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import BoolArray, FloatArray
from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.reactor.derivatives import Derivatives
from gibbsmin.thermo.properties import PropertyTable


@dataclass(frozen=True)
class GasFigures:
    """The gas of a state by itself; NaN where there is no gas.

    Attributes
    ----------
    molar_mass : kg/mol
    density : P M/(R T), kg/m³
    volume : N R T/P, m³ (m³/s for a flow)
    heat_capacity : Σ y Cp, J/mol/K, composition frozen
    heat_capacity_ratio : Cp/(Cp − R)
    """

    molar_mass: FloatArray
    density: FloatArray
    volume: FloatArray
    heat_capacity: FloatArray
    heat_capacity_ratio: FloatArray


def gas_figures(
    properties: PropertyTable,
    gas: BoolArray,
    temperature: npt.ArrayLike,
    pressure: npt.ArrayLike,
    amounts: FloatArray,
) -> GasFigures:
    """Figures of the ideal gas; T in K and P in Pa of shape (...), amounts (..., S) in mol."""
    T, P = np.asarray(temperature, dtype=float), np.asarray(pressure, dtype=float)
    n = np.where(gas, amounts, 0.0)
    total = n.sum(axis=-1)
    with np.errstate(invalid="ignore"):
        y = n / np.where(total > 0.0, total, np.nan)[..., np.newaxis]
    M = y @ np.array([record.molar_mass for record in properties.records])
    Cp = np.sum(y * properties.heat_capacity(T), axis=-1)
    return GasFigures(
        molar_mass=M,
        density=P * M / (GAS_CONSTANT * T),
        volume=total * GAS_CONSTANT * T / P,
        heat_capacity=Cp,
        heat_capacity_ratio=Cp / (Cp - GAS_CONSTANT),
    )


@dataclass(frozen=True)
class Response:
    """What it takes to heat and to compress a state.

    Attributes
    ----------
    frozen, equilibrium : Cp = (∂H/∂T)_P of the whole state, J/K (W/K for a flow)
    expansion : (∂ln V/∂ln T)_P at equilibrium; 1 when frozen
    compression : (∂ln V/∂ln P)_T at equilibrium; −1 when frozen
    frozen_exponent, equilibrium_exponent : isentropic exponent −(∂ln P/∂ln V)_S
    """

    frozen: FloatArray
    equilibrium: FloatArray
    expansion: FloatArray
    compression: FloatArray
    frozen_exponent: FloatArray
    equilibrium_exponent: FloatArray

    @property
    def ratio(self) -> FloatArray:
        """Heat capacity at equilibrium over frozen."""
        return self.equilibrium / self.frozen


def response(
    properties: PropertyTable,
    gas: BoolArray,
    temperature: FloatArray,
    amounts: FloatArray,
    changes: Derivatives,
) -> Response:
    """Heat capacities and isentropic exponents of B states.

    Cp = Σ n cp + Σ H ∂n/∂T,  Cv = Cp + N R α²/β,  exponent = −Cp/(Cv β), with α the expansion and
    β the compression.  The figures at equilibrium are NaN where the state has no derivatives;
    under an approach the exponent is that of unchanged approach.

    Parameters
    ----------
    temperature, amounts
        K, shape (B,), and mol, shape (B, S).
    changes
        The derivatives of these states.
    """
    T = temperature
    N = np.where(gas, amounts, 0.0).sum(axis=-1)
    N = np.where(N > 0.0, N, np.nan)
    frozen = np.sum(amounts * properties.heat_capacity(T), axis=-1)
    reaction = np.sum(properties.enthalpy(T) * changes.log_temperature, axis=-1) / T
    alpha = 1.0 + np.sum(changes.log_temperature[..., gas], axis=-1) / N
    beta = -1.0 + np.sum(changes.log_pressure[..., gas], axis=-1) / N
    equilibrium = frozen + reaction
    return Response(
        frozen=frozen,
        equilibrium=equilibrium,
        expansion=alpha,
        compression=beta,
        frozen_exponent=_exponent(frozen, N, np.ones_like(N), -np.ones_like(N)),
        equilibrium_exponent=_exponent(equilibrium, N, alpha, beta),
    )


def _exponent(Cp: FloatArray, N: FloatArray, alpha: FloatArray, beta: FloatArray) -> FloatArray:
    Cv = Cp + N * GAS_CONSTANT * alpha**2 / beta
    return -Cp / (Cv * beta)
