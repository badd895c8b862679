"""Exergy of streams: published standard values, closed forms, and the lost work it explains."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from gibbsmin.constants import GAS_CONSTANT, STANDARD_ATMOSPHERE
from gibbsmin.errors import InputError
from gibbsmin.minimise import minimise
from gibbsmin.reactor.candidates import Selection
from gibbsmin.reactor.chemistry import Chemistry
from gibbsmin.reactor.exergy import Exergy, Surroundings, stream_exergy, szargut_surroundings
from gibbsmin.reactor.mixture import Mixture
from gibbsmin.reactor.model import stage_model
from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.properties import PropertyTable

T0 = 298.15

# J. Szargut, Egzergia. Poradnik obliczania i stosowania (2007), appendix 1, read; kJ/mol.
# Each follows from Gibbs energies of formation and the exergies of the elements; 0.3 % is the
# spread of the former between the source's tables and ours.  Left out: CCl4(l), printed as 472.7,
# which its own elements (C 409.87, Cl2 123.7) and ΔfG = −65 contradict by 120; BaO and BaCO3, whose
# ΔfG in the source differ from ours by 3–5 kJ/mol, and Al2SiO5 (1.5 kJ/mol of −2440).
PUBLISHED = {
    "Al(cr)": 795.7,
    "Al4C3(cr)": 4216.2,
    "AlCl3(cr)": 352.2,
    "Al2O3(alpha)": 15.0,
    "C(graphite)": 409.87,
    "C2N2(g)": 1118.1,
    "C2H6(g)": 1495.0,
    "C3H8(g)": 2152.8,
    "n-C4H10(g)": 2804.2,
    "C2H4(g)": 1360.3,
    "C3H6(g)": 2002.7,
    "C6H6(g)": 3301.3,
    "C6H6(l)": 3296.2,
}
# The same work or its 1988 edition, recalled from memory; 0.5 %.
RECALLED = {
    "H2(g)": 236.09,
    "CO(g)": 274.71,
    "NH3(g)": 337.9,
    "H2S(g)": 812.0,
    "SO2(g)": 313.4,
    "CH3OH(g)": 722.3,
    "n-C8H18(l)": 5413.1,
}


def exergy_of(
    amounts: dict[str, float],
    T: float = T0,
    P: float = STANDARD_ATMOSPHERE,
    surroundings: Surroundings | None = None,
) -> Exergy:
    library = load_library()
    records = [library[name] for name in amounts]
    around = surroundings or szargut_surroundings()
    return stream_exergy(records, np.array(list(amounts.values())), T, P, around, library)


@pytest.mark.parametrize("name", PUBLISHED)
def test_standard_chemical_exergies_as_published(name: str) -> None:
    found = exergy_of({name: 1.0})
    assert found.chemical / 1e3 == pytest.approx(PUBLISHED[name], rel=3e-3)
    assert found.physical == pytest.approx(0.0, abs=1e-6)


@pytest.mark.parametrize("name", RECALLED)
def test_standard_chemical_exergies_as_recalled(name: str) -> None:
    assert exergy_of({name: 1.0}).chemical / 1e3 == pytest.approx(RECALLED[name], rel=5e-3)


def test_octane_in_the_environment_of_a_textbook() -> None:
    """47 397.2 kJ/kg with CO2 19.87, H2O(l) 0.9 (so H2O(g) 9.5) and O2 3.97 kJ/mol.

    M. J. Moran, H. N. Shapiro, Fundamentals of Engineering Thermodynamics, example 13.12(b),
    p. 662 (read); 0.2 %, that of the enthalpies of formation in use.
    """
    around = szargut_surroundings()
    chemical = {**around.chemical, "CO2(g)": 19870.0, "H2O(g)": 9500.0, "O2(g)": 3970.0}
    found = exergy_of({"n-C8H18(l)": 1.0}, surroundings=replace(around, chemical=chemical))
    mass = load_library()["n-C8H18(l)"].molar_mass
    assert found.total / mass / 1e3 == pytest.approx(47397.2, rel=2e-3)


@pytest.mark.parametrize(
    ("air", "flame", "efficiency"), [(12.5, 2395.0, 0.702), (50.0, 962.0, 0.463)]
)
def test_exergetic_efficiency_of_an_octane_flame(
    air: float, flame: float, efficiency: float
) -> None:
    """1 − (E_in − E_out)/E_fuel of complete adiabatic combustion in 100 and 400 % of the air.

    M. J. Moran, H. N. Shapiro, Fundamentals of Engineering Thermodynamics, example 13.16, p. 668
    (read), with the flame temperatures of its example 13.8; tolerance 0.003 as printed figures of
    entropy round.
    """
    fuel = exergy_of({"n-C8H18(l)": 1.0}).total
    entering = fuel + exergy_of({"O2(g)": air, "N2(g)": 3.76 * air}).total
    burnt = {"CO2(g)": 8.0, "H2O(g)": 9.0, "N2(g)": 3.76 * air, "O2(g)": air - 12.5}
    leaving = exergy_of(burnt, T=flame).total
    assert 1 - (entering - leaving) / fuel == pytest.approx(efficiency, abs=3e-3)


def test_physical_exergy_of_a_monatomic_gas_has_a_closed_form() -> None:
    T, P, Cp = 800.0, 5e5, 2.5 * GAS_CONSTANT
    found = exergy_of({"Ar(g)": 2.0}, T, P)
    heat = Cp * (T - T0 - T0 * np.log(T / T0))
    work = GAS_CONSTANT * T0 * np.log(P / STANDARD_ATMOSPHERE)
    assert found.physical == pytest.approx(2 * (heat + work), rel=1e-4)


@pytest.mark.parametrize("T_around", [270.0, 298.15, 310.0])
def test_air_at_rest_has_no_exergy(T_around: float) -> None:
    """The environment's own mixture at its own partial pressures, whatever the surroundings' T.

    These add up to 98 % of the atmosphere, since the source takes a lower mean pressure at ground.
    """
    around = szargut_surroundings(T_around)
    gases = ("N2(g)", "O2(g)", "H2O(g)", "Ar(g)", "CO2(g)")
    fractions = {name: np.exp(-around.chemical[name] / (GAS_CONSTANT * T0)) for name in gases}
    found = exergy_of(fractions, T_around, around.pressure * sum(fractions.values()), around)
    assert found.total == pytest.approx(0.0, abs=1e-6)


def test_exergy_lost_is_the_lost_work_of_a_stage() -> None:
    """E_in + Q (1 − T0/T_boundary) − E_out = T0 S_gen, whatever the environment."""
    library = load_library()
    feed = [library[name] for name in ("CH4(g)", "H2O(g)", "O2(g)", "N2(g)")]
    consider = ("CH4(g)", "H2O(g)", "O2(g)", "N2(g)", "CO(g)", "CO2(g)", "H2(g)", "C(graphite)")
    model = stage_model(Chemistry(Selection(consider=consider)), feed, library)
    amounts, T_in, P_in, T, P = np.array([1.0, 0.6, 0.3, 0.4]), 600.0, 30e5, 1100.0, 20e5
    outlet = minimise(model.programme(np.array([T]), np.array([P]), amounts[None])).amounts[0]
    entering_gas = Mixture.of(PropertyTable.of(feed))
    around = szargut_surroundings(T0)
    heat = model.mixture.enthalpy(T, P, outlet) - entering_gas.enthalpy(T_in, P_in, amounts)
    generated = (
        model.mixture.entropy(T, P, outlet) - entering_gas.entropy(T_in, P_in, amounts) - heat / T
    )
    entering = stream_exergy(feed, amounts, T_in, P_in, around, library).total
    leaving = stream_exergy(model.records, outlet, T, P, around, library).total
    lost = entering + heat * (1 - T0 / T) - leaving
    assert lost == pytest.approx(T0 * generated, rel=1e-9)


def test_what_has_no_chemical_exergy_says_why() -> None:
    rubidium = exergy_of({"Rb(g)": 1.0})
    assert rubidium.remark == "no standard chemical exergy of Rb is known"
    assert np.isnan(rubidium.total)
    assert np.isfinite(rubidium.physical)
    warm = exergy_of({"SO2(g)": 1.0}, surroundings=szargut_surroundings(310.0))
    assert warm.remark == "the standard chemical exergy of S holds at 298.15 K alone"
    assert exergy_of({"H3O+(g)": 1.0}).remark == (
        "ions have no chemical exergy in this environment"
    )


def test_surroundings_must_be_above_zero() -> None:
    with pytest.raises(InputError) as raised:
        szargut_surroundings(0.0)
    assert str(raised.value) == (
        "found surroundings at 0 K and 101325 Pa; "
        "accepted are a temperature and a pressure above 0."
    )
