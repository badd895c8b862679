"""Figures that follow from a stage's state: of its gas, its answer to heat, and the trade's own."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

import numpy as np

from gibbsmin.constants import STANDARD_PRESSURE
from gibbsmin.jobs.fuel_figures import exergy_figures, fuel_figures, gas_fractions
from gibbsmin.jobs.train import Step
from gibbsmin.reactor.activities import ElementActivity
from gibbsmin.reactor.derivatives import derivatives, energy_slopes
from gibbsmin.reactor.dew_points import acid_dew_point, water_dew_point
from gibbsmin.reactor.gas_figures import gas_figures, response
from gibbsmin.reactor.mixture_slopes import mixture_slopes
from gibbsmin.reactor.stage import StageStates
from gibbsmin.reactor.trade_figures import (
    at_reference_oxygen,
    condensed_mass_fractions,
    nitriding_potential,
    nitrogen_activity,
    quotient,
    steam_to_carbon,
    synthesis_module,
    zirconia_voltage,
)
from gibbsmin.results import Figure
from gibbsmin.thermo.library import Library

_TRACE = 1e-6
"""Mole fractions below this are not set against each other."""

_MOST_STEAM = 100.0
"""Steam to carbon above this tells of a trace of carbon."""

_SYNTHESIS_GAS = 0.01
"""Hydrogen and carbon monoxide both from this fraction make a synthesis gas."""

_EMISSIONS = ("NO(g)", "NO2(g)", "N2O(g)", "CO(g)", "SO2(g)", "SO3(g)", "HCl(g)", "NH3(g)")
"""Gases that limits of emission are set for (common practice)."""

_LEAST_EMISSION = 1e-9


def figures_of(
    step: Step, activities: Sequence[ElementActivity], library: Library
) -> tuple[Figure, ...]:
    """The figures of the first state; those that do not apply are left away."""
    states, stage = step.states, step.stage
    unit = "kW" if step.streams[0].is_flow else "kJ"
    figures = (
        *_of_the_gas(states, unit),
        *_of_solids_and_liquids(states),
        *_of_the_trade(states, activities, library),
        *_of_emissions(states, stage.reference_oxygen),
        *fuel_figures(states, unit, library),
        *exergy_figures(step, stage.surroundings_temperature, unit, library),
    )
    return tuple(
        Figure(figure.name, float(figure.value), figure.unit)
        for figure in figures
        if np.isfinite(figure.value)
    )


def _of_the_gas(states: StageStates, unit: str) -> Iterable[Figure]:
    model, found = states.model, states.equilibria
    T, P, n = found.temperature, found.pressure, found.amounts
    gas = gas_figures(model.mixture, T, P, n)
    slopes = mixture_slopes(model.mixture, T, P, n)
    changes = derivatives(
        model.programme(T, P, states.inlet.amounts),
        found.solution,
        energy_slopes(model, T, slopes.enthalpies),
        slopes.energies_by_pressure,
        np.zeros((len(model.balance.rows), 0)),
        slopes.fugacities_by_amounts,
    )
    answer = response(slopes, T, changes)
    yield Figure("molar mass of the gas", gas.molar_mass[0] * 1e3, "g/mol")
    yield Figure("density of the gas", gas.density[0], "kg/m3")
    yield Figure("heat capacity of the gas, frozen", gas.heat_capacity[0], "J/(mol K)")
    yield Figure("heat capacity of the outlet, frozen", answer.frozen[0] / 1e3, f"{unit}/K")
    per_kelvin = answer.equilibrium[0] / 1e3
    yield Figure("heat capacity of the outlet at equilibrium", per_kelvin, f"{unit}/K")
    yield Figure("heat capacity at equilibrium over frozen", answer.ratio[0], "")
    yield Figure("isentropic exponent, frozen", answer.frozen_exponent[0], "")
    yield Figure("isentropic exponent at equilibrium", answer.equilibrium_exponent[0], "")


def _of_solids_and_liquids(states: StageStates) -> Iterable[Figure]:
    """Shares of the whole by mass, each by itself and, where there are several, all together."""
    shares = condensed_mass_fractions(states.model.records, states.equilibria.amounts[0])
    present = np.flatnonzero(shares > 0.0).tolist()
    for i in sorted(present, key=lambda i: -shares[i]):
        yield Figure(f"{states.model.records[i].name} by mass", 100.0 * shares[i], "%")
    if len(present) > 1:
        yield Figure("solids and liquids by mass", 100.0 * float(shares.sum()), "%")


def _of_the_trade(
    states: StageStates, activities: Sequence[ElementActivity], library: Library
) -> Iterable[Figure]:
    inlet, found = states.inlet, states.equilibria
    T, P = float(found.temperature[0]), float(found.pressure[0])
    y = gas_fractions(states)
    fed = {r.name for r, amount in zip(inlet.records, inlet.amounts[0], strict=True) if amount > 0}
    if states.model.reacts and ("H2O(g)" in fed or "H2O(l)" in fed):
        ratio = float(steam_to_carbon(inlet.records, inlet.amounts[0]))
        if ratio < _MOST_STEAM:
            yield Figure("steam to carbon, fed", ratio, "mol/mol")
    H2, CO, CO2 = (y.get(name, 0.0) for name in ("H2(g)", "CO(g)", "CO2(g)"))
    if min(H2, CO) > _SYNTHESIS_GAS:
        yield Figure("H2/CO", float(quotient(H2, CO)), "mol/mol")
        yield Figure("(H2 − CO2)/(CO + CO2)", float(synthesis_module(H2, CO, CO2)), "mol/mol")
    if H2 > _TRACE and y.get("NH3(g)", 0.0) > _TRACE:
        potential = nitriding_potential(y["NH3(g)"] * P, H2 * P)
        yield Figure("nitriding potential", float(potential), "bar^-1/2")
        for activity in activities:
            if activity.record == "N2(g)":
                value = nitrogen_activity(activity.value * STANDARD_PRESSURE)
                yield Figure("nitrogen activity against N2 at 1 bar", float(value), "")
    if y.get("H2O(g)", 0.0) > _TRACE:
        dew_point = float(water_dew_point(y["H2O(g)"] * P, library))
        yield Figure("water dew point", dew_point - 273.15, "°C")
    acid = y.get("SO3(g)", 0.0) + y.get("H2SO4(g)", 0.0)
    dew_point = float(acid_dew_point(y.get("H2O(g)", 0.0), acid, P))
    yield Figure("acid dew point (Verhoff and Banchero)", dew_point - 273.15, "°C")
    for activity in activities:
        if activity.record == "O2(g)":
            voltage = zirconia_voltage(T, activity.value * STANDARD_PRESSURE, P)
            yield Figure("zirconia cell, air at the same pressure", float(voltage) * 1e3, "mV")


def _of_emissions(states: StageStates, reference_oxygen: float | None) -> Iterable[Figure]:
    """What limits of emission are stated of, in the dry gas at a reference content of oxygen."""
    if reference_oxygen is None:
        return
    y = gas_fractions(states)
    dry = 1.0 - y.get("H2O(g)", 0.0)
    for name in _EMISSIONS:
        if y.get(name, 0.0) > _LEAST_EMISSION:
            formula = name.removesuffix("(g)")
            fraction = at_reference_oxygen(
                y[name] / dry, y.get("O2(g)", 0.0) / dry, reference_oxygen
            )
            label = f"{formula} in the dry gas at {100 * reference_oxygen:g} % O2"
            yield Figure(label, 1e6 * float(fraction), "ppm")
