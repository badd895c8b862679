"""A stage's specification: two of its conditions, from which the others follow."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
import numpy.typing as npt

from gibbsmin.arrays import FloatArray, IntArray
from gibbsmin.errors import InputError
from gibbsmin.minimise import Programme, Status, minimise
from gibbsmin.reactor.conditions import (
    Equilibria,
    at_energy_and_volume,
    at_enthalpy,
    at_entropy,
    at_temperature,
    at_volume,
)
from gibbsmin.reactor.inlet import Inlet
from gibbsmin.reactor.model import HIGHEST_TEMPERATURE, LOWEST_TEMPERATURE, StageModel
from gibbsmin.reactor.streams import Values


@dataclass(frozen=True)
class Specification:
    """One of temperature, heat and the feed's entropy; one of pressure, its drop and volume.

    Attributes
    ----------
    temperature : K
    heat : J or W into the stage; 0 is adiabatic
    heat_loss : share of the feed's lower heating value that is lost
    entropy_of_feed : whether the stage is reversible and adiabatic
    pressure : Pa
    pressure_drop : Pa below the lowest feed's
    volume : m³ of a closed rigid vessel
    """

    temperature: Values | None = None
    heat: Values | None = None
    heat_loss: Values | None = None
    entropy_of_feed: bool = False
    pressure: Values | None = None
    pressure_drop: Values | None = None
    volume: Values | None = None

    def outlet_temperature(self, inlet: Inlet) -> FloatArray | None:
        """K, (B,); None where another condition takes its place.

        Raises
        ------
        InputError
            for one at which no record tells anything.
        """
        if self.temperature is None:
            return None
        T = _each(self.temperature, inlet)
        outside = T[(T < LOWEST_TEMPERATURE) | (T > HIGHEST_TEMPERATURE)]
        if outside.size:
            raise InputError(
                f"found a temperature of {outside[0]:g} K",
                f"accepted is one from {LOWEST_TEMPERATURE:g} K to {HIGHEST_TEMPERATURE:g} K",
                key="temperature",
            )
        return T

    def outlet_pressure(self, inlet: Inlet) -> FloatArray | None:
        """Pa, (B,); None in a closed vessel.

        Raises
        ------
        InputError
            when the drop leaves no pressure, or is a rise.
        """
        if self.pressure is not None:
            return _each(self.pressure, inlet)
        if self.pressure_drop is None:
            return None
        drop = _each(self.pressure_drop, inlet)
        if np.any(drop < 0.0):
            raise InputError(
                f"found a drop of {drop.min() / 1e5:g} bar",
                "accepted is a drop of zero or more, or a pressure in its place",
                key="pressure_drop",
            )
        pressure = inlet.lowest_pressure - drop
        if np.any(pressure <= 0.0):
            state = int(np.argmin(pressure))
            raise InputError(
                f"found a drop of {drop[state] / 1e5:g} bar from "
                f"{inlet.lowest_pressure[state] / 1e5:g} bar",
                "accepted is a drop that leaves a pressure above zero",
                key="pressure_drop",
            )
        return pressure


def solve(model: StageModel, specification: Specification, inlet: Inlet) -> Equilibria:
    """The equilibria that meet a specification; NaN where no temperature does, or several do."""
    found = _solved(model, specification, inlet)
    if specification.temperature is not None:
        return found
    status = found.solution.status.copy()
    missing = np.flatnonzero(np.isnan(found.temperature) & np.isfinite(inlet.enthalpy))
    if missing.size:
        status[missing] = _why(model, inlet, missing)
    status[~np.isnan(found.answers[0])] = Status.AMBIGUOUS
    return replace(found, solution=replace(found.solution, status=status))


def _why(model: StageModel, inlet: Inlet, states: IntArray) -> npt.NDArray[np.int8]:
    """Status of states without a temperature: unmet, unless the candidates cannot hold the feed."""
    # Whether amounts exist does not depend on energies, which an approach may leave undefined.
    trial = Programme(
        matrix=model.balance.matrix,
        supplies=model.balance.of_states(states).supplies(inlet.amounts[states]),
        energies=np.zeros((states.size, len(model.records))),
        gas=model.gas,
        direction=model.balance.direction,
        atoms=model.balance.atoms,
    )
    infeasible = minimise(trial).status == Status.INFEASIBLE
    return np.where(infeasible, Status.INFEASIBLE, Status.UNMET).astype(np.int8)


def _solved(model: StageModel, specification: Specification, inlet: Inlet) -> Equilibria:
    feed, start = inlet.amounts, inlet.temperature
    T, P = specification.outlet_temperature(inlet), specification.outlet_pressure(inlet)
    heat = _each(0.0 if specification.heat is None else specification.heat, inlet)
    if P is None:
        volume = _each(specification.volume, inlet)
        if T is not None:
            return at_volume(model, T, volume, feed)
        return at_energy_and_volume(model, inlet.internal_energy + heat, volume, feed, start)
    if T is not None:
        return at_temperature(model, T, P, feed)
    if specification.entropy_of_feed:
        return at_entropy(model, inlet.entropy, P, feed, start)
    return at_enthalpy(model, inlet.enthalpy + heat, P, feed, start)


def _each(value: Values | None, inlet: Inlet) -> FloatArray:
    """A value for each state."""
    return np.broadcast_to(np.asarray(value, dtype=float), inlet.temperature.shape)
