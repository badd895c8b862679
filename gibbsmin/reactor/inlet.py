"""What enters a stage, summed over its streams, for a batch of states."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray
from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.reactor.energy import mixture_enthalpy, mixture_entropy
from gibbsmin.reactor.streams import Stream
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.species import Phase, Species


@dataclass(frozen=True)
class Inlet:
    """The streams of a stage, together, in B states.

    Attributes
    ----------
    records : the F records that enter, in the order they appear
    amounts : (B, F) mol or mol/s
    enthalpy, entropy, internal_energy : (B,) J, J/K and J, or per second
    temperature : (B,) K, the mean over the amounts
    lowest_pressure : (B,) Pa, the lowest of the streams that carry gas (of all, where none does)
    carries_gas : (B,) whether any stream carries gas
    volume : (B,) m³ of the gas, each stream at its own pressure
    """

    records: tuple[Species, ...]
    amounts: FloatArray
    enthalpy: FloatArray
    entropy: FloatArray
    internal_energy: FloatArray
    temperature: FloatArray
    lowest_pressure: FloatArray
    carries_gas: BoolArray
    volume: FloatArray


def inlet_of(streams: Sequence[Stream], library: Library) -> Inlet:
    """Sum up streams, each at its own temperature and pressure."""
    names = list(dict.fromkeys(name for stream in streams for name in stream.amounts))
    records = tuple(library[name] for name in names)
    table = PropertyTable.of(records)
    gas = np.array([record.phase is Phase.GAS for record in records], dtype=bool)
    T, P, amounts = _laid_out(streams, names)

    enthalpy = mixture_enthalpy(table, T, amounts)
    entropy = mixture_entropy(table, gas, T, P, amounts)
    moles_of_gas = amounts[..., gas].sum(axis=-1)
    totals = amounts.sum(axis=-1)
    weights = np.where(totals.sum(axis=-1, keepdims=True) > 0.0, totals, 1.0)
    carrying = moles_of_gas > 0.0
    carries_gas = carrying.any(axis=-1)
    counted = carrying | ~carries_gas[:, np.newaxis]
    return Inlet(
        records=records,
        amounts=amounts.sum(axis=1),
        enthalpy=enthalpy.sum(axis=-1),
        entropy=entropy.sum(axis=-1),
        internal_energy=(enthalpy - moles_of_gas * GAS_CONSTANT * T).sum(axis=-1),
        temperature=np.average(T, axis=-1, weights=weights),
        lowest_pressure=np.where(counted, P, np.inf).min(axis=-1),
        carries_gas=carries_gas,
        volume=(moles_of_gas * GAS_CONSTANT * T / P).sum(axis=-1),
    )


def _laid_out(
    streams: Sequence[Stream], names: Sequence[str]
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Temperatures and pressures (B, K) and amounts (B, K, F) of K streams."""
    values = [
        (stream.temperature, stream.pressure, *(stream.amounts.get(n, 0.0) for n in names))
        for stream in streams
    ]
    shape = np.broadcast_shapes((1,), *(np.shape(value) for row in values for value in row))
    table = np.array([[np.broadcast_to(value, shape) for value in row] for row in values])
    T, P, *_ = np.moveaxis(table, 1, 0)
    return T.T, P.T, np.transpose(table[:, 2:], (2, 0, 1)).astype(float)
