"""A stage's specification: two of its conditions, from which the others follow."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from gibbsmin.errors import InputError
from gibbsmin.reactor.conditions import (
    HIGHEST_TEMPERATURE,
    LOWEST_TEMPERATURE,
    Equilibria,
    at_energy_and_volume,
    at_enthalpy,
    at_entropy,
    at_temperature,
    at_volume,
)
from gibbsmin.reactor.inlet import Inlet
from gibbsmin.reactor.model import StageModel


@dataclass(frozen=True)
class Specification:
    """One of temperature, heat and the feed's entropy; one of pressure, its drop and volume.

    Attributes
    ----------
    temperature : K
    heat : J or W into the stage; 0 is adiabatic
    entropy_of_feed : whether the stage is reversible and adiabatic
    pressure : Pa
    pressure_drop : Pa below the lowest feed's
    volume : m³ of a closed rigid vessel
    """

    temperature: float | None = None
    heat: float | None = None
    entropy_of_feed: bool = False
    pressure: float | None = None
    pressure_drop: float | None = None
    volume: float | None = None

    def outlet_pressure(self, inlet: Inlet) -> float | None:
        """Pa; None in a closed vessel.

        Raises
        ------
        InputError
            when the drop leaves no pressure.
        """
        if self.pressure_drop is None:
            return self.pressure
        pressure = inlet.lowest_pressure - self.pressure_drop
        if pressure <= 0.0:
            raise InputError(
                f"found a drop of {self.pressure_drop / 1e5:g} bar from "
                f"{inlet.lowest_pressure / 1e5:g} bar",
                "accepted is a drop that leaves a pressure above zero",
                key="pressure_drop",
            )
        return pressure


def solve(model: StageModel, specification: Specification, inlet: Inlet) -> Equilibria:
    """The one equilibrium (a batch of one) that meets the specification.

    Raises
    ------
    InputError
        when no temperature meets it, or several do.
    """
    feed = inlet.amounts[np.newaxis]
    start = np.array([inlet.temperature])
    pressure = specification.outlet_pressure(inlet)
    temperature, heat, volume = (
        specification.temperature,
        specification.heat,
        specification.volume,
    )
    if pressure is not None:
        P = np.array([pressure])
        if temperature is not None:
            return at_temperature(model, np.array([temperature]), P, feed)
        if heat is not None:
            found = at_enthalpy(model, np.array([inlet.enthalpy + heat]), P, feed, start)
        else:
            found = at_entropy(model, np.array([inlet.entropy]), P, feed, start)
    else:
        V = np.array([volume])
        if temperature is not None:
            return at_volume(model, np.array([temperature]), V, feed)
        energy = inlet.internal_energy + (heat or 0.0)
        found = at_energy_and_volume(model, np.array([energy]), V, feed, start)
    if np.isnan(found.temperature[0]):
        name = "entropy" if specification.entropy_of_feed else "heat"
        raise InputError(
            f"found {_wanted(specification)}, which no temperature between "
            f"{LOWEST_TEMPERATURE:g} K and {HIGHEST_TEMPERATURE:g} K meets",
            f"accepted is another {name}, or a temperature in its place",
            key=name,
        )
    return found


def _wanted(specification: Specification) -> str:
    if specification.entropy_of_feed:
        return "the feed's entropy to be kept"
    return f"a heat of {(specification.heat or 0.0) / 1e3:g} kJ (per second in a flow)"
