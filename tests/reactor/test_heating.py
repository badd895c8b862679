"""Heating values and the cold-gas efficiency."""

from __future__ import annotations

import numpy as np
import pytest

from gibbsmin.reactor.heating import (
    HeatingValue,
    cold_gas_efficiency,
    heating_value,
    without_ash,
)
from gibbsmin.thermo.library import load_library

# Higher and lower molar heating values at 25 °C, kJ/mol: ISO 6976:2016 (real-gas corrections do
# not touch molar values), recalled from memory.  The tolerance is the standard's own expanded
# uncertainty of methane's value, 0.4 kJ/mol, for all but the larger molecules, 1 kJ/mol.
ISO_6976 = [
    ("CH4(g)", 890.58, 802.56, 0.4),
    ("H2(g)", 285.83, 241.81, 0.1),
    ("CO(g)", 282.95, 282.95, 0.1),
    ("C2H6(g)", 1560.69, 1428.66, 1.0),
    ("C3H8(g)", 2219.17, 2043.11, 1.0),
]


def value_of(**amounts: float) -> HeatingValue:
    """Heating value of a mixture, records given as ``CH4_g``."""
    library = load_library()
    records = [library[f"{name.replace('_', '(')})"] for name in amounts]
    return heating_value(records, np.array(list(amounts.values())), library)


@pytest.mark.parametrize(("name", "higher", "lower", "tolerance"), ISO_6976)
def test_heating_values_of_gases(name: str, higher: float, lower: float, tolerance: float) -> None:
    library = load_library()
    found = heating_value([library[name]], np.array([1.0]), library)
    assert found.higher / 1e3 == pytest.approx(higher, abs=tolerance)
    assert found.lower / 1e3 == pytest.approx(lower, abs=tolerance)
    assert found.normal_volume == pytest.approx(0.0224140, rel=1e-5)


def test_octane_by_mass() -> None:
    """47 900 and 44 430 kJ/kg.

    M. J. Moran, H. N. Shapiro, Fundamentals of Engineering Thermodynamics, table A-25 (recalled
    from memory); tolerance 0.1 %, the spread of the enthalpies of formation in use.
    """
    library = load_library()
    found = heating_value([library["n-C8H18(l)"]], np.array([10.0]), library)
    assert found.higher / found.mass == pytest.approx(47.90e6, rel=1e-3)
    assert found.lower / found.mass == pytest.approx(44.43e6, rel=1e-3)
    assert found.normal_volume == 0.0


def test_a_mixture_is_the_sum_and_burnt_gas_has_none() -> None:
    mixed = value_of(CH4_g=2.0, CO_g=1.0, CO2_g=3.0, N2_g=4.0, O2_g=1.0, SO2_g=0.5, HCl_g=0.1)
    parts = 2 * value_of(CH4_g=1.0).lower + value_of(CO_g=1.0).lower
    assert mixed.lower == pytest.approx(parts, rel=1e-12)
    assert value_of(CO2_g=1.0, N2_g=5.0, Ar_g=1.0).higher == 0.0


def test_water_counts_in_its_own_state() -> None:
    latent = value_of(H2O_g=1.0)
    assert latent.lower == pytest.approx(0.0, abs=1e-9)
    assert latent.higher == pytest.approx(44.0e3, rel=1e-3)  # 44.0 kJ/mol at 25 °C
    assert value_of(H2O_l=1.0).lower == pytest.approx(-latent.higher)


def test_what_has_no_heating_value_says_why() -> None:
    iron = value_of(CH4_g=1.0, Fe_alpha=0.1)
    assert np.isnan(iron.lower)
    assert iron.remark == ("Fe(alpha) holds Fe, for which no product of combustion is agreed on")
    assert value_of(CH4_g=1.0, Fe_alpha=0.0).remark == ""
    chlorine = value_of(CH4_g=0.1, Cl2_g=1.0)
    assert chlorine.remark == "there is not enough hydrogen to burn all chlorine to HCl"
    assert value_of(CH4_g=float("nan")).remark == "the amounts are not known"


def test_cold_gas_efficiency() -> None:
    fuel = value_of(C_graphite=1.0)
    assert cold_gas_efficiency(value_of(CO_g=1.0), fuel) == pytest.approx(0.719, abs=1e-3)
    assert np.isnan(cold_gas_efficiency(fuel, value_of(N2_g=1.0)))


def test_ash_is_left_out_where_it_is_little() -> None:
    library = load_library()
    records = [library["C(graphite)"], library["SiO2(quartz)"]]
    # by mass 12.011 g of carbon with 1.2 g and with 6 g of silica, 60.08 g/mol
    amounts = np.array([[1.0, 0.02], [1.0, 0.1]])
    assert without_ash(records, amounts).tolist() == [[1.0, 0.0], [1.0, 0.1]]
    assert without_ash(records, amounts[0]).tolist() == [1.0, 0.0]
