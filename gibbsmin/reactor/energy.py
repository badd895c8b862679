"""Enthalpy, entropy and what follows from them: duty, entropy generation and lost work."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import BoolArray, FloatArray
from gibbsmin.constants import GAS_CONSTANT, STANDARD_PRESSURE
from gibbsmin.thermo.properties import PropertyTable


def mixture_enthalpy(
    properties: PropertyTable, temperature: npt.ArrayLike, amounts: FloatArray
) -> FloatArray:
    """H = Σ nᵢ Hᵢ(T) in J, from the elements at 298.15 K; amounts (..., S) in mol."""
    return _dot(amounts, properties.enthalpy(temperature))


def mixture_entropy(
    properties: PropertyTable,
    gas: BoolArray,
    temperature: npt.ArrayLike,
    pressure: npt.ArrayLike,
    amounts: FloatArray,
) -> FloatArray:
    """S = Σ nᵢ Sᵢ(T) − R Σgas nᵢ ln(yᵢ P/P°) in J/K, absolute, mixing of the gases included."""
    pure = _dot(amounts, properties.entropy(temperature))
    gases = amounts[..., gas]
    total = np.einsum("...s->...", gases)
    logarithm = np.log(np.asarray(pressure, dtype=float) / STANDARD_PRESSURE)
    mixing = _dot(gases, _log(gases)) - total * (_log(total) - logarithm)
    return np.asarray(pure - GAS_CONSTANT * mixing)


def _dot(a: FloatArray, b: FloatArray) -> FloatArray:
    """Sum of products over the records, without a temporary array."""
    return np.asarray(np.einsum("...s,...s->...", a, b))


def _log(x: FloatArray) -> FloatArray:
    """ln x, 0 at 0: there x ln x is 0."""
    return np.log(x, out=np.zeros_like(x), where=x > 0.0)


@dataclass(frozen=True)
class EnergyBalance:
    """Heat, work and entropy of B states of a stage.

    Attributes
    ----------
    heat, shaft_work : (B,) J or W into the stage
    entropy_generation : (B,) J/K, S_gen = Σ S_out − Σ S_in − Q/T_boundary; NaN where a compressor
        is needed, whose work is not given
    boundary_temperature : (B,) K
    impossible : (B,) whether the entropy generation is negative beyond rounding, that is beyond
        1e-9 of the entropies it is the difference of
    needs_compressor : (B,) whether the outlet's pressure is above that of a feed with gas
    """

    heat: FloatArray
    shaft_work: FloatArray
    entropy_generation: FloatArray
    boundary_temperature: FloatArray
    impossible: BoolArray
    needs_compressor: BoolArray


def energy_balance(
    *,
    heat: FloatArray,
    shaft_work: FloatArray,
    entropy_in: FloatArray,
    entropy_out: FloatArray,
    boundary_temperature: FloatArray,
    needs_compressor: BoolArray,
) -> EnergyBalance:
    """Close the entropy balance of B states, each (B,)."""
    transferred = heat / boundary_temperature
    value = entropy_out - entropy_in - transferred
    scale = np.maximum(np.maximum(np.abs(entropy_out), np.abs(entropy_in)), np.abs(transferred))
    return EnergyBalance(
        heat=heat,
        shaft_work=shaft_work,
        entropy_generation=np.where(needs_compressor, np.nan, value),
        boundary_temperature=boundary_temperature,
        impossible=~needs_compressor & (value < -1e-9 * scale),
        needs_compressor=needs_compressor,
    )
