"""Unknown temperatures and pressures: round trips in batches."""

from __future__ import annotations

import numpy as np
import pytest

from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.reactor.candidates import Selection
from gibbsmin.reactor.chemistry import Chemistry
from gibbsmin.reactor.conditions import (
    at_energy_and_volume,
    at_enthalpy,
    at_entropy,
    at_temperature,
    at_volume,
)
from gibbsmin.reactor.model import stage_model
from gibbsmin.thermo.library import load_library

LIBRARY = load_library()
FEED = [LIBRARY["CH4(g)"], LIBRARY["H2O(g)"]]
CONSIDERED = ("CH4(g)", "H2O(g)", "CO(g)", "CO2(g)", "H2(g)", "C(graphite)")
MODEL = stage_model(Chemistry(Selection(consider=CONSIDERED)), FEED, LIBRARY)

T = np.array([700.0, 900.0, 1100.0, 1300.0])
P = np.array([1e5, 5e5, 20e5, 1e5])
AMOUNTS = np.array([[1.0, 3.0], [1.0, 0.6], [2.0, 5.0], [1.0, 0.1]])  # some deposit carbon
START = np.full(4, 500.0)
KNOWN = at_temperature(MODEL, T, P, AMOUNTS)


def test_the_batch_is_certified_and_has_carbon_in_some_states() -> None:
    assert KNOWN.solution.certified.all()
    carbon = KNOWN.amounts[:, -1]
    assert (carbon > 0.0).any()
    assert (carbon == 0.0).any()


def test_temperature_from_enthalpy() -> None:
    enthalpy = MODEL.mixture.enthalpy(T, P, KNOWN.amounts)
    found = at_enthalpy(MODEL, enthalpy, P, AMOUNTS, START)
    np.testing.assert_allclose(found.temperature, T, rtol=1e-11)
    np.testing.assert_allclose(found.amounts, KNOWN.amounts, rtol=1e-8, atol=1e-12)


def test_temperature_from_entropy() -> None:
    entropy = MODEL.mixture.entropy(T, P, KNOWN.amounts)
    found = at_entropy(MODEL, entropy, P, AMOUNTS, START)
    np.testing.assert_allclose(found.temperature, T, rtol=1e-11)


def test_pressure_from_volume_and_both_from_energy() -> None:
    gas = KNOWN.amounts[:, MODEL.gas].sum(axis=1)
    volume = gas * GAS_CONSTANT * T / P
    found = at_volume(MODEL, T, volume, AMOUNTS)
    np.testing.assert_allclose(found.pressure, P, rtol=1e-10)
    energy = MODEL.mixture.internal_energy(T, P, KNOWN.amounts)
    closed = at_energy_and_volume(MODEL, energy, volume, AMOUNTS, START)
    np.testing.assert_allclose(closed.temperature, T, rtol=1e-9)
    np.testing.assert_allclose(closed.pressure, P, rtol=1e-8)


def test_no_temperature_is_no_number_and_leaves_the_others() -> None:
    enthalpy = MODEL.mixture.enthalpy(T, P, KNOWN.amounts)
    enthalpy[1] = -1e9
    found = at_enthalpy(MODEL, enthalpy, P, AMOUNTS, START)
    assert np.isnan(found.temperature).tolist() == [False, True, False, False]
    assert np.isnan(found.amounts[1]).all()
    np.testing.assert_allclose(np.delete(found.temperature, 1), np.delete(T, 1), rtol=1e-11)


def test_melting_takes_up_heat_at_one_temperature() -> None:
    alumina = [LIBRARY["Al2O3(alpha)"]]
    model = stage_model(
        Chemistry(Selection(consider=("Al2O3(alpha)", "Al2O3(l)"))), alumina, LIBRARY
    )
    solid = model.mixture.enthalpy(2300.0, 1e5, np.array([1.0, 0.0]))
    extra = np.array([2e3, 30e3, 60e3, 90e3, 200e3])
    ones = np.ones((5, 1))
    found = at_enthalpy(model, solid + extra, 1e5 * ones[:, 0], ones, np.full(5, 2000.0))
    plateau = ~np.isnan(found.upper_share)
    assert plateau.tolist() == [False, True, True, True, False]
    # 111 kJ/mol at 2327 K: NIST-JANAF Thermochemical Tables, 4th ed., 1998
    np.testing.assert_allclose(found.temperature[plateau], 2327.0, atol=0.5)
    reached = model.mixture.enthalpy(found.temperature, found.pressure, found.amounts)
    np.testing.assert_allclose(reached[plateau], (solid + extra)[plateau], rtol=1e-12)
    assert np.diff(found.upper_share[plateau]) == pytest.approx(30e3 / 111e3, rel=0.01)
