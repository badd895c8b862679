"""Standard deviations of a solved stage's results, in many states: the compiled kernel's arrays.

K independent changes of the data, each of one standard uncertainty, make the deviation of every
result: the root of the sum of the squares of its changes.  The equations are those of
:mod:`gibbsmin.reactor.stage_changes`; the kernel keeps no changes but those that a next stage
takes.  Ideal gases only.
"""

from __future__ import annotations

import os
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Any, TypeVar

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray
from gibbsmin.constants import GAS_CONSTANT, STANDARD_PRESSURE
from gibbsmin.minimise.compiled import share_out
from gibbsmin.reactor.derivatives import energy_slopes
from gibbsmin.reactor.kernel.storage import (
    AT_CONTENT,
    AT_ENTROPY,
    AT_TEMPERATURE,
    FIRST,
    Given,
    Laid,
    Passed,
    Scratch,
    States,
)
from gibbsmin.reactor.specification import Specification
from gibbsmin.reactor.stage import StageStates
from gibbsmin.reactor.stage_changes import SpecificationChanges, energy_changes, heat_changes
from gibbsmin.reactor.stream_changes import InletChanges, RecordChanges, spread
from gibbsmin.reactor.streams import Values
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Species

_Array = TypeVar("_Array", FloatArray, BoolArray)


@dataclass(frozen=True)
class StageDeviations:
    """Standard deviations in B states of a stage; NaN where a state has no derivatives.

    Attributes
    ----------
    temperature, pressure, heat, entropy_generation : (B,) K, Pa, J, J/K
    records : (S, B) of fractions of the gas, and of amounts of solids and liquids in mol
    forces : (C, B) of the driving forces of solids and liquids, in RT
    conversions : (F, B) of each record that enters
    passed : K changes of what leaves, for a next stage; of no states where none was asked for
    """

    temperature: FloatArray
    pressure: FloatArray
    heat: FloatArray
    entropy_generation: FloatArray
    records: FloatArray
    forces: FloatArray
    conversions: FloatArray
    passed: Passed


def stage_deviations(
    solve: Callable[..., Any],
    states: StageStates,
    specification: Specification,
    boundary_temperature: Values | None,
    asked: SpecificationChanges,
    inlet: InletChanges,
    records: RecordChanges,
    library: Library,
    *,
    passes: bool,
) -> StageDeviations:
    """Follow K independent standard uncertainties through a solved stage.

    ``solve`` is the kernel's entry in one of its forms; ``passes`` whether a next stage takes the
    changes of what leaves.  The changes of the inlet are those of
    :func:`gibbsmin.reactor.stream_changes.stream_changes`.  The others are those of
    :func:`gibbsmin.reactor.stage_changes.stage_changes`.
    """
    B, (m, S) = len(states.equilibria.temperature), states.model.balance.matrix.shape
    F, K = len(states.inlet.records), records.count
    laid = _laid(states, specification, boundary_temperature, records)
    own = _states(states, specification)
    given = _given(states, specification, asked, inlet, records, library)
    left = B if passes else 0
    passed = Passed(np.empty((left, K)), np.empty((left, K)), np.empty((left, S, K)))
    out = np.empty((B, FIRST + S + laid.condensed.size + F))
    workers = min(os.cpu_count() or 1, max(B, 1))
    block = -(-max(B, 1) // workers)

    def run(first: int) -> None:
        scratch = _scratch(m, S, F, K)
        solve(laid, own, given, scratch, passed, out, first, min(first + block, B))

    share_out(run, range(0, B, block), workers)
    rows = np.ascontiguousarray(out.T)
    by_record, forces, conversions = np.split(rows[FIRST:], [S, S + laid.condensed.size])
    temperature, pressure, heat, generated = rows[:FIRST]
    return StageDeviations(
        temperature, pressure, heat, generated, by_record, forces, conversions, passed
    )


def _laid(
    states: StageStates,
    specification: Specification,
    boundary_temperature: Values | None,
    records: RecordChanges,
) -> Laid:
    model, fed = states.model, states.inlet.records
    dH, dS = records.of(model.records)
    fed_dH, fed_dS = records.of(fed)
    if specification.temperature is not None:
        kind = AT_TEMPERATURE
    else:
        kind = AT_ENTROPY if specification.entropy_of_feed else AT_CONTENT
    return Laid(
        matrix=_plain(model.balance.matrix),
        feed=_plain(model.balance.feed_matrix),
        gas=_plain(model.gas),
        volumes=_plain(model.mixture.volumes),
        condensed=np.flatnonzero(~model.gas),
        same=_forms(fed, fed),
        forms=_forms(fed, model.records),
        enthalpies=_widened(dH),
        entropies=_widened(dS),
        fed_enthalpies=_widened(fed_dH),
        fed_entropies=_widened(fed_dS),
        kind=kind,
        closed=specification.volume is not None,
        boundary_follows=boundary_temperature is None,
        gas_constant=GAS_CONSTANT,
        standard_pressure=STANDARD_PRESSURE,
    )


def _widened(columns: FloatArray) -> FloatArray:
    """With 0 along ln T and ln P."""
    return np.pad(columns, ((0, 0), (0, 2)))


def _forms(fed: Sequence[Species], records: Sequence[Species]) -> BoolArray:
    """Which records are a form of each fed one, (F, S)."""
    table = [[record.formula == each.formula for record in records] for each in fed]
    return np.array(table, dtype=bool).reshape(len(fed), len(records))


def _states(states: StageStates, specification: Specification) -> States:
    model, found, energy = states.model, states.equilibria, states.energy
    fed = states.inlet.amounts
    T, P, mixture = found.temperature, found.pressure, model.mixture
    enthalpies = mixture.properties.enthalpy(T)
    if mixture.volumes.any():
        enthalpies += mixture.pressure_terms(P)
    volume = np.nan if specification.volume is None else specification.volume
    usable = found.solution.certified & np.isnan(found.upper_share)
    each = (
        T,
        P,
        found.amounts,
        found.solution.certificate.driving_forces,
        enthalpies,
        mixture.properties.entropy(T),
        mixture.heat_capacity(T, P, found.amounts),
        energy_slopes(model, T, enthalpies),
        energy.heat,
        energy.boundary_temperature,
        energy.needs_compressor,
        np.broadcast_to(np.asarray(volume, dtype=float), T.shape),
        np.broadcast_to(fed, (T.size, fed.shape[1])),
    )
    return States(usable, *map(_plain, each))


def _given(
    states: StageStates,
    specification: Specification,
    asked: SpecificationChanges,
    inlet: InletChanges,
    records: RecordChanges,
    library: Library,
) -> Given:
    model, T = states.model, states.equilibria.temperature
    K, closed = records.count, specification.volume is not None
    content = inlet.internal_energy if closed else inlet.enthalpy
    if specification.entropy_of_feed:
        heat = np.zeros(K)
    else:
        heat = heat_changes(states, specification, asked, inlet, library)
    if closed:
        room = asked.volume
    elif specification.pressure is not None:
        room = asked.pressure
    else:
        lowest = spread(inlet.lowest_pressure, inlet.columns, K)
        room = lowest - asked.pressure_drop
    energies = energy_changes(model, T, records) if model.shift.keys else np.zeros((0, 0, K))
    rows = (content, inlet.entropy, heat, asked.temperature, room)
    return Given(
        energies, inlet.columns, _plain(inlet.amounts), *[_rows_of(values) for values in rows]
    )


def _rows_of(values: FloatArray) -> FloatArray:
    """(K,) or (B, K) as rows of states, one for all where they are alike."""
    return np.atleast_2d(_plain(values))


def _plain(values: _Array) -> _Array:
    """One kind of array for the compiler, which compiles anew for each: in order and writable."""
    return np.require(values, requirements=["C", "W"])


def _scratch(m: int, S: int, F: int, K: int) -> Scratch:
    J = K + 2
    return Scratch(
        work=np.zeros((m, S + F)),
        columns=np.zeros(m, dtype=np.int64),
        rows=np.zeros(m, dtype=np.int64),
        supplies=np.zeros((m, J)),
        energies=np.zeros((S, J)),
        amounts=np.zeros((S, J)),
        system=np.zeros((m + 1, 2 * m + 2)),
        right=np.zeros((m + 1, J)),
        # At least the two rows that d ln T and d ln P take afterwards.
        solved=np.zeros((max(m + 1, 2), J)),
        scale=np.zeros(m + 1),
        contents=np.zeros((4, J)),
    )
