"""The trade's figures: definitions by hand, and values that are known in the trade."""

from __future__ import annotations

import numpy as np
import pytest

from gibbsmin.reactor.trade_figures import (
    air_ratio,
    at_reference_oxygen,
    condensed_mass_fractions,
    nitriding_potential,
    nitrogen_activity,
    oxygen_demand,
    quotient,
    steam_to_carbon,
    synthesis_module,
    zirconia_voltage,
)
from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.species import Species


def records_of(names: str) -> list[Species]:
    library = load_library()
    return [library.resolve(name) for name in names.split()]


def test_steam_to_carbon_counts_all_water_and_the_carbon_of_fuels() -> None:
    records = records_of("CH4 C2H6 CO CO2 H2O(g) H2O(l) N2")
    feed = np.array([[0.8, 0.1, 0.5, 0.5, 2.0, 1.0, 3.0], [0.0, 0.0, 1.0, 1.0, 1.0, 0.0, 0.0]])
    found = steam_to_carbon(records, feed)
    assert found[0] == pytest.approx(3.0)
    assert np.isnan(found[1]), "a feed without fuel has no steam-to-carbon ratio"


def test_oxygen_demand_is_that_of_complete_combustion() -> None:
    records = records_of("CH4 CO H2 H2S NH3 CH3Cl CH3OH(l) O2 CO2 H2O(g) N2 Ar SO2 HCl N2O")
    expected = [2.0, 0.5, 0.5, 1.5, 0.75, 1.5, 1.5, -1.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, -0.5]
    assert oxygen_demand(records) == pytest.approx(expected)


def test_air_ratio_of_a_flame() -> None:
    records = records_of("CH4 O2 N2 Fe(alpha)")
    feed = np.array([[1.0, 2.4, 9.0, 0.0], [1.0, 2.0, 7.5, 0.1], [0.0, 1.0, 4.0, 0.0]])
    found = air_ratio(records, feed)
    assert found[0] == pytest.approx(1.2)
    assert np.isnan(found[1]), "iron has no agreed product of combustion"
    assert np.isnan(found[2]), "air alone has no air ratio"


def test_chlorine_takes_hydrogen_and_brings_no_oxygen() -> None:
    records = records_of("H2 Cl2 O2")
    feed = np.array([[1.2, 1.0, 0.05], [1.0, 1.0, 0.01]])
    found = air_ratio(records, feed)
    assert found[0] == pytest.approx(0.5), "0.2 mol of hydrogen are left to burn"
    assert np.isnan(found[1]), "none is left"


def test_ratios_of_synthesis_gas() -> None:
    assert quotient(3.0, 1.5) == pytest.approx(2.0)
    assert np.isnan(quotient(1.0, 0.0))
    assert synthesis_module(0.70, 0.20, 0.10) == pytest.approx(2.0)
    assert np.isnan(synthesis_module(1.0, 0.0, 0.0))


def test_zirconia_cell() -> None:
    """2.154e-5 V/K times T per factor e: 49.6 mV a decade at 1000 K, 0 in air."""
    assert zirconia_voltage(1000.0, 0.2095e5, 1e5) == pytest.approx(0.0, abs=1e-15)
    decade = zirconia_voltage(1000.0, 0.02095e5, 1e5)
    assert decade == pytest.approx(0.0496, abs=5e-5)  # R T ln 10/(4 F), common practice
    assert zirconia_voltage(1000.0, 0.2095e5, 2e5) == pytest.approx(np.log10(2) * decade)
    assert np.isnan(zirconia_voltage(1000.0, 0.0, 1e5))


def test_nitrogen_figures() -> None:
    assert nitriding_potential(0.4e5, 0.25e5) == pytest.approx(3.2)
    assert nitrogen_activity(4e5) == pytest.approx(2.0)


def test_fraction_at_reference_oxygen() -> None:
    """100 ppm at 10 % O2 dry is 163.9 ppm at 3 %."""
    assert at_reference_oxygen(100e-6, 0.10, 0.03) == pytest.approx(100e-6 * 0.1795 / 0.1095)
    assert at_reference_oxygen(100e-6, 0.03, 0.03) == pytest.approx(100e-6)
    assert np.isnan(at_reference_oxygen(1e-6, 0.2095, 0.03))


def test_condensed_fractions_by_mass() -> None:
    records = records_of("CO2 CaO(cr) C(graphite)")
    found = condensed_mass_fractions(records, np.array([[1.0, 2.0, 0.0], [0.0, 0.0, 0.0]]))
    mass = 44.009 + 2 * 56.077
    assert found[0] == pytest.approx([0.0, 2 * 56.077 / mass, 0.0], rel=1e-4)
    assert np.isnan(found[1]).all()
