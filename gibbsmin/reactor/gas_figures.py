"""Density, molar mass, heat capacities and isentropic exponents of a state.

Heat capacities are those of all the state's records together, in thermal contact.  Frozen means
that the amounts stay as they are; at equilibrium they follow the change, reactions and formation
of solids included.  Solids and liquids take up no room.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import FloatArray
from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.reactor.derivatives import Derivatives
from gibbsmin.reactor.mixture import Mixture
from gibbsmin.reactor.mixture_slopes import MixtureSlopes, mixture_slopes


@dataclass(frozen=True)
class GasFigures:
    """The gas of a state by itself; NaN where there is no gas.

    Attributes
    ----------
    molar_mass : kg/mol
    density : P M/(Z R T), kg/m³
    volume : Z N R T/P, m³ (m³/s for a flow)
    compressibility : Z, 1 for an ideal gas
    heat_capacity : Cp of a mole, J/mol/K, composition frozen
    heat_capacity_ratio : Cp/Cv, composition frozen
    """

    molar_mass: FloatArray
    density: FloatArray
    volume: FloatArray
    compressibility: FloatArray
    heat_capacity: FloatArray
    heat_capacity_ratio: FloatArray


def gas_figures(
    mixture: Mixture, temperature: npt.ArrayLike, pressure: npt.ArrayLike, amounts: FloatArray
) -> GasFigures:
    """Figures of the gas; T in K and P in Pa of shape (B,), amounts (B, S) in mol."""
    T, P = np.asarray(temperature, dtype=float), np.asarray(pressure, dtype=float)
    n = np.where(mixture.gas, amounts, 0.0)
    total = n.sum(axis=-1)
    present = np.where(total > 0.0, total, np.nan)
    slopes = mixture_slopes(mixture, T, P, n)
    volume = slopes.room / P
    mass = n @ np.array([record.molar_mass for record in mixture.properties.records])
    return GasFigures(
        molar_mass=mass / present,
        density=mass / np.where(total > 0.0, volume, np.nan),
        volume=volume,
        compressibility=slopes.room / (present * GAS_CONSTANT * T),
        heat_capacity=slopes.heat_capacity / present,
        heat_capacity_ratio=slopes.heat_capacity
        / _at_volume(
            slopes.heat_capacity,
            np.where(total > 0.0, slopes.room, np.nan) / T,
            slopes.expansion,
            slopes.compression,
        ),
    )


@dataclass(frozen=True)
class Response:
    """What it takes to heat and to compress a state.

    Attributes
    ----------
    frozen, equilibrium : Cp = (∂H/∂T)_P of the whole state, J/K (W/K for a flow)
    expansion : (∂ln V/∂ln T)_P at equilibrium; 1 when frozen and ideal
    compression : (∂ln V/∂ln P)_T at equilibrium; −1 when frozen and ideal
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


def response(slopes: MixtureSlopes, temperature: FloatArray, changes: Derivatives) -> Response:
    """Heat capacities and isentropic exponents of B states.

    Cp = Σ n cp + Σ H̄ ∂n/∂T,  exponent = −1/(β − α (∂S/∂ln P)/Cp), with α the expansion and β the
    compression of the gas; for an ideal gas alone that is −Cp/(Cv β).  The figures at equilibrium
    are NaN where the state has no derivatives; under an approach the exponent is that of
    unchanged approach.

    Parameters
    ----------
    slopes
        Those of the states' mixtures.
    temperature
        K, shape (B,).
    changes
        The derivatives of these states.
    """
    T = temperature
    room = np.where(slopes.room > 0.0, slopes.room, np.nan)
    frozen = slopes.heat_capacity
    reaction = np.sum(slopes.enthalpies * changes.log_temperature, axis=-1) / T
    alpha = slopes.expansion + np.sum(slopes.rooms * changes.log_temperature, axis=-1) / room
    beta = slopes.compression + np.sum(slopes.rooms * changes.log_pressure, axis=-1) / room
    equilibrium = frozen + reaction
    pressed = slopes.entropy_by_pressure + np.sum(slopes.entropies * changes.log_pressure, axis=-1)
    return Response(
        frozen=frozen,
        equilibrium=equilibrium,
        expansion=alpha,
        compression=beta,
        frozen_exponent=_exponent(
            frozen, slopes.entropy_by_pressure, slopes.expansion, slopes.compression
        ),
        equilibrium_exponent=_exponent(equilibrium, pressed, alpha, beta),
    )


def _exponent(
    Cp: FloatArray, entropy_by_pressure: FloatArray, alpha: FloatArray, beta: FloatArray
) -> FloatArray:
    """−1/(β + α d ln T/d ln P), the temperature following the pressure at constant entropy."""
    return np.asarray(-1.0 / (beta - alpha * entropy_by_pressure / Cp))


def _at_volume(Cp: FloatArray, pV_T: FloatArray, alpha: FloatArray, beta: FloatArray) -> FloatArray:
    """Cv."""
    return Cp + pV_T * alpha**2 / beta
