"""Figures that follow from a stage's state: of its gas, and of how it answers to heat."""

from __future__ import annotations

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray
from gibbsmin.reactor.derivatives import derivatives, energy_slopes
from gibbsmin.reactor.gas_figures import gas_figures, response
from gibbsmin.reactor.stage import StageStates
from gibbsmin.results import Figure


def figures_of(states: StageStates) -> tuple[Figure, ...]:
    """Molar mass, density, heat capacities and isentropic exponents of the first state.

    Figures that do not apply, such as those of a gas where there is none, are left away.
    """
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
    figures = (
        Figure("molar mass of the gas", gas.molar_mass[0] * 1e3, "g/mol"),
        Figure("density of the gas", gas.density[0], "kg/m3"),
        Figure("heat capacity of the gas, frozen", gas.heat_capacity[0], "J/(mol K)"),
        Figure("heat capacity at equilibrium over frozen", answer.ratio[0], ""),
        Figure("isentropic exponent, frozen", answer.frozen_exponent[0], ""),
        Figure("isentropic exponent at equilibrium", answer.equilibrium_exponent[0], ""),
        Figure("solids and liquids by mass", _share(mass, ~model.gas), ""),
    )
    return tuple(
        Figure(figure.name, float(figure.value), figure.unit)
        for figure in figures
        if np.isfinite(figure.value)
    )


def _share(mass: FloatArray, condensed: BoolArray) -> float:
    """Mass of solids and liquids over the whole; NaN where there are none."""
    part = float(mass[condensed].sum())
    return part / float(mass.sum()) if part > 0.0 else float("nan")
