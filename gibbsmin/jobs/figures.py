"""Figures that follow from a stage's state: of its gas, its answer to heat, and the trade's own."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray
from gibbsmin.constants import STANDARD_PRESSURE
from gibbsmin.reactor.audit import ElementActivity
from gibbsmin.reactor.derivatives import derivatives, energy_slopes
from gibbsmin.reactor.dew_points import acid_dew_point, water_dew_point
from gibbsmin.reactor.exergy import stream_exergy, szargut_surroundings
from gibbsmin.reactor.gas_figures import gas_figures, response
from gibbsmin.reactor.heating import heating_value
from gibbsmin.reactor.stage import StageStates
from gibbsmin.reactor.trade_figures import (
    air_ratio,
    nitriding_potential,
    quotient,
    steam_to_carbon,
    synthesis_module,
    zirconia_voltage,
)
from gibbsmin.results import Figure
from gibbsmin.thermo.library import Library

_TRACE = 1e-6
"""Mole fractions below this are not set against each other."""

_SYNTHESIS_GAS = 0.01
"""Hydrogen and carbon monoxide both from this fraction make a synthesis gas."""

_COMBUSTIBLE = 0.5e6
"""J/Nm³ from which a gas is worth a heating value."""


def figures_of(
    states: StageStates,
    activities: Sequence[ElementActivity],
    surroundings_temperature: float,
    is_flow: bool,
    library: Library,
) -> tuple[Figure, ...]:
    """The figures of the first state; those that do not apply are left away."""
    figures = (
        *_of_the_gas(states),
        *_of_the_trade(states, activities, library),
        *_of_energy(states, surroundings_temperature, "kW" if is_flow else "kJ", library),
    )
    return tuple(
        Figure(figure.name, float(figure.value), figure.unit)
        for figure in figures
        if np.isfinite(figure.value)
    )


def _of_the_gas(states: StageStates) -> Iterable[Figure]:
    model, found = states.model, states.equilibria
    T, P, n = found.temperature, found.pressure, found.amounts
    gas = gas_figures(model.properties, model.gas, T, P, n)
    changes = derivatives(
        model.programme(T, P, states.inlet.amounts),
        found.solution,
        energy_slopes(model, T),
        np.zeros((len(model.balance.rows), 0)),
    )
    answer = response(model.properties, model.gas, T, n, changes)
    mass = n[0] * np.array([record.molar_mass for record in model.records])
    yield Figure("molar mass of the gas", gas.molar_mass[0] * 1e3, "g/mol")
    yield Figure("density of the gas", gas.density[0], "kg/m3")
    yield Figure("heat capacity of the gas, frozen", gas.heat_capacity[0], "J/(mol K)")
    yield Figure("heat capacity at equilibrium over frozen", answer.ratio[0], "")
    yield Figure("isentropic exponent, frozen", answer.frozen_exponent[0], "")
    yield Figure("isentropic exponent at equilibrium", answer.equilibrium_exponent[0], "")
    yield Figure("solids and liquids by mass", _share(mass, ~model.gas), "")


def _of_the_trade(
    states: StageStates, activities: Sequence[ElementActivity], library: Library
) -> Iterable[Figure]:
    inlet, found = states.inlet, states.equilibria
    T, P = float(found.temperature[0]), float(found.pressure[0])
    y = _gas_fractions(states)
    fed = {r.name for r, amount in zip(inlet.records, inlet.amounts[0], strict=True) if amount > 0}
    if "H2O(g)" in fed or "H2O(l)" in fed:
        ratio = steam_to_carbon(inlet.records, inlet.amounts[0])
        yield Figure("steam to carbon, fed", float(ratio), "mol/mol")
    if "O2(g)" in fed:
        yield Figure("air ratio, fed", float(air_ratio(inlet.records, inlet.amounts[0])), "")
    H2, CO, CO2 = (y.get(name, 0.0) for name in ("H2(g)", "CO(g)", "CO2(g)"))
    if min(H2, CO) > _SYNTHESIS_GAS:
        yield Figure("H2/CO", float(quotient(H2, CO)), "mol/mol")
        yield Figure("(H2 − CO2)/(CO + CO2)", float(synthesis_module(H2, CO, CO2)), "mol/mol")
    if H2 > _TRACE and y.get("NH3(g)", 0.0) > _TRACE:
        potential = nitriding_potential(y["NH3(g)"] * P, H2 * P)
        yield Figure("nitriding potential", float(potential), "bar^-1/2")
    if y.get("H2O(g)", 0.0) > _TRACE:
        dew_point = float(water_dew_point(y["H2O(g)"] * P, library))
        yield Figure("water dew point", dew_point - 273.15, "°C")
    acid = y.get("SO3(g)", 0.0) + y.get("H2SO4(g)", 0.0)
    dew_point = float(acid_dew_point(y.get("H2O(g)", 0.0), acid, P))
    yield Figure("acid dew point (Verhoff and Banchero)", dew_point - 273.15, "°C")
    for activity in activities:
        if activity.label == "p(O2)":
            voltage = zirconia_voltage(T, activity.value * STANDARD_PRESSURE, P)
            yield Figure("zirconia cell, air at the same pressure", float(voltage) * 1e3, "mV")


def _of_energy(
    states: StageStates, surroundings_temperature: float, unit: str, library: Library
) -> Iterable[Figure]:
    model, found = states.model, states.equilibria
    T, P = float(found.temperature[0]), float(found.pressure[0])
    gas = np.where(model.gas, found.amounts[0], 0.0)
    heating = heating_value(model.records, gas, library)
    if heating.normal_volume > 0.0 and heating.lower > _COMBUSTIBLE * heating.normal_volume:
        per_volume = heating.lower / heating.normal_volume / 1e6
        yield Figure("lower heating value of the gas", per_volume, "MJ/Nm3")
    surroundings = szargut_surroundings(surroundings_temperature)
    exergy = stream_exergy(model.records, found.amounts[0], T, P, surroundings, library)
    against = f"against {surroundings_temperature:g} K and 1 atm"
    yield Figure(f"physical exergy {against}", exergy.physical / 1e3, unit)
    yield Figure(f"chemical exergy {against}", exergy.chemical / 1e3, unit)


def _gas_fractions(states: StageStates) -> dict[str, float]:
    model, amounts = states.model, states.equilibria.amounts[0]
    total = float(amounts[model.gas].sum())
    return {
        record.name: amount / total
        for record, amount, in_gas in zip(
            model.records, amounts.tolist(), model.gas.tolist(), strict=True
        )
        if in_gas and total > 0.0
    }


def _share(mass: FloatArray, condensed: BoolArray) -> float:
    """Mass of solids and liquids over the whole; NaN where there are none."""
    part = float(mass[condensed].sum())
    return part / float(mass.sum()) if part > 0.0 else float("nan")
