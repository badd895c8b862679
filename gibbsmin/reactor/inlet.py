"""What enters a stage, summed over its streams."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.reactor.energy import mixture_enthalpy, mixture_entropy
from gibbsmin.reactor.streams import Stream
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.species import Phase, Species


@dataclass(frozen=True)
class Inlet:
    """The streams of a stage, together.

    Attributes
    ----------
    records : the F records that enter, in the order they appear
    amounts : (F,) mol or mol/s
    enthalpy, entropy, internal_energy : J, J/K and J, or per second
    temperature : K, the mean over the amounts
    lowest_pressure : Pa, the lowest of the streams that carry gas (of all, where none does)
    carries_gas : whether any stream carries gas
    volume : m³ of the gas, each stream at its own pressure
    """

    records: tuple[Species, ...]
    amounts: FloatArray
    enthalpy: float
    entropy: float
    internal_energy: float
    temperature: float
    lowest_pressure: float
    carries_gas: bool
    volume: float


def inlet_of(streams: Sequence[Stream], library: Library) -> Inlet:
    """Sum up streams, each at its own temperature and pressure."""
    names = list(dict.fromkeys(name for stream in streams for name in stream.amounts))
    records = tuple(library[name] for name in names)
    table = PropertyTable.of(records)
    gas = np.array([record.phase is Phase.GAS for record in records], dtype=bool)
    T = np.array([stream.temperature for stream in streams])
    P = np.array([stream.pressure for stream in streams])
    amounts = np.array([[stream.amounts.get(n, 0.0) for n in names] for stream in streams])

    enthalpy = mixture_enthalpy(table, T, amounts)
    moles_of_gas = amounts[:, gas].sum(axis=1)
    carrying = moles_of_gas > 0.0
    totals = amounts.sum(axis=1)
    return Inlet(
        records=records,
        amounts=amounts.sum(axis=0),
        enthalpy=float(enthalpy.sum()),
        entropy=float(mixture_entropy(table, gas, T, P, amounts).sum()),
        internal_energy=float((enthalpy - moles_of_gas * GAS_CONSTANT * T).sum()),
        temperature=float(totals @ T / totals.sum()) if totals.sum() > 0.0 else float(T.mean()),
        lowest_pressure=float(P[carrying].min() if carrying.any() else P.min()),
        carries_gas=bool(carrying.any()),
        volume=float((moles_of_gas * GAS_CONSTANT * T / P).sum()),
    )
