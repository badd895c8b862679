"""First-order changes of a solved stage, for K changes of the data at once.

The conditions of equilibrium give dn for changes of g̃, ln T, ln P and the supplies
(:mod:`gibbsmin.reactor.derivatives`); the specification's two conditions then fix d ln T and
d ln P.  Nothing is solved anew, and every change is exact to first order.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray
from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.reactor.derivatives import Responses, energy_slopes, responses
from gibbsmin.reactor.heating import lower_heating_values
from gibbsmin.reactor.mixture_slopes import MixtureSlopes, mixture_slopes
from gibbsmin.reactor.model import StageModel
from gibbsmin.reactor.specification import Specification
from gibbsmin.reactor.stage import StageStates
from gibbsmin.reactor.stream_changes import InletChanges, RecordChanges, spread
from gibbsmin.reactor.streams import Values
from gibbsmin.thermo.library import Library


@dataclass(frozen=True)
class SpecificationChanges:
    """K changes of what a stage is asked for, each (K,) or (B, K) in SI; 0 where it is not."""

    temperature: FloatArray
    heat: FloatArray
    pressure: FloatArray
    pressure_drop: FloatArray
    volume: FloatArray


@dataclass(frozen=True)
class StageChanges:
    """K changes of B states of a stage; NaN where a state has none.

    Attributes
    ----------
    temperature, pressure : (B, K) in K and Pa
    amounts : (B, S, K) mol
    forces : (B, S, K) of a·λ − g̃, in RT; of an absent condensed phase, of its driving force
    heat, shaft_work : (B, K) J
    entropy_generation : (B, K) J/K; NaN where the stage itself has no figure
    regular : (B,) whether there are any; none on a plateau
    """

    temperature: FloatArray
    pressure: FloatArray
    amounts: FloatArray
    forces: FloatArray
    heat: FloatArray
    shaft_work: FloatArray
    entropy_generation: FloatArray
    regular: BoolArray


def stage_changes(
    states: StageStates,
    specification: Specification,
    boundary_temperature: Values | None,
    asked: SpecificationChanges,
    inlet: InletChanges,
    records: RecordChanges,
    library: Library,
) -> StageChanges:
    """How a solved stage answers to changes of its inlet, its specification and the records.

    Every quantity q of the outlet is first written as dq along K + 2 columns: the K changes at
    constant T and P, then ln T, then ln P.  The specification is two such rows, which give
    d ln T and d ln P for each of the K changes.
    """
    model, found, energy = states.model, states.equilibria, states.energy
    T, P, n = found.temperature, found.pressure, found.amounts
    slopes = mixture_slopes(model.mixture, T, P, n)
    answer = _answers(states, inlet, records, slopes)
    outlet = _outlet(states, answer.amounts, records, slopes)
    heat_in = heat_changes(states, specification, asked, inlet, library)
    closed = specification.volume is not None

    if specification.temperature is not None:
        thermal = _row(outlet.room, -asked.temperature / T[:, np.newaxis], 1.0, 0.0)
    elif specification.entropy_of_feed:
        thermal = _less(outlet.entropy, inlet.entropy)
    elif closed:
        thermal = _less(outlet.energy, inlet.internal_energy + heat_in)
    else:
        thermal = _less(outlet.enthalpy, inlet.enthalpy + heat_in)
    if closed:
        volume = np.reshape(np.asarray(specification.volume, dtype=float), (-1, 1))
        room = _row(outlet.room, asked.volume / volume, 0.0, 1.0)
        room = room - outlet.room / slopes.room[:, np.newaxis]
    elif specification.pressure is not None:
        room = _row(outlet.room, -asked.pressure / P[:, np.newaxis], 0.0, 1.0)
    else:
        drop = asked.pressure_drop - inlet.lowest_pressure
        room = _row(outlet.room, drop / P[:, np.newaxis], 0.0, 1.0)
    logarithms = _solve_two(thermal, room)

    content, entering = (
        (outlet.energy, inlet.internal_energy) if closed else (outlet.enthalpy, inlet.enthalpy)
    )
    heat = _along(content, logarithms) - entering
    work = np.zeros_like(heat)
    if specification.entropy_of_feed:
        heat, work = work, heat
    elif specification.temperature is None:
        heat = np.broadcast_to(heat_in, heat.shape)
    temperature = T[:, np.newaxis] * logarithms[0]
    T_b = energy.boundary_temperature[:, np.newaxis]
    transferred = heat / T_b
    if boundary_temperature is None:
        transferred = transferred - energy.heat[:, np.newaxis] / T_b**2 * temperature
    generated = _along(outlet.entropy, logarithms) - inlet.entropy - transferred
    changes = StageChanges(
        temperature=temperature,
        pressure=P[:, np.newaxis] * logarithms[1],
        amounts=_along(answer.amounts, logarithms),
        forces=_along(answer.forces, logarithms),
        heat=heat,
        shaft_work=work,
        entropy_generation=np.where(energy.needs_compressor[:, np.newaxis], np.nan, generated),
        regular=answer.regular & np.isnan(found.upper_share),
    )
    for values in (changes.temperature, changes.amounts):
        values[~changes.regular] = np.nan
    return changes


def heat_changes(
    states: StageStates,
    specification: Specification,
    asked: SpecificationChanges,
    inlet: InletChanges,
    library: Library,
) -> FloatArray:
    """Changes of the heat that is asked for, (K,) or (B, K), J; a loss follows the feed."""
    if specification.heat_loss is None:
        return asked.heat
    values = lower_heating_values(states.inlet.records, library)
    share = np.reshape(specification.heat_loss, (-1, 1))
    lost = share * np.einsum("f,bfk->bk", values, inlet.amounts)
    return spread(-lost, inlet.columns, len(asked.heat))


@dataclass(frozen=True)
class _OutletRows:
    """Changes of the outlet's contents along the K + 2 columns, each (B, K + 2)."""

    enthalpy: FloatArray
    energy: FloatArray
    entropy: FloatArray
    room: FloatArray
    """P V of its gas."""


def _answers(
    states: StageStates, inlet: InletChanges, records: RecordChanges, slopes: MixtureSlopes
) -> Responses:
    """dn along the K + 2 columns: of the records' and the feed's changes, of ln T and of ln P."""
    model, found = states.model, states.equilibria
    T = found.temperature
    K = records.count
    energies = np.zeros((len(T), len(model.records), K + 2))
    energies[..., :K] = energy_changes(model, T, records)
    energies[..., K] = energy_slopes(model, T, slopes.enthalpies)
    energies[..., K + 1] = slopes.energies_by_pressure
    programme = model.programme(T, found.pressure, states.inlet.amounts)
    answer = responses(
        programme,
        found.solution,
        energies,
        model.balance.feed_matrix,
        slopes.fugacities_by_amounts,
    )
    # A record that no change touches may bring a new element, which has no derivative.
    touched = np.any(inlet.amounts, axis=2, keepdims=True).swapaxes(1, 2)
    amounts, forces = (part[..., : K + 2].copy() for part in (answer.amounts, answer.forces))
    for total, along in ((amounts, answer.amounts), (forces, answer.forces)):
        by_feed = np.where(touched, along[..., K + 2 :], 0.0)
        total[..., :K] += by_feed @ inlet.amounts
    return Responses(amounts, forces, answer.regular)


def energy_changes(model: StageModel, T: FloatArray, records: RecordChanges) -> FloatArray:
    """dg̃ = (dH − T dS)/RT of the candidates at constant T, with what an approach makes of it."""
    dH, dS = records.of(model.records)

    def plain(T: FloatArray) -> FloatArray:
        return np.asarray(dH / (GAS_CONSTANT * T)[:, np.newaxis, np.newaxis] - dS / GAS_CONSTANT)

    changes, shift = plain(T), model.shift
    if shift.keys:
        keys, nu = list(shift.keys), shift.stoichiometry
        gaps = np.stack(
            [
                nu[row] @ (plain(shift.shifted_temperature(row, T)) - changes)
                for row in range(len(keys))
            ],
            axis=1,
        )
        changes[:, keys] += np.linalg.solve(nu[:, keys], gaps)
    return changes


def _outlet(
    states: StageStates, dn: FloatArray, records: RecordChanges, slopes: MixtureSlopes
) -> _OutletRows:
    model, found = states.model, states.equilibria
    T, P, n = found.temperature, found.pressure, found.amounts
    dH, dS = records.of(model.records)
    Cp, pV = slopes.heat_capacity, slopes.room
    terms = model.mixture.pressure_terms(P)
    room = _content(slopes.rooms, dn, 0.0, pV * slopes.expansion, pV * (1.0 + slopes.compression))
    enthalpy = _content(slopes.enthalpies, dn, n @ dH, Cp * T, slopes.enthalpy_by_pressure)
    of_solids = _content(terms, dn, 0.0, 0.0, P * (n @ model.mixture.volumes))
    return _OutletRows(
        enthalpy=enthalpy,
        energy=enthalpy - room - of_solids,
        entropy=_content(slopes.entropies, dn, n @ dS, Cp, slopes.entropy_by_pressure),
        room=room,
    )


def _content(
    partial: FloatArray,
    dn: FloatArray,
    of_records: FloatArray | float,
    of_T: FloatArray | float,
    of_P: FloatArray | float,
) -> FloatArray:
    """Σ (∂q/∂n) dn with what changes at constant n."""
    row = np.einsum("bs,bsk->bk", partial, dn)
    return np.asarray(row + _row(row, of_records, of_T, of_P))


def _row(
    like: FloatArray,
    of_data: FloatArray | float,
    of_T: FloatArray | float,
    of_P: FloatArray | float,
) -> FloatArray:
    """A row of K + 2 columns, shaped as another one."""
    row = np.empty_like(like)
    row[:, :-2], row[:, -2], row[:, -1] = of_data, of_T, of_P
    return row


def _less(row: FloatArray, change: FloatArray) -> FloatArray:
    """The row with a change of the data taken off."""
    row = row.copy()
    row[:, :-2] -= change
    return row


def _solve_two(thermal: FloatArray, room: FloatArray) -> tuple[FloatArray, FloatArray]:
    """d ln T and d ln P, each (B, K), at which both rows are 0."""
    (a, b), (c, d) = ((row[:, -2:-1], row[:, -1:]) for row in (thermal, room))
    right, below = -thermal[:, :-2], -room[:, :-2]
    determinant = a * d - b * c
    return (right * d - b * below) / determinant, (a * below - right * c) / determinant


def _along(row: FloatArray, logarithms: tuple[FloatArray, FloatArray]) -> FloatArray:
    """A row's change along the K changes, with what d ln T and d ln P make of it."""
    if row.ndim == 2:
        return np.asarray(row[:, :-2] + row[:, -2:-1] * logarithms[0] + row[:, -1:] * logarithms[1])
    log_T, log_P = (each[:, np.newaxis] for each in logarithms)
    return np.asarray(row[..., :-2] + row[..., -2:-1] * log_T + row[..., -1:] * log_P)
