"""Equilibria of real gases: stationarity, limits, unknown temperatures and derivatives."""

from __future__ import annotations

from functools import cache

import numpy as np
import pytest

from gibbsmin.arrays import FloatArray
from gibbsmin.minimise import Status
from gibbsmin.reactor.candidates import Selection
from gibbsmin.reactor.chemistry import Chemistry
from gibbsmin.reactor.conditions import (
    at_energy_and_volume,
    at_enthalpy,
    at_entropy,
    at_temperature,
    at_volume,
)
from gibbsmin.reactor.derivatives import Derivatives, derivatives, energy_slopes
from gibbsmin.reactor.gas_figures import response
from gibbsmin.reactor.mixture_slopes import mixture_slopes
from gibbsmin.reactor.model import StageModel, stage_model
from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.real_gas import Equation

STATES = 12
CASES = {
    "ammonia": ("N2 H2 NH3 Ar CH4", (600.0, 800.0), (50e5, 400e5)),
    "methanol": ("CO CO2 H2 CH3OH H2O CH4 N2", (500.0, 600.0), (20e5, 100e5)),
    "reforming": ("CH4 H2O CO CO2 H2 C2H6 C(graphite)", (800.0, 1200.0), (5e5, 60e5)),
    "combustion": ("CH4 O2 N2 CO CO2 H2 H2O OH NO H O", (1500.0, 3000.0), (1e5, 200e5)),
}


@cache
def model_of(case: str, equation: Equation | None = Equation.SOAVE_REDLICH_KWONG) -> StageModel:
    library = load_library()
    records = [library.resolve(name) for name in CASES[case][0].split()]
    consider = tuple(record.name for record in records)
    return stage_model(Chemistry(Selection(consider), equation=equation), records[:4], library)


def states_of(case: str, count: int = STATES) -> tuple[FloatArray, FloatArray, FloatArray]:
    random = np.random.default_rng(11)
    _, temperatures, pressures = CASES[case]
    return (
        random.uniform(*temperatures, count),
        random.uniform(*pressures, count),
        random.uniform(0.2, 2.0, (count, 4)),
    )


@pytest.mark.parametrize("equation", Equation)
@pytest.mark.parametrize("case", CASES)
def test_the_whole_problem_is_stationary(case: str, equation: Equation) -> None:
    """μ = g̃ + ln y + ln φ(T, P, y) is a·λ for every gas, with φ of the composition found."""
    model = model_of(case, equation)
    T, P, feed = states_of(case)
    found = at_temperature(model, T, P, feed)
    assert found.solution.certified.all()
    assert found.fugacity is not None
    assert (found.fugacity.error <= 5e-11).all()
    assert (found.solution.certificate.stationarity >= found.fugacity.error).all()
    n = found.amounts
    np.testing.assert_allclose(
        n @ model.balance.matrix.T, model.balance.supplies(feed), rtol=1e-11, atol=1e-12
    )
    gas = model.gas
    y = n[:, gas] / n[:, gas].sum(axis=1, keepdims=True)
    logs = model.mixture.log_fugacity(T, P, n)[:, gas]
    assert np.abs(logs).max() > 1e-3
    potentials = model.energies(T, P)[:, gas] + np.log(y) + logs
    expected = found.solution.multipliers @ model.balance.matrix[:, gas]
    np.testing.assert_allclose(potentials, expected, atol=2e-10)


@pytest.mark.parametrize("equation", Equation)
@pytest.mark.parametrize("case", CASES)
def test_at_low_pressure_the_gas_is_ideal(case: str, equation: Equation) -> None:
    T, _, feed = states_of(case)
    P = np.full(STATES, 100.0)
    real = at_temperature(model_of(case, equation), T, P, feed)
    ideal = at_temperature(model_of(case, None), T, P, feed)
    totals = ideal.amounts.sum(axis=1, keepdims=True)
    np.testing.assert_allclose(real.amounts / totals, ideal.amounts / totals, atol=1e-6)
    assert ideal.fugacity is None


def test_a_batch_is_each_state_alone() -> None:
    model = model_of("ammonia")
    T, P, feed = states_of("ammonia", 5)
    together = at_temperature(model, T, P, feed)
    for i in range(5):
        alone = at_temperature(model, T[i : i + 1], P[i : i + 1], feed[i : i + 1])
        np.testing.assert_allclose(alone.amounts[0], together.amounts[i], rtol=1e-9)


def test_a_start_near_by_gives_the_same_answer() -> None:
    model = model_of("ammonia")
    T, P, feed = states_of("ammonia")
    first = at_temperature(model, T, P, feed)
    assert first.fugacity is not None
    again = at_temperature(model, T, P, feed, first.fugacity.logarithms * 1.1)
    np.testing.assert_allclose(again.amounts, first.amounts, rtol=1e-9)


@pytest.mark.parametrize("case", CASES)
def test_temperature_from_enthalpy_and_entropy(case: str) -> None:
    model = model_of(case)
    T, P, feed = states_of(case, 5)
    known = at_temperature(model, T, P, feed)
    start = np.full(5, T.mean() - 100.0)
    enthalpy = model.mixture.enthalpy(T, P, known.amounts)
    by_enthalpy = at_enthalpy(model, enthalpy, P, feed, start)
    np.testing.assert_allclose(by_enthalpy.temperature, T, rtol=1e-9)
    np.testing.assert_allclose(by_enthalpy.amounts, known.amounts, rtol=1e-6, atol=1e-10)
    assert by_enthalpy.fugacity is not None
    assert known.fugacity is not None
    np.testing.assert_allclose(
        by_enthalpy.fugacity.logarithms, known.fugacity.logarithms, atol=1e-7
    )
    entropy = model.mixture.entropy(T, P, known.amounts)
    by_entropy = at_entropy(model, entropy, P, feed, start)
    np.testing.assert_allclose(by_entropy.temperature, T, rtol=1e-9)


def test_pressure_from_volume_and_both_from_energy() -> None:
    model = model_of("ammonia")
    T, P, feed = states_of("ammonia", 3)
    known = at_temperature(model, T, P, feed)
    volume = model.mixture.gas_volume(T, P, known.amounts)
    Z = volume * P / (known.amounts.sum(axis=1) * 8.31446261815324 * T)
    assert (np.abs(Z - 1.0) > 0.01).all()
    np.testing.assert_allclose(at_volume(model, T, volume, feed).pressure, P, rtol=1e-8)
    energy = model.mixture.internal_energy(T, P, known.amounts)
    closed = at_energy_and_volume(model, energy, volume, feed, T - 50.0)
    np.testing.assert_allclose(closed.temperature, T, rtol=1e-8)
    np.testing.assert_allclose(closed.pressure, P, rtol=1e-7)


def test_a_state_that_cannot_be_solved_leaves_the_others() -> None:
    model = model_of("ammonia")
    T, P, feed = states_of("ammonia", 3)
    T[1] = np.nan
    found = at_temperature(model, T, P, feed)
    assert found.solution.status.tolist() == [0, Status.INVALID, 0]
    assert np.isnan(found.amounts[1]).all()


def make_derivatives(
    model: StageModel, T: FloatArray, P: FloatArray, feed: FloatArray
) -> Derivatives:
    found = at_temperature(model, T, P, feed)
    slopes = mixture_slopes(model.mixture, T, P, found.amounts)
    return derivatives(
        model.programme(T, P, feed),
        found.solution,
        energy_slopes(model, T, slopes.enthalpies),
        slopes.energies_by_pressure,
        model.balance.feed_matrix,
        slopes.fugacities_by_amounts,
    )


@pytest.mark.parametrize("case", CASES)
def test_derivatives_follow_the_fugacities(case: str) -> None:
    model = model_of(case)
    T, P, feed = states_of(case, 4)
    found = make_derivatives(model, T, P, feed)
    assert found.regular.all()
    step = 1e-4

    def amounts(ln_T: float = 0.0, ln_P: float = 0.0, more: FloatArray | float = 0.0) -> FloatArray:
        return at_temperature(model, T * np.exp(ln_T), P * np.exp(ln_P), feed + more).amounts

    size = amounts().sum(axis=1, keepdims=True)

    def check(analytic: FloatArray, above: FloatArray, below: FloatArray) -> None:
        np.testing.assert_allclose(analytic / size, (above - below) / (2 * step) / size, atol=2e-6)

    check(found.log_temperature, amounts(ln_T=step), amounts(ln_T=-step))
    check(found.log_pressure, amounts(ln_P=step), amounts(ln_P=-step))
    for column in range(4):
        one = step * np.eye(4)[column]
        check(found.directions[..., column], amounts(more=one), amounts(more=-one))


@pytest.mark.parametrize("case", CASES)
def test_heat_capacity_and_exponent_are_slopes_of_real_states(case: str) -> None:
    model = model_of(case)
    T, P, feed = states_of(case, 4)
    known = at_temperature(model, T, P, feed)
    slopes = mixture_slopes(model.mixture, T, P, known.amounts)
    found = response(slopes, T, make_derivatives(model, T, P, feed))

    def enthalpy(T: FloatArray) -> FloatArray:
        return model.mixture.enthalpy(T, P, at_temperature(model, T, P, feed).amounts)

    h = 0.02
    np.testing.assert_allclose(
        found.equilibrium, (enthalpy(T + h) - enthalpy(T - h)) / (2 * h), rtol=2e-6
    )
    entropy = model.mixture.entropy(T, P, known.amounts)
    volumes = []
    for sign in (1.0, -1.0):
        pressure = P * np.exp(sign * 1e-3)
        there = at_entropy(model, entropy, pressure, feed, T)
        volumes.append(model.mixture.gas_volume(there.temperature, pressure, there.amounts))
    expected = -2e-3 / np.log(volumes[0] / volumes[1])
    np.testing.assert_allclose(found.equilibrium_exponent, expected, rtol=1e-5)


def test_entropy_and_enthalpy_agree_with_the_gibbs_energy() -> None:
    """At equilibrium dG = −S dT + V dP at constant feed, V with its solids and liquids."""
    model = model_of("reforming")
    T, P, feed = states_of("reforming", 4)

    def gibbs(T: FloatArray, P: FloatArray) -> FloatArray:
        n = at_temperature(model, T, P, feed).amounts
        return model.mixture.enthalpy(T, P, n) - T * model.mixture.entropy(T, P, n)

    n = at_temperature(model, T, P, feed).amounts
    h = 0.05
    S = -(gibbs(T + h, P) - gibbs(T - h, P)) / (2 * h)
    np.testing.assert_allclose(S, model.mixture.entropy(T, P, n), rtol=1e-7)
    dP = 1e-3 * P
    V = (gibbs(T, P + dP) - gibbs(T, P - dP)) / (2 * dP)
    whole = model.mixture.gas_volume(T, P, n) + n @ model.mixture.volumes
    np.testing.assert_allclose(V, whole, rtol=1e-5)
