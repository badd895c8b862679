"""Third-law entropies against published calorimetry and a closed form."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from published_values import rows

from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.errors import InputError
from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.measured_constants import compare_laws
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.third_law import (
    Contribution,
    Transition,
    Vapour,
    ideal_gas_parts,
    third_law_entropy,
)
from gibbsmin.thermo.uncertainty import record_uncertainties

CALORIE = 4.184


def points(substance: str) -> tuple[list[float], list[float]]:
    """K and J/(mol K)."""
    found = [row for row in rows("calorimetric_points") if row["substance"] == substance]
    factors = {"cal/mol/K": CALORIE, "J/mol/K": 1.0}
    return (
        [float(row["T_K"]) for row in found],
        [float(row["Cp"]) * factors[row["unit"]] for row in found],
    )


# The critical point of nitrogen is 126.2 K, 3.39 MPa.
NITROGEN_VAPOUR = Vapour(101325.0, 126.2, 3.39e6)


def test_nitrogen_by_giauque_and_clayton() -> None:
    """W. F. Giauque, J. O. Clayton, J. Am. Chem. Soc. 55 (1933) 4875, recalled from memory:
    36.53 ± 0.1 cal/(mol K) at 77.32 K, ideal gas at 1 atm, of which the heat capacities make
    6.034, 5.589 and 2.728.  The recalled points of the lowest form give 6.20 for 6.034; that is
    nearly all of the difference of 0.096."""
    found = third_law_entropy(
        *points("nitrogen"),
        77.32,
        transitions=[
            Transition(35.61, 54.71 * CALORIE, 0.5 * CALORIE, "alpha to beta"),
            Transition(63.14, 172.3 * CALORIE, 1.0 * CALORIE, "fusion"),
            Transition(77.32, 1332.9 * CALORIE, 3.0 * CALORIE, "vaporisation"),
        ],
        vapour=NITROGEN_VAPOUR,
    )
    at_one_atmosphere = found.entropy - found.contributions[-1].value
    assert at_one_atmosphere / CALORIE == pytest.approx(36.53, abs=0.1)
    calories = {part.name: part.value / CALORIE for part in found.contributions}
    assert calories["0 K to 10 K, T³ law"] == pytest.approx(0.458, abs=0.001)
    assert calories["alpha to beta at 35.61 K"] == pytest.approx(1.536, abs=0.001)
    assert calories["35.61 K to 63.14 K, heat capacity"] == pytest.approx(5.589, abs=0.08)
    assert calories["fusion at 63.14 K"] == pytest.approx(2.729, abs=0.001)
    assert calories["63.14 K to 77.32 K, heat capacity"] == pytest.approx(2.728, abs=0.01)
    assert calories["vaporisation at 77.32 K"] == pytest.approx(17.239, abs=0.001)
    assert calories["gas imperfection (Berthelot)"] == pytest.approx(0.22, abs=0.005)


def test_nitrogens_own_parts_lead_to_its_entropy_at_298_K() -> None:
    """The same paper's parts of the heat capacities, and 7/2 R of the rigid gas from there; its
    authors put the whole at 0.1 cal/(mol K), and the spectrum gives 191.609 J/(mol K)."""
    imperfection, to_bar = ideal_gas_parts(NITROGEN_VAPOUR, 77.32)
    measured = 0.458 + 6.034 + 5.589 + 2.728 + 54.71 / 35.61 + 172.3 / 63.14 + 1332.9 / 77.32
    at_boiling = measured * CALORIE + imperfection.value + to_bar.value
    S298 = at_boiling + 3.5 * GAS_CONSTANT * np.log(298.15 / 77.32)
    assert pytest.approx(191.609, abs=2 * 0.1 * CALORIE) == S298


def test_a_common_error_of_the_heat_capacities_adds_up_over_the_phases() -> None:
    T = np.linspace(10.0, 298.15, 300)
    whole = third_law_entropy(T, 0.1 * T, 298.15, relative_uncertainty=0.01)
    parted = third_law_entropy(
        T,
        0.1 * T,
        298.15,
        transitions=[Transition(150.0, 0.0), Transition(200.0, 0.0)],
        relative_uncertainty=0.01,
    )
    assert parted.entropy == pytest.approx(whole.entropy, rel=1e-4)
    assert parted.uncertainty == pytest.approx(whole.uncertainty, rel=1e-2)


def test_a_temperature_may_stand_twice_at_a_transition() -> None:
    T, Cp = [10.0, 60.0, 110.0, 110.0, 200.0, 298.15], [1.0, 10.0, 20.0, 25.0, 30.0, 40.0]
    found = third_law_entropy(T, Cp, 298.15, transitions=[Transition(110.0, 1100.0)])
    lower = third_law_entropy(T[:3], Cp[:3], 110.0)
    assert found.contributions[1].value == pytest.approx(lower.contributions[1].value)
    with pytest.raises(InputError) as error:
        third_law_entropy(T, Cp, 298.15)
    assert str(error.value) == (
        "temperature: found temperatures that do not rise at 110 K; accepted are temperatures "
        "above 0 K in rising order."
    )


@pytest.mark.parametrize(
    ("transition", "sentence"),
    [
        (
            5.0,
            "transition: found a transition at 5 K, below the first heat capacity; accepted are "
            "transitions above 10 K.",
        ),
        (
            250.0,
            "heat_capacity: found 0 heat capacities between 250 K and 298.15 K; accepted are at "
            "least two in each phase.",
        ),
    ],
)
def test_transitions_out_of_place_are_refused(transition: float, sentence: str) -> None:
    with pytest.raises(InputError) as error:
        third_law_entropy(
            [10.0, 100.0, 200.0],
            [1.0, 20.0, 30.0],
            298.15,
            transitions=[Transition(transition, 100.0)],
        )
    assert str(error.value) == sentence


def test_copper_has_its_published_entropy() -> None:
    """33.15 ± 0.08 J/(mol K), CODATA (1989)."""
    found = third_law_entropy(*points("copper"), 298.15)
    assert found.uncertainty < 0.25
    assert found.entropy == pytest.approx(33.15, abs=0.08)
    assert sum(part.value for part in found.contributions) == pytest.approx(found.entropy)


def test_a_debye_solid_with_a_transition_is_integrated_exactly() -> None:
    """Cp = a T³ up to 50 K, a transition, then a constant: closed forms of both parts."""
    T = np.concatenate([np.linspace(5.0, 50.0, 91), np.linspace(50.5, 300.0, 100)])
    Cp = np.where(T <= 50.0, 1e-5 * T**3, 20.0)
    found = third_law_entropy(
        T, Cp, 298.15, transitions=[Transition(50.0, 1000.0, 10.0, "turning")],
        residual=Contribution("disorder", GAS_CONSTANT * np.log(2.0), 0.0),
    )  # fmt: skip
    exact = 1e-5 * 50.0**3 / 3 + 20.0 + 20.0 * np.log(298.15 / 50.0) + GAS_CONSTANT * np.log(2.0)
    assert found.entropy == pytest.approx(exact, rel=1e-5)
    names = [part.name for part in found.contributions]
    assert names == [
        "0 K to 5 K, T³ law",
        "5 K to 50 K, heat capacity",
        "turning at 50 K",
        "50 K to 298.15 K, heat capacity",
        "disorder",
    ]
    assert found.contributions[2].uncertainty == pytest.approx(0.2)


@pytest.mark.parametrize(
    ("T", "Cp", "sentence"),
    [
        (
            [10.0, 20.0, 15.0],
            [1.0, 2.0, 3.0],
            "temperature: found temperatures that do not rise at 15 K; accepted are temperatures "
            "above 0 K in rising order.",
        ),
        (
            [10.0, 20.0],
            [1.0, -2.0],
            "heat_capacity: found a heat capacity of -2 J/(mol K); accepted are heat capacities "
            "above zero.",
        ),
        (
            [10.0],
            [1.0],
            "heat_capacity: found 1 temperatures and 1 heat capacities; accepted are as many of "
            "one as of the other, at least two.",
        ),
    ],
)
def test_what_is_no_calorimetry_is_refused(T: list[float], Cp: list[float], sentence: str) -> None:
    with pytest.raises(InputError) as error:
        third_law_entropy(T, Cp, 300.0)
    assert str(error.value) == sentence


def test_constants_of_a_reaction_give_back_the_species_they_were_made_of() -> None:
    """K of CO + H2O = CO2 + H2 from the library, evaluated for CO2 by both laws."""
    library = load_library()
    records = [library[f"{name}(g)"] for name in ("CO", "H2O", "CO2", "H2")]
    nu = np.array([-1.0, -1.0, 1.0, 1.0])
    T = np.linspace(600.0, 1200.0, 13)
    log10_K = -(PropertyTable.of(records).gibbs_energy(T) @ nu) / (GAS_CONSTANT * T * np.log(10.0))
    CO2 = records[2]
    laws = compare_laws(CO2, dict(zip(records, nu.tolist(), strict=True)), T, log10_K)
    assert laws.second_law_enthalpy == pytest.approx(CO2.dfH298, abs=1e-3)
    assert laws.second_law_entropy == pytest.approx(CO2.S298, abs=1e-6)
    assert laws.third_law_enthalpy == pytest.approx(CO2.dfH298, abs=1e-3)
    noisy = log10_K + 0.01 * np.random.default_rng(3).standard_normal(T.size)
    laws = compare_laws(CO2, dict(zip(records, nu.tolist(), strict=True)), T, noisy)
    assert laws.consistent
    assert abs(laws.third_law_enthalpy - CO2.dfH298) < 4.0 * laws.u_third_law_enthalpy
    assert abs(laws.second_law_enthalpy - CO2.dfH298) < 4.0 * laws.u_second_law_enthalpy
    tilted = log10_K + 0.2 * (1000.0 / T - 1.0)
    assert not compare_laws(CO2, dict(zip(records, nu.tolist(), strict=True)), T, tilted).consistent


def test_uncertainties_of_measured_constants_hold_those_of_all_that_is_known() -> None:
    """CaCO3 = CaO + CO2 with exact points: what is left are the other records' own."""
    library = load_library()
    names = ("CaCO3(calcite)", "CaO(cr)", "CO2(g)")
    records = [library[name] for name in names]
    nu = dict(zip(records, (-1.0, 1.0, 1.0), strict=True))
    T = np.linspace(900.0, 1200.0, 7)
    G = PropertyTable.of(records).gibbs_energy(T) @ list(nu.values())
    log10_K = -G / (GAS_CONSTANT * T * np.log(10.0))
    known = record_uncertainties(records[1:])
    u_S = float(np.linalg.norm(known.entropy))
    unknown = replace(records[0], u_S298=0.5)
    laws = compare_laws(unknown, nu, T, log10_K)
    assert laws.u_second_law_enthalpy == pytest.approx(np.linalg.norm(known.enthalpy), rel=1e-6)
    assert laws.u_second_law_entropy == pytest.approx(u_S, rel=1e-6)
    assert laws.u_drift == pytest.approx(np.hypot(u_S, 0.5), rel=1e-6)
    of_third = np.linalg.norm([*known.enthalpy, 1050.0 * u_S, 1050.0 * 0.5])
    assert laws.u_third_law_enthalpy == pytest.approx(of_third, rel=1e-6)
    # 0.1 in log10 K, common to all points, counts as R ln 10 · 0.1 in an entropy.
    shared = compare_laws(unknown, nu, T, log10_K, 0.1)
    expected = np.hypot(u_S, 0.1 * GAS_CONSTANT * np.log(10.0))
    assert shared.u_second_law_entropy == pytest.approx(expected, rel=1e-6)


def test_errors_of_enthalpy_and_entropy_are_correlated_as_draws_show() -> None:
    """2 H2 + O2 = 2 H2O, whose elements are known nearly exactly; 1,000 noisy measurements."""
    library = load_library()
    records = [library[f"{name}(g)"] for name in ("H2", "O2", "H2O")]
    nu = dict(zip(records, (-2.0, -1.0, 2.0), strict=True))
    T = np.linspace(1500.0, 2000.0, 6)
    G = PropertyTable.of(records).gibbs_energy(T) @ list(nu.values())
    log10_K = -G / (GAS_CONSTANT * T * np.log(10.0))
    water = replace(records[2], u_S298=0.2)
    noise = 0.02 * np.random.default_rng(8).standard_normal((1000, T.size))
    found = [compare_laws(water, nu, T, log10_K + each) for each in noise]
    H = np.array([laws.second_law_enthalpy for laws in found])
    S = np.array([laws.second_law_entropy for laws in found])
    reported = np.median([laws.second_law_correlation for laws in found])
    assert np.corrcoef(H, S)[0, 1] == pytest.approx(0.995, abs=0.004)
    assert reported == pytest.approx(np.corrcoef(H, S)[0, 1], abs=0.005)
    exact = compare_laws(water, nu, T, log10_K)
    # All of the third law's uncertainty but the elements' is T times that of the entropy.
    assert exact.third_law_correlation == pytest.approx(1.0, abs=0.001)
