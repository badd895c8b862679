"""Third-law entropies against published calorimetry and a closed form."""

from __future__ import annotations

import numpy as np
import pytest

from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.errors import InputError
from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.measured_constants import compare_laws
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.third_law import (
    Contribution,
    Transition,
    Vapour,
    _to_ideal_gas,
    summed,
    third_law_entropy,
)

CALORIE = 4.184


def test_nitrogen_by_giauque_and_clayton() -> None:
    """W. F. Giauque, J. O. Clayton, J. Am. Chem. Soc. 55 (1933) 4875: parts in cal/(mol K),
    recalled from memory; they give 36.53 cal/(mol K) at 77.32 K, ideal gas at 1 atm, which they
    set against 36.42 from the spectrum."""
    parts = [
        Contribution("0 to 10 K, T³ law", 0.458 * CALORIE, 0.05 * CALORIE),
        Contribution("10 to 35.61 K", 6.034 * CALORIE, 0.03 * CALORIE),
        Contribution("transition, 54.71 cal at 35.61 K", 54.71 * CALORIE / 35.61, 0.0),
        Contribution("35.61 to 63.14 K", 5.589 * CALORIE, 0.03 * CALORIE),
        Contribution("fusion, 172.3 cal at 63.14 K", 172.3 * CALORIE / 63.14, 0.0),
        Contribution("63.14 to 77.32 K", 2.728 * CALORIE, 0.01 * CALORIE),
        Contribution("vaporisation, 1332.9 cal at 77.32 K", 1332.9 * CALORIE / 77.32, 0.02),
        # Critical point of nitrogen: 126.2 K, 3.39 MPa.
        *_to_ideal_gas(Vapour(101325.0, 126.2, 3.39e6), 77.32),
    ]
    found = summed(77.32, parts)
    at_one_atmosphere = found.entropy - GAS_CONSTANT * np.log(1.01325)
    assert at_one_atmosphere / CALORIE == pytest.approx(36.53, abs=0.05)
    # From there the library's own heat capacity leads to 298.15 K, by 7/2 R of the rigid gas.
    S298 = found.entropy + 3.5 * GAS_CONSTANT * np.log(298.15 / 77.32)
    assert pytest.approx(191.609, abs=2.0 * found.uncertainty + 0.1) == S298


# Copper, G. K. White, S. J. Collocott, J. Phys. Chem. Ref. Data 13 (1984) 1251: K, J/(mol K);
# recalled from memory.
COPPER = {
    10: 0.0555, 15: 0.184, 20: 0.462, 25: 0.963, 30: 1.693, 40: 3.740, 50: 6.154, 60: 8.595,
    70: 10.86, 80: 12.85, 90: 14.56, 100: 16.01, 120: 18.25, 140: 19.87, 160: 21.05, 180: 21.94,
    200: 22.63, 220: 23.18, 240: 23.61, 260: 23.96, 280: 24.25, 298.15: 24.46,
}  # fmt: skip


def test_copper_has_its_published_entropy() -> None:
    """33.15 ± 0.08 J/(mol K), CODATA (1989), here within the stated uncertainty of 0.5 % in Cp."""
    found = third_law_entropy(list(COPPER), list(COPPER.values()), 298.15)
    assert found.uncertainty < 0.25
    assert found.entropy == pytest.approx(33.15, abs=2.0 * found.uncertainty)
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
