"""How a mixture's enthalpy, entropy and volume answer to temperature, pressure and amounts."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import BoolArray, FloatArray
from gibbsmin.constants import GAS_CONSTANT, STANDARD_PRESSURE
from gibbsmin.reactor.mixture import Mixture


@dataclass(frozen=True)
class MixtureSlopes:
    """First derivatives of B states of S records; everything else is constant in each.

    Attributes
    ----------
    enthalpies, entropies : (B, S) ∂H/∂n, J/mol, and ∂S/∂n, J/mol/K; that of an absent gas is
        given without its mixing
    rooms : (B, S) P ∂V/∂n of the gas, J/mol
    energies_by_pressure : (B, S) ∂g̃/∂ln P with ln φ in g̃
    fugacities_by_amounts : (B, S, S) ∂ln φ/∂n, per mol; None for an ideal gas
    heat_capacity : (B,) ∂H/∂T, J/K
    room : (B,) P V of the gas, J
    expansion, compression : (B,) ∂ln V/∂ln T and ∂ln V/∂ln P of the gas; 1 and −1 where ideal
    enthalpy_by_pressure, entropy_by_pressure : (B,) ∂H/∂ln P, J, and ∂S/∂ln P, J/K
    """

    enthalpies: FloatArray
    entropies: FloatArray
    rooms: FloatArray
    energies_by_pressure: FloatArray
    fugacities_by_amounts: FloatArray | None
    heat_capacity: FloatArray
    room: FloatArray
    expansion: FloatArray
    compression: FloatArray
    enthalpy_by_pressure: FloatArray
    entropy_by_pressure: FloatArray


def mixture_slopes(
    mixture: Mixture, temperature: npt.ArrayLike, pressure: npt.ArrayLike, amounts: FloatArray
) -> MixtureSlopes:
    """Slopes at T (B,) K, P (B,) Pa and amounts (B, S) mol, or any other shape in place of (B,)."""
    T, P = np.asarray(temperature, dtype=float), np.asarray(pressure, dtype=float)
    n, gas = amounts, mixture.gas
    RT = GAS_CONSTANT * T
    enthalpies = mixture.properties.enthalpy(T) + mixture.pressure_terms(P)
    entropies = mixture.properties.entropy(T) - GAS_CONSTANT * _mixing(gas, P, n)
    rooms = np.where(gas, RT[..., np.newaxis], 0.0)
    by_amounts = None
    expansion, compression = np.ones_like(T), -np.ones_like(T)
    state = mixture.gas_state(T, P, n)
    if state is not None:
        total = n[..., gas].sum(axis=-1)
        filled = total > 0.0
        heating = np.where(filled[..., np.newaxis], state.log_fugacity_by_temperature, 0.0)
        enthalpies[..., gas] -= RT[..., np.newaxis] * heating
        # S̄ departure = (H̄ departure − R T ln φ)/T
        logs = np.where(filled[..., np.newaxis], state.log_fugacity, 0.0)
        entropies[..., gas] -= GAS_CONSTANT * (heating + logs)
        Z = np.where(filled[..., np.newaxis], state.partial_compressibility, 1.0)
        rooms[..., gas] = RT[..., np.newaxis] * Z
        by_amounts = np.zeros((*n.shape, n.shape[-1]))
        places = np.flatnonzero(gas)
        moles = np.where(filled, total, 1.0)[..., np.newaxis, np.newaxis]
        slopes = np.where(filled[..., None, None], state.log_fugacity_by_amounts, 0.0) / moles
        by_amounts[..., places[:, np.newaxis], places] = slopes
        expansion = np.where(filled, state.expansion, 1.0)
        compression = np.where(filled, state.compression, -1.0)
    room = P * mixture.gas_volume(T, P, n)
    condensed = P[..., np.newaxis] * mixture.volumes
    return MixtureSlopes(
        enthalpies=enthalpies,
        entropies=entropies,
        rooms=rooms,
        energies_by_pressure=(rooms + condensed) / RT[..., np.newaxis],
        fugacities_by_amounts=by_amounts,
        heat_capacity=mixture.heat_capacity(T, P, n),
        room=room,
        expansion=expansion,
        compression=compression,
        enthalpy_by_pressure=room * (1.0 - expansion) + np.sum(n * condensed, axis=-1),
        entropy_by_pressure=-room / T * expansion,
    )


def _mixing(gas: BoolArray, P: FloatArray, amounts: FloatArray) -> FloatArray:
    """ln(y P/P°) of the gases present, else 0."""
    n = np.where(gas, amounts, 0.0)
    total = n.sum(axis=-1, keepdims=True)
    with np.errstate(divide="ignore", invalid="ignore"):
        logarithm = np.log(n / total) + np.log(P / STANDARD_PRESSURE)[..., np.newaxis]
    return np.where(n > 0.0, logarithm, 0.0)
