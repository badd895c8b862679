"""The energy and entropy balance of a stage: duty, shaft work and entropy generation."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray


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
