"""A stage solved: its equilibria in a batch of states, and their energy balance."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.errors import InputError
from gibbsmin.reactor.chemistry import Chemistry
from gibbsmin.reactor.conditions import Equilibria
from gibbsmin.reactor.energy import EnergyBalance, energy_balance
from gibbsmin.reactor.heating import lower_heating_values, without_ash
from gibbsmin.reactor.inlet import Inlet, inlet_of
from gibbsmin.reactor.model import StageModel, stage_model
from gibbsmin.reactor.specification import Specification, solve
from gibbsmin.reactor.streams import Stream, Values
from gibbsmin.thermo.library import Library


@dataclass(frozen=True)
class StageStates:
    """B states of a stage: what enters, the equilibria that leave, and what they take up."""

    inlet: Inlet
    model: StageModel
    equilibria: Equilibria
    energy: EnergyBalance


def solve_stage(
    chemistry: Chemistry,
    specification: Specification,
    boundary_temperature: Values | None,
    streams: Sequence[Stream],
    library: Library,
) -> StageStates:
    """Solve a stage in all states of its streams.

    Raises
    ------
    InputError
        when the chemistry does not fit the feed, or a pressure drop leaves nothing.
    """
    inlet = inlet_of(streams, library, chemistry.equation)
    model = stage_model(chemistry, inlet.records, library)
    if specification.heat_loss is not None:
        specification = replace(specification, heat=-_loss(specification.heat_loss, inlet, library))
    equilibria = solve(model, specification, inlet)
    energy = _energy_balance(specification, boundary_temperature, inlet, model, equilibria)
    return StageStates(inlet, model, equilibria, energy)


def _loss(share: Values, inlet: Inlet, library: Library) -> FloatArray:
    """Heat lost in each state, as a share of what the feed would give by burning.

    Raises
    ------
    InputError
        when a record of the feed has no heating value.
    """
    values = lower_heating_values(inlet.records, library)
    burnt = without_ash(inlet.records, inlet.amounts)
    counts = np.any(burnt > 0.0, axis=0)
    for record, value, counted in zip(inlet.records, values, counts, strict=True):
        if counted and np.isnan(value):
            raise InputError(
                f'found "{record.name}" in the feed, which has no heating value to lose a share of',
                "accepted is a heat in its place",
                key="heat_loss",
            )
    return share * (burnt @ np.nan_to_num(values))


def _energy_balance(
    specification: Specification,
    boundary_temperature: Values | None,
    inlet: Inlet,
    model: StageModel,
    found: Equilibria,
) -> EnergyBalance:
    """Heat and shaft work into the stage, and the entropy they leave unaccounted for.

    A reversible stage takes up its enthalpy change as shaft work, a closed vessel its change of
    internal energy as heat.
    """
    T, P = found.temperature, found.pressure
    change = model.mixture.enthalpy(T, P, found.amounts) - inlet.enthalpy
    heat, work = change, np.zeros_like(change)
    needs_compressor = inlet.carries_gas & (inlet.lowest_pressure < P)
    if specification.entropy_of_feed:
        heat, work = work, change
        needs_compressor = np.zeros_like(needs_compressor)
    elif specification.volume is not None:
        heat = model.mixture.internal_energy(T, P, found.amounts) - inlet.internal_energy
        needs_compressor = specification.volume < inlet.volume
    if specification.heat is not None:
        heat = np.where(np.isnan(change), np.nan, specification.heat)
    boundary: FloatArray = (
        T if boundary_temperature is None else np.broadcast_to(boundary_temperature, T.shape)
    )
    return energy_balance(
        heat=heat,
        shaft_work=work,
        entropy_in=inlet.entropy,
        entropy_out=model.mixture.entropy(T, P, found.amounts),
        boundary_temperature=boundary,
        needs_compressor=needs_compressor,
    )
