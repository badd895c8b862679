"""First-order changes of what enters a stage, for K changes of the data at once.

The data are the records' enthalpies of formation and entropies at 298.15 K, and each stream's
temperature, pressure and amounts.  A change of a record's numbers shifts its H and S by the same
amount at every temperature, since its heat capacity stays as it is.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import FloatArray, IntArray, shared
from gibbsmin.reactor.inlet import Inlet
from gibbsmin.reactor.mixture import Mixture
from gibbsmin.reactor.mixture_slopes import mixture_slopes
from gibbsmin.reactor.streams import Stream
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.real_gas import Equation
from gibbsmin.thermo.species import Species


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

    def of(self, columns: IntArray) -> StreamChanges:
        """Some of the changes."""
        amounts = {name: values[:, columns] for name, values in self.amounts.items()}
        return StreamChanges(self.temperature[:, columns], self.pressure[:, columns], amounts)


@dataclass(frozen=True)
class InletChanges:
    """L of K changes of a stage's streams together, in B states or, with 1 for B, in all alike.

    Attributes
    ----------
    columns : (L,) which of the K they are; the others change nothing of the inlet
    amounts : (B, F, L) of the inlet's records, mol
    enthalpy, entropy, internal_energy : (B, L)
    lowest_pressure : (B, L) of the stream whose pressure the outlet's follows
    """

    columns: IntArray
    amounts: FloatArray
    enthalpy: FloatArray
    entropy: FloatArray
    internal_energy: FloatArray
    lowest_pressure: FloatArray


def spread(values: FloatArray, columns: IntArray, count: int) -> FloatArray:
    """Values (..., L) in their columns of K, with 0 in the others."""
    whole = np.zeros((*values.shape[:-1], count))
    whole[..., columns] = values
    return whole


def inlet_changes(
    streams: Sequence[Stream],
    changes: Sequence[StreamChanges],
    records: RecordChanges,
    inlet: Inlet,
    library: Library,
    equation: Equation | None = None,
) -> InletChanges:
    """All K changes of the streams and of their records; the inlet is that of these streams.

    With partial molar H̄ and S̄, mixing included, V of the gas and V̄ its partial molar volume:

        dH = Σ (H̄ dn + n dH°) + Cp dT + (V − T ∂V/∂T) dP + Σ n V dP of solids and liquids
        dS = Σ (S̄ dn + n dS°) + Cp dT/T − ∂V/∂T dP
        dU = dH − d(P V), without the pressure terms of solids and liquids
    """
    own = stream_changes(streams, changes, records.count, inlet, library, equation)
    return with_records(own, records, inlet)


def with_records(own: InletChanges, records: RecordChanges, inlet: Inlet) -> InletChanges:
    """The streams' own changes with those of the inlet's records, all K."""
    dH, dS = (inlet.amounts @ each for each in records.of(inlet.records))

    def whole(values: FloatArray) -> FloatArray:
        return spread(values, own.columns, records.count)

    return InletChanges(
        np.arange(records.count),
        whole(own.amounts),
        whole(own.enthalpy) + dH,
        whole(own.entropy) + dS,
        whole(own.internal_energy) + dH,
        whole(own.lowest_pressure),
    )


def stream_changes(
    streams: Sequence[Stream],
    changes: Sequence[StreamChanges],
    count: int,
    inlet: Inlet,
    library: Library,
    equation: Equation | None = None,
) -> InletChanges:
    """Those of K = ``count`` changes that the streams themselves feel."""
    felt = np.zeros(count, dtype=bool)
    for stream, change in zip(streams, changes, strict=True):
        own = (change.amounts[name] for name in stream.amounts if name in change.amounts)
        for values in (change.temperature, change.pressure, *own):
            felt |= values.any(axis=0)
    columns = np.flatnonzero(felt)
    nothing = np.zeros((1, columns.size))
    amounts = {record.name: nothing for record in inlet.records}
    enthalpy, entropy, energy, lowest = nothing, nothing, nothing, nothing
    for stream, all_changes in zip(streams, changes, strict=True):
        change = all_changes.of(columns)
        part = [library[name] for name in stream.amounts]
        dn = [change.amounts.get(record.name, nothing) for record in part]
        for record, amount in zip(part, dn, strict=True):
            amounts[record.name] = amounts[record.name] + amount
        if any(changed.any() for changed in (change.temperature, change.pressure, *dn)):
            of_stream = _mixture_changes(stream, change, part, dn, equation)
            enthalpy = enthalpy + of_stream[0]
            entropy = entropy + of_stream[1]
            energy = energy + of_stream[2]
        if change.pressure.any():
            is_lowest = np.asarray(stream.pressure == inlet.lowest_pressure)[:, np.newaxis]
            lowest = np.where(is_lowest, change.pressure, lowest)
    fed = np.stack(np.broadcast_arrays(*amounts.values()), axis=1)
    return InletChanges(columns, fed, enthalpy, entropy, energy, lowest)


def _mixture_changes(
    stream: Stream,
    change: StreamChanges,
    part: Sequence[Species],
    dn: Sequence[FloatArray],
    equation: Equation | None,
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """dH, dS and dU of one stream."""
    mixture = Mixture.of(PropertyTable.of(part), equation)
    values = [shared(v) for v in (stream.temperature, stream.pressure, *stream.amounts.values())]
    T, P, *each = np.broadcast_arrays(*map(np.atleast_1d, values))
    n = np.stack(each, axis=1)
    slopes = mixture_slopes(mixture, T, P, n)
    log_dT = change.temperature / T[:, np.newaxis]
    log_dP = change.pressure / P[:, np.newaxis]

    def total(partial: FloatArray, of_T: FloatArray, of_P: FloatArray) -> FloatArray:
        row = _along(partial, dn) + of_T[:, np.newaxis] * log_dT + of_P[:, np.newaxis] * log_dP
        return np.asarray(row)

    pV, Cp = slopes.room, slopes.heat_capacity
    enthalpy = total(slopes.enthalpies, Cp * T, slopes.enthalpy_by_pressure)
    room = total(slopes.rooms, pV * slopes.expansion, pV * (1.0 + slopes.compression))
    of_solids = total(mixture.pressure_terms(P), 0.0 * T, P * (n @ mixture.volumes))
    return (
        enthalpy,
        total(slopes.entropies, Cp, slopes.entropy_by_pressure),
        enthalpy - room - of_solids,
    )


def _along(values: FloatArray, changes: Sequence[FloatArray]) -> FloatArray:
    """Σ values dn, (B, K), of values (B, F) and the changes of each record."""
    total = np.zeros((1, 1))
    for column, change in enumerate(changes):
        if change.any():
            total = total + values[:, column, np.newaxis] * change
    return np.asarray(total)
