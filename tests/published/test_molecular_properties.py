"""Heat capacities and entropies from molecular constants against the main tables."""

from __future__ import annotations

import numpy as np
import pytest
from published_values import rows

from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.spectroscopy import InternalRotation, Spectrum, gas_functions

LIBRARY = load_library()
DIATOMICS = rows("molecular_constants")


def spectrum_of(row: dict[str, str]) -> Spectrum:
    levels = (level.split(":") for level in row["electronic"].split(";"))
    return Spectrum(
        LIBRARY[row["record"]].molar_mass,
        int(row["symmetry_number"]),
        (float(row["Be_per_cm"]),),
        ((float(row["we_per_cm"]), 1),),
        tuple((float(energy), float(degeneracy)) for energy, degeneracy in levels),
        anharmonicity=float(row["wexe_per_cm"]),
        cubic_anharmonicity=float(row["weye_per_cm"]),
        coupling=float(row["alpha_e_per_cm"]),
        distortion=float(row["De_per_cm"]),
    )


@pytest.mark.parametrize("row", DIATOMICS, ids=lambda row: row["record"])
def test_diatomic_has_the_heat_capacity_of_the_main_tables(row: dict[str, str]) -> None:
    T = np.append(np.arange(300.0, float(row["highest_T_K"]) + 1.0, 100.0), 298.15)
    found = gas_functions(spectrum_of(row), T).heat_capacity
    expected = PropertyTable.of([LIBRARY[row["record"]]]).heat_capacity(T)[:, 0]
    worst = 100 * float(np.max(np.abs(found / expected - 1)))
    assert worst <= float(row["tolerance_Cp_percent"])


@pytest.mark.parametrize("row", DIATOMICS, ids=lambda row: row["record"])
def test_diatomic_has_the_entropy_of_the_library(row: dict[str, str]) -> None:
    # Constants of the commonest isotopic molecule: the average one's would move S by up to 0.05.
    found = float(gas_functions(spectrum_of(row), 298.15).entropy)
    assert found == pytest.approx(LIBRARY[row["record"]].S298, abs=0.05)


def test_methane_follows_the_main_tables_to_3000_K() -> None:
    methane = Spectrum(
        LIBRARY["CH4(g)"].molar_mass,
        12,
        (5.2412,) * 3,
        ((2917.0, 1), (1534.0, 2), (3019.0, 3), (1306.0, 3)),
    )
    T = np.arange(300.0, 3001.0, 100.0)
    expected = PropertyTable.of([LIBRARY["CH4(g)"]]).heat_capacity(T)[:, 0]
    assert gas_functions(methane, T).heat_capacity == pytest.approx(expected, rel=0.001)


def test_ethane_with_a_hindered_rotation_has_its_published_entropy() -> None:
    # T. Shimanouchi, NSRDS-NBS 39 (1972), and a barrier of 1024 1/cm; all recalled.
    single = (2954.0, 1388.0, 995.0, 2896.0, 1379.0)
    double = (2969.0, 1468.0, 1190.0, 2985.0, 1469.0, 822.0)
    ethane = Spectrum(
        LIBRARY["C2H6(g)"].molar_mass,
        6,
        (2.671, 0.6630, 0.6630),
        tuple((v, 1) for v in single) + tuple((v, 2) for v in double),
        internal_rotations=(InternalRotation(1024.0, 3, 10.70, 3),),
    )
    T = np.array([298.15, 500.0, 1000.0])
    found = gas_functions(ethane, T)
    table = PropertyTable.of([LIBRARY["C2H6(g)"]])
    assert found.entropy == pytest.approx(table.entropy(T)[:, 0], abs=0.1)
    assert found.heat_capacity == pytest.approx(table.heat_capacity(T)[:, 0], rel=0.001)
