"""Density, heat capacities and isentropic exponents."""

from __future__ import annotations

import numpy as np
import pytest

from gibbsmin.arrays import FloatArray
from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.minimise import minimise
from gibbsmin.reactor.candidates import Selection
from gibbsmin.reactor.chemistry import Chemistry
from gibbsmin.reactor.derivatives import derivatives, energy_slopes
from gibbsmin.reactor.gas_figures import Response, gas_figures, response
from gibbsmin.reactor.mixture import Mixture
from gibbsmin.reactor.mixture_slopes import mixture_slopes
from gibbsmin.reactor.model import StageModel, stage_model
from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.properties import PropertyTable

REFORMING = ("CH4(g)", "H2O(g)", "CO(g)", "CO2(g)", "H2(g)", "C(graphite)")
FEED = np.array([[1.0, 0.9], [1.0, 3.0]])
T = np.array([1000.0, 900.0])
P = np.array([2e5, 2e6])


def make_model() -> StageModel:
    library = load_library()
    feed = [library["CH4(g)"], library["H2O(g)"]]
    return stage_model(Chemistry(Selection(consider=REFORMING)), feed, library)


def solved(model: StageModel, T: FloatArray, P: FloatArray) -> FloatArray:
    return minimise(model.programme(T, P, FEED)).amounts


def make_response(model: StageModel) -> Response:
    programme = model.programme(T, P, FEED)
    solution = minimise(programme)
    slopes = mixture_slopes(model.mixture, T, P, solution.amounts)
    changes = derivatives(
        programme,
        solution,
        energy_slopes(model, T, slopes.enthalpies),
        slopes.energies_by_pressure,
        model.balance.feed_matrix,
    )
    return response(slopes, T, changes)


def test_air_has_its_density_and_heat_capacity_ratio() -> None:
    """1.2250 kg/m³, 28.9644 g/mol, κ = 1.40 at 288.15 K and 1 atm.

    ISO 2533:1975, Standard Atmosphere, which takes air as an ideal gas (recalled from memory).
    Tolerances are half a unit of the last digit, and of the weights of traces left out here.
    """
    library = load_library()
    composition = {"N2(g)": 0.78084, "O2(g)": 0.209476, "Ar(g)": 0.00934, "CO2(g)": 0.000314}
    figures = gas_figures(
        Mixture.of(PropertyTable.of([library[name] for name in composition])),
        288.15,
        101325.0,
        np.array(list(composition.values())),
    )
    assert figures.density == pytest.approx(1.2250, abs=5e-5)
    assert figures.molar_mass == pytest.approx(28.9644e-3, abs=1e-6)
    assert figures.heat_capacity_ratio == pytest.approx(1.40, abs=5e-3)
    assert figures.volume == pytest.approx(0.99997 * 0.0236448, rel=1e-5)


def test_heat_capacity_at_equilibrium_is_the_slope_of_the_enthalpy() -> None:
    model = make_model()
    found, h = make_response(model), 0.05
    above, below = (model.mixture.enthalpy(T + d, P, solved(model, T + d, P)) for d in (h, -h))
    assert solved(model, T, P)[0, -1] > 0.0, "the first state is to hold carbon"
    assert found.equilibrium == pytest.approx((above - below) / (2 * h), rel=1e-6)
    assert (found.ratio > 1.0).all()


def test_exponent_is_that_of_a_reversible_compression() -> None:
    """Follow S = const by Newton steps in T and read −∂ ln P/∂ ln V from the two ends."""
    model = make_model()
    found = make_response(model)

    def entropy(T: FloatArray, P: FloatArray) -> FloatArray:
        return model.mixture.entropy(T, P, solved(model, T, P))

    S, step, volumes = entropy(T, P), 1e-3, []
    for sign in (1.0, -1.0):
        pressure, temperature = P * np.exp(sign * step), T.copy()
        for _ in range(6):
            missing = S - entropy(temperature, pressure)
            temperature = temperature * np.exp(missing / found.equilibrium)
        gas = solved(model, temperature, pressure)[:, model.gas].sum(axis=1)
        volumes.append(gas * GAS_CONSTANT * temperature / pressure)
    expected = -2 * step / np.log(volumes[0] / volumes[1])
    assert found.equilibrium_exponent == pytest.approx(expected, rel=1e-5)


def test_without_reaction_frozen_and_equilibrium_figures_are_the_same() -> None:
    library = load_library()
    argon = [library["Ar(g)"]]
    model = stage_model(Chemistry(), argon, library)
    T, P, feed = np.array([500.0]), np.array([1e5]), np.array([[2.0]])
    programme = model.programme(T, P, feed)
    solution = minimise(programme)
    slopes = mixture_slopes(model.mixture, T, P, solution.amounts)
    changes = derivatives(
        programme,
        solution,
        energy_slopes(model, T, slopes.enthalpies),
        slopes.energies_by_pressure,
        np.ones((1, 1)),
    )
    found = response(slopes, T, changes)
    assert found.equilibrium == pytest.approx(found.frozen, rel=1e-12)
    assert found.equilibrium_exponent == pytest.approx(found.frozen_exponent, rel=1e-12)
    assert found.frozen_exponent == pytest.approx(5 / 3, rel=1e-4)
    assert found.expansion == pytest.approx(1.0, rel=1e-15)
    assert found.compression == pytest.approx(-1.0, rel=1e-15)


def test_no_gas_has_no_figures() -> None:
    library = load_library()
    table = PropertyTable.of([library["H2O(g)"], library["H2O(l)"]])
    figures = gas_figures(Mixture.of(table), 300.0, 1e5, np.array([0.0, 1.0]))
    assert np.isnan(figures.molar_mass)
    assert np.isnan(figures.density)
    assert figures.volume == 0.0
