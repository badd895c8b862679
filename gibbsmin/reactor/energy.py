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
    return np.asarray(np.sum(amounts * properties.enthalpy(temperature), axis=-1))


def mixture_entropy(
    properties: PropertyTable,
    gas: BoolArray,
    temperature: npt.ArrayLike,
    pressure: npt.ArrayLike,
    amounts: FloatArray,
) -> FloatArray:
    """S = Σ nᵢ Sᵢ(T) − R Σgas nᵢ ln(yᵢ P/P°) in J/K, absolute, mixing of the gases included."""
    pure = np.sum(amounts * properties.entropy(temperature), axis=-1)
    gases = np.where(gas, amounts, 0.0)
    total = gases.sum(axis=-1)
    logarithm = np.log(np.asarray(pressure, dtype=float) / STANDARD_PRESSURE)
    mixing = np.sum(_x_log_x(gases), axis=-1) - _x_log_x(total) + total * logarithm
    return np.asarray(pure - GAS_CONSTANT * mixing)


def _x_log_x(x: FloatArray) -> FloatArray:
    """x ln x, 0 at 0.  scipy has it too, but takes half a second to load."""
    return np.asarray(x * np.log(np.where(x > 0.0, x, 1.0)))


@dataclass(frozen=True)
class EntropyGeneration:
    """S_gen = Σ S_out − Σ S_in − Q/T_boundary and the work lost by it.

    ``value`` (J/K) and ``lost_work`` (J) are NaN where the outlet's pressure is above that of a
    feed with gas, since then a compressor is needed whose work is not given.
    ``remark`` is empty, or says why there is no figure or why it is impossible as specified.
    """

    value: float
    lost_work: float
    boundary_temperature: float
    surroundings_temperature: float
    remark: str


def entropy_generation(
    *,
    outlet: float,
    inlet: float,
    heat: float,
    boundary_temperature: float,
    surroundings_temperature: float,
    needs_compressor: bool,
) -> EntropyGeneration:
    """Judge the entropy balance of a stage; entropies in J/K, heat in J, positive into the stage.

    A negative value beyond rounding (1e-9 of the entropies it is the difference of) is reported
    as impossible as specified.
    """
    transferred = heat / boundary_temperature
    value = outlet - inlet - transferred
    scale = max(abs(outlet), abs(inlet), abs(transferred))
    remark = ""
    if needs_compressor:
        value = float("nan")
        remark = (
            "the outlet's pressure is above a feed's: a compressor is needed, "
            "so no entropy generation is given"
        )
    elif value < -1e-9 * scale:
        remark = "impossible as specified: the entropy generation is negative"
    return EntropyGeneration(
        value=value,
        lost_work=surroundings_temperature * value,
        boundary_temperature=boundary_temperature,
        surroundings_temperature=surroundings_temperature,
        remark=remark,
    )
