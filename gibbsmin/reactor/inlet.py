"""What enters a stage, summed over its streams, for a batch of states."""

from __future__ import annotations

import functools
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray, shared
from gibbsmin.reactor.mixture import Mixture
from gibbsmin.reactor.streams import Stream, Values
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.real_gas import Equation
from gibbsmin.thermo.species import Species


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


def inlet_of(
    streams: Sequence[Stream], library: Library, equation: Equation | None = None
) -> Inlet:
    """Sum up streams, each at its own temperature and pressure; without an equation ideal gas."""
    names = list(dict.fromkeys(name for stream in streams for name in stream.amounts))
    parts = [_content(stream, library, equation) for stream in streams]
    given = [np.shape(v) for s in streams for v in _values(s)]
    # Where the records themselves differ from state to state, so do enthalpies.
    shape = np.broadcast_shapes((1,), *given, *(part.enthalpy.shape for part in parts))
    amounts = np.zeros((*shape, len(names)))
    for part in parts:
        for column, name in enumerate(part.names):
            amounts[:, names.index(name)] += part.amounts[..., column]

    def total(values: Iterable[FloatArray]) -> FloatArray:
        # Parts that all states share are added once, not in each of them.
        added = np.asarray(sum(values, np.zeros(())))
        return added if added.shape == shape else np.array(np.broadcast_to(added, shape))

    moles = total(part.moles for part in parts)
    carries_gas = _most([part.gas for part in parts]) > 0.0
    with np.errstate(invalid="ignore", divide="ignore"):
        mean = total(part.moles * part.temperature for part in parts) / moles
    plain = total(part.temperature for part in parts) / len(parts)
    of_gas = _least([np.where(part.gas > 0.0, part.pressure, np.inf) for part in parts])
    return Inlet(
        records=tuple(library[name] for name in names),
        amounts=amounts,
        enthalpy=total(part.enthalpy for part in parts),
        entropy=total(part.entropy for part in parts),
        internal_energy=total(part.internal_energy for part in parts),
        temperature=np.where(moles > 0.0, mean, plain),
        lowest_pressure=total(
            [np.where(carries_gas, of_gas, _least([part.pressure for part in parts]))]
        ),
        carries_gas=np.array(np.broadcast_to(carries_gas, shape)),
        volume=total(part.volume for part in parts),
    )


@dataclass(frozen=True)
class _Content:
    """One stream: each value of all states () or of each state (B,); amounts with (F,) more."""

    names: tuple[str, ...]
    temperature: FloatArray
    pressure: FloatArray
    amounts: FloatArray
    enthalpy: FloatArray
    entropy: FloatArray
    internal_energy: FloatArray
    volume: FloatArray
    moles: FloatArray
    gas: FloatArray
    """Moles of it."""


def _content(stream: Stream, library: Library, equation: Equation | None) -> _Content:
    records = [library[name] for name in stream.amounts]
    mixture = Mixture.of(library.properties(records), equation)
    T, P, *each = (shared(value) for value in _values(stream))
    amounts = np.stack(np.broadcast_arrays(*each), axis=-1) if each else np.zeros(0)
    enthalpy = mixture.enthalpy(T, P, amounts)
    return _Content(
        names=tuple(stream.amounts),
        temperature=T,
        pressure=P,
        amounts=amounts,
        enthalpy=enthalpy,
        entropy=mixture.entropy(T, P, amounts),
        internal_energy=enthalpy - mixture.pressure_work(T, P, amounts),
        volume=mixture.gas_volume(T, P, amounts),
        moles=amounts.sum(axis=-1),
        gas=amounts[..., mixture.gas].sum(axis=-1),
    )


def _values(stream: Stream) -> list[Values]:
    return [stream.temperature, stream.pressure, *stream.amounts.values()]


def _least(values: Sequence[FloatArray]) -> FloatArray:
    return np.asarray(functools.reduce(np.minimum, values))


def _most(values: Sequence[FloatArray]) -> FloatArray:
    return np.asarray(functools.reduce(np.maximum, values))
