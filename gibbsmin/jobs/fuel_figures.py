"""Figures of fuel and energy: air ratio, heating values, cold-gas efficiency, exergy."""

from __future__ import annotations

from collections.abc import Iterable

import numpy as np

from gibbsmin.jobs.train import Step
from gibbsmin.reactor.exergy import Exergy, Surroundings, stream_exergy, szargut_surroundings
from gibbsmin.reactor.heating import cold_gas_efficiency, heating_value, without_ash
from gibbsmin.reactor.stage import StageStates
from gibbsmin.reactor.streams import Stream, first
from gibbsmin.reactor.trade_figures import air_ratio
from gibbsmin.results import Figure
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.real_gas import Equation
from gibbsmin.thermo.species import FEED_ONLY

_LEAST_AIR, _MOST_AIR = 0.01, 100.0
"""Air ratios between which a fuel is burnt; outside of them one of the two is a trace."""

_LEAN = 0.05
"""Hydrogen and carbon monoxide both from this fraction are what a gasifier is run for."""

_COMBUSTIBLE = 0.5e6
"""J/Nm³ from which a gas is worth a heating value."""


def fuel_figures(states: StageStates, unit: str, library: Library) -> Iterable[Figure]:
    """Air ratio, heating values of the gas, and what of the fuel's is found in it."""
    inlet, model = states.inlet, states.model
    fed = without_ash(inlet.records, inlet.amounts[0])
    ratio = float(air_ratio(inlet.records, fed))
    if model.reacts and _LEAST_AIR < ratio < _MOST_AIR:
        yield Figure("air ratio, fed", ratio, "")
    gas = np.where(model.gas, states.equilibria.amounts[0], 0.0)
    made = heating_value(model.records, without_ash(model.records, gas), library)
    if not (made.normal_volume > 0.0 and made.lower > _COMBUSTIBLE * made.normal_volume):
        return
    for name, value in (("lower", made.lower), ("higher", made.higher)):
        per_volume = value / made.normal_volume / 1e6
        yield Figure(f"{name} heating value of the gas", per_volume, "MJ/Nm3")
    y = gas_fractions(states)
    burnt_in_part = _LEAST_AIR < ratio < 1.0
    burnt_in_part |= any(record.status == FEED_ONLY for record in inlet.records)
    if model.reacts and burnt_in_part and min(y.get("H2(g)", 0.0), y.get("CO(g)", 0.0)) > _LEAN:
        fuel = heating_value(inlet.records, fed, library)
        yield Figure("lower heating value fed", fuel.lower / 1e3, unit)
        yield Figure("cold-gas efficiency", 100.0 * cold_gas_efficiency(made, fuel), "%")


def exergy_figures(
    step: Step, surroundings_temperature: float, unit: str, library: Library
) -> Iterable[Figure]:
    """Exergy of what enters and of what leaves, together with the surroundings."""
    model, found = step.states.model, step.states.equilibria
    surroundings = szargut_surroundings(surroundings_temperature)
    against = f"against {surroundings_temperature:g} K and 1 atm"
    T, P = float(found.temperature[0]), float(found.pressure[0])
    equation = step.stage.chemistry.equation
    leaving = stream_exergy(model.records, found.amounts[0], T, P, surroundings, library, equation)
    entering = [_stream_exergy(s, surroundings, library, equation) for s in step.streams]
    yield Figure(f"physical exergy {against}", leaving.physical / 1e3, unit)
    yield Figure(f"chemical exergy {against}", leaving.chemical / 1e3, unit)
    fed = sum(exergy.total for exergy in entering)
    yield Figure(f"exergy fed {against}", fed / 1e3, unit)


def _stream_exergy(
    stream: Stream, surroundings: Surroundings, library: Library, equation: Equation | None
) -> Exergy:
    amounts = np.array([first(amount) for amount in stream.amounts.values()])
    return stream_exergy(
        [library[name] for name in stream.amounts],
        amounts,
        first(stream.temperature),
        first(stream.pressure),
        surroundings,
        library,
        equation,
    )


def gas_fractions(states: StageStates) -> dict[str, float]:
    """Mole fractions of the first state's gas by record name."""
    model, amounts = states.model, states.equilibria.amounts[0]
    total = float(amounts[model.gas].sum())
    return {
        record.name: amount / total
        for record, amount, in_gas in zip(
            model.records, amounts.tolist(), model.gas.tolist(), strict=True
        )
        if in_gas and total > 0.0
    }
