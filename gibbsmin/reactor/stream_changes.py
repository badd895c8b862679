"""First-order changes of what enters a stage, for K changes of the data at once.

The data are the records' enthalpies of formation and entropies at 298.15 K, and each stream's
temperature, pressure and amounts.  A change of a record's numbers shifts its H and S by the same
amount at every temperature, since its heat capacity stays as it is.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray
from gibbsmin.constants import GAS_CONSTANT, STANDARD_PRESSURE
from gibbsmin.reactor.inlet import Inlet
from gibbsmin.reactor.streams import Stream
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.species import Phase, Species


@dataclass(frozen=True)
class RecordChanges:
    """K changes of the records' numbers.

    Attributes
    ----------
    enthalpy : dΔfH298 in J/mol by record name, (K,); records that are not named do not change
    entropy : dS298 in J/mol/K by record name, (K,)
    count : K
    """

    enthalpy: Mapping[str, FloatArray]
    entropy: Mapping[str, FloatArray]
    count: int

    def of(self, records: Sequence[Species]) -> tuple[FloatArray, FloatArray]:
        """dH and dS of these records, each (S, K)."""
        nothing = np.zeros(self.count)
        names = [record.name for record in records]
        shape = (len(names), self.count)
        return (
            np.array([self.enthalpy.get(name, nothing) for name in names]).reshape(shape),
            np.array([self.entropy.get(name, nothing) for name in names]).reshape(shape),
        )


@dataclass(frozen=True)
class StreamChanges:
    """K changes of a stream in B states, or in one that stands for all.

    Attributes
    ----------
    temperature, pressure : (B, K) or (1, K), K and Pa
    amounts : by record name, (B, K) or (1, K), mol; records that are not named do not change
    """

    temperature: FloatArray
    pressure: FloatArray
    amounts: Mapping[str, FloatArray]


@dataclass(frozen=True)
class InletChanges:
    """K changes of a stage's streams together, in B states.

    Attributes
    ----------
    amounts : (B, F, K) of the inlet's records, mol
    enthalpy, entropy, internal_energy : (B, K)
    lowest_pressure : (B, K) of the stream whose pressure the outlet's follows
    """

    amounts: FloatArray
    enthalpy: FloatArray
    entropy: FloatArray
    internal_energy: FloatArray
    lowest_pressure: FloatArray


def inlet_changes(
    streams: Sequence[Stream],
    changes: Sequence[StreamChanges],
    records: RecordChanges,
    inlet: Inlet,
    library: Library,
) -> InletChanges:
    """Sum up the streams' changes; the inlet is that of these streams.

    With s̄ = S − R ln(y P/P°) for gases, S for the rest:

        dH = Σ (H dn + n dH° + n Cp dT)
        dS = Σ (s̄ dn + n dS° + n Cp dT/T) − R N dP/P
        dU = dH − R d(N T)
    """
    B, K = len(inlet.temperature), records.count
    amounts = np.zeros((B, len(inlet.records), K))
    enthalpy, entropy, room, lowest = (np.zeros((B, K)) for _ in range(4))
    places = {record.name: place for place, record in enumerate(inlet.records)}
    for stream, change in zip(streams, changes, strict=True):
        part = [library[name] for name in stream.amounts]
        of_stream = _mixture_changes(stream, change, part, records, B)
        for place, amount in zip((places[r.name] for r in part), of_stream[0], strict=True):
            amounts[:, place] += amount
        enthalpy += of_stream[1]
        entropy += of_stream[2]
        room += of_stream[3]
        pressure = np.broadcast_to(np.asarray(stream.pressure, dtype=float), (B,))
        lowest = np.where((pressure == inlet.lowest_pressure)[:, None], change.pressure, lowest)
    return InletChanges(amounts, enthalpy, entropy, enthalpy - GAS_CONSTANT * room, lowest)


def _mixture_changes(
    stream: Stream,
    change: StreamChanges,
    part: Sequence[Species],
    records: RecordChanges,
    states: int,
) -> tuple[list[FloatArray], FloatArray, FloatArray, FloatArray]:
    """dn of each record, and dH, dS and d(N T) of one stream."""
    table = PropertyTable.of(part)
    gas = np.array([record.phase is Phase.GAS for record in part], dtype=bool)
    T = np.broadcast_to(np.asarray(stream.temperature, dtype=float), (states,))
    P = np.broadcast_to(np.asarray(stream.pressure, dtype=float), (states,))
    n = np.stack([np.broadcast_to(v, (states,)) for v in stream.amounts.values()], axis=1)
    nothing = np.zeros((1, records.count))
    dn = [change.amounts.get(record.name, nothing) for record in part]
    dH, dS = records.of(part)
    heat_capacity = np.sum(n * table.heat_capacity(T), axis=1)[:, np.newaxis]
    H = table.enthalpy(T)
    s = partial_entropies(table, gas, T, P, n)
    moles = np.where(gas, n, 0.0).sum(axis=1)[:, np.newaxis]
    of_gas = sum((d for d, in_gas in zip(dn, gas.tolist(), strict=True) if in_gas), nothing)
    dT, log_dP = change.temperature, change.pressure / P[:, np.newaxis]
    return (
        dn,
        _along(H, dn) + n @ dH + heat_capacity * dT,
        _along(s, dn)
        + n @ dS
        + heat_capacity * dT / T[:, np.newaxis]
        - GAS_CONSTANT * moles * log_dP,
        of_gas * T[:, np.newaxis] + moles * dT,
    )


def _along(values: FloatArray, changes: Sequence[FloatArray]) -> FloatArray:
    """Σ values dn, (B, K), of values (B, F) and the changes of each record."""
    total = np.zeros((1, 1))
    for column, change in enumerate(changes):
        if change.any():
            total = total + values[:, column, np.newaxis] * change
    return np.asarray(total)


def partial_entropies(
    properties: PropertyTable, gas: BoolArray, T: FloatArray, P: FloatArray, amounts: FloatArray
) -> FloatArray:
    """s̄ = ∂S/∂n of each record, (B, S) in J/mol/K; that of an absent gas is given as its S."""
    n = np.where(gas, amounts, 0.0)
    total = n.sum(axis=1, keepdims=True)
    present = n > 0.0
    with np.errstate(divide="ignore", invalid="ignore"):
        logarithm = np.log(n / total) + np.log(P / STANDARD_PRESSURE)[:, np.newaxis]
    return properties.entropy(T) - GAS_CONSTANT * np.where(present, logarithm, 0.0)
