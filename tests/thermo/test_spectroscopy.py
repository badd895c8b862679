"""Functions from spectra against published entropies, the main tables and closed forms."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.errors import InputError
from gibbsmin.thermo.energy_levels import KELVIN_PER_WAVENUMBER
from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.spectroscopy import InternalRotation, Spectrum, gas_functions

ONE = ((0.0, 1.0),)

# Entropies: CODATA (1989)/JANAF, J/(mol K).  Constants: Huber & Herzberg (1979) and Shimanouchi
# (1972), 1/cm, rigid and harmonic.  A tolerance of 0.1 is what the model neglects; for the stiff
# N2 and CO 0.02.
RIGID = {
    "N2(g)": (2, (1.98958,), ((2329.92, 1),), ONE, 191.609, 0.02),
    "NO(g)": (1, (1.69611,), ((1875.96, 1),), ((0.0, 2.0), (119.73, 2.0)), 210.76, 0.1),
    "O2(g)": (2, (1.43765,), ((1556.26, 1),), ((0.0, 3.0),), 205.152, 0.1),
    "CO(g)": (1, (1.92253,), ((2143.24, 1),), ONE, 197.66, 0.02),
    "HCl(g)": (1, (10.43982,), ((2885.31, 1),), ONE, 186.902, 0.1),
    "CO2(g)": (2, (0.39021,), ((1333.0, 1), (667.4, 2), (2349.1, 1)), ONE, 213.785, 0.1),
    "CH4(g)": (
        12,
        (5.2412, 5.2412, 5.2412),
        ((2917.0, 1), (1534.0, 2), (3019.0, 3), (1306.0, 3)),
        ONE,
        186.37,
        0.1,
    ),
    "NH3(g)": (
        3,
        (9.9443, 9.9443, 6.196),
        ((3337.0, 1), (950.0, 1), (3444.0, 2), (1627.0, 2)),
        ONE,
        192.77,
        0.1,
    ),
}


@pytest.mark.parametrize("name", RIGID)
def test_entropy_of_a_rigid_harmonic_molecule_is_the_published_one(name: str) -> None:
    sigma, rotation, vibrations, electronic, published, tolerance = RIGID[name]
    mass = load_library()[name].molar_mass
    spectrum = Spectrum(mass, sigma, rotation, vibrations, electronic)
    assert gas_functions(spectrum, 298.15).entropy == pytest.approx(published, abs=tolerance)


def test_stiff_polyatomics_follow_the_main_tables_to_1000_K() -> None:
    """CO2 and CH4 within 0.5 %; above, anharmonicity adds to CO2: 1.1 % at 2000 K."""
    T = np.linspace(298.15, 1000.0, 15)
    for name in ("CO2(g)", "CH4(g)"):
        sigma, rotation, vibrations, electronic, *_ = RIGID[name]
        record = load_library()[name]
        spectrum = Spectrum(record.molar_mass, sigma, rotation, vibrations, electronic)
        ratio = gas_functions(spectrum, T).heat_capacity
        ratio /= PropertyTable.of([record]).heat_capacity(T)[:, 0]
        assert np.abs(ratio - 1.0).max() < 0.005


def test_an_atom_has_the_entropy_of_sackur_and_tetrode() -> None:
    """Argon: 154.846 J/(mol K), CODATA (1989)."""
    record = load_library()["Ar(g)"]
    found = gas_functions(Spectrum(record.molar_mass, 1, (), ()), 298.15)
    assert found.entropy == pytest.approx(154.846, abs=0.002)
    assert found.heat_capacity == pytest.approx(2.5 * GAS_CONSTANT, rel=1e-14)


@pytest.mark.parametrize("T", [60.0, 298.15, 1500.0, 6000.0])
def test_functions_belong_together(T: float) -> None:
    """dH/dT = Cp and T dS/dT = Cp, by central differences."""
    spectrum = Spectrum(
        0.028, 2, (1.99824,), ((2358.57, 1),), anharmonicity=14.3, coupling=0.0173, distortion=6e-6
    )
    rotor = Spectrum(
        0.030,
        6,
        (2.68, 0.66, 0.66),
        ((2900.0, 6), (1400.0, 5), (900.0, 3), (1190.0, 2), (820.0, 1)),
        internal_rotations=(InternalRotation(1010.0, 3, 10.6, 3),),
    )
    h = 1e-4 * T
    stretching = replace(rotor, internal_rotations=(), stretching=2e-5)
    linear = Spectrum(0.028, 1, (10.0,), ((2000.0, 1),))
    for each in (spectrum, rotor, stretching, linear):
        low, here, high = (gas_functions(each, t) for t in (T - h, T, T + h))
        slope = (high.enthalpy - low.enthalpy) / (2 * h)
        assert slope == pytest.approx(here.heat_capacity, rel=1e-6)
        slope = T * (high.entropy - low.entropy) / (2 * h)
        assert slope == pytest.approx(here.heat_capacity, rel=1e-6)


def test_an_internal_rotation_runs_from_a_vibration_to_a_free_turn() -> None:
    """A high barrier gives the harmonic oscillator n √(V F), no barrier the free rotor."""

    def alone(rotor: InternalRotation, T: float) -> float:
        bare = Spectrum(0.03, 1, (), ())
        turning = Spectrum(0.03, 1, (), (), internal_rotations=(rotor,))
        return float(gas_functions(turning, T).entropy - gas_functions(bare, T).entropy)

    stiff = InternalRotation(barrier=40000.0, fold=1, constant=5.0, symmetry_number=1)
    wavenumber = np.sqrt(40000.0 * 5.0)
    x = 1.438777 * wavenumber / 300.0
    harmonic = GAS_CONSTANT * (x / np.expm1(x) - np.log(-np.expm1(-x)))
    assert alone(stiff, 300.0) == pytest.approx(harmonic, rel=0.02)
    free = InternalRotation(barrier=0.0, fold=3, constant=10.0, symmetry_number=3)
    classical = GAS_CONSTANT * (0.5 * np.log(np.pi * 300.0 / (1.438777 * 10.0)) + 0.5 - np.log(3.0))
    assert alone(free, 300.0) == pytest.approx(classical, abs=0.01)


@pytest.mark.parametrize(
    ("change", "sentence"),
    [
        (
            {"symmetry_number": 7},
            "symmetry_number: found the symmetry number 7; accepted is one of 1, 2, 3, 4, 5, 6, "
            "8, 10, 12, 24, 60.",
        ),
        (
            {"symmetry_number": 3},
            "symmetry_number: found the symmetry number 3 of a linear molecule; accepted is 1, or "
            "2 where both ends are alike.",
        ),
        (
            {"rotational_constants": (1.0, 2.0)},
            "rotational_constants: found 2 rotational constants; accepted are none of an atom, "
            "one of a linear molecule, three of another.",
        ),
        (
            {"vibrations": ((-100.0, 1),)},
            "vibrations: found a constant or wavenumber that is not above zero; accepted are "
            "wavenumbers in 1/cm.",
        ),
    ],
)
def test_an_impossible_spectrum_is_refused(change: dict[str, object], sentence: str) -> None:
    good: dict[str, object] = {
        "molar_mass": 0.028,
        "symmetry_number": 2,
        "rotational_constants": (2.0,),
        "vibrations": ((2330.0, 1),),
    }
    with pytest.raises(InputError) as error:
        Spectrum(**(good | change))  # type: ignore[arg-type]
    assert str(error.value) == sentence


def test_a_slow_internal_rotation_is_refused() -> None:
    slow = Spectrum(0.03, 1, (), (), internal_rotations=(InternalRotation(1000.0, 3, 0.005, 3),))
    with pytest.raises(InputError) as error:
        gas_functions(slow, 300.0)
    assert str(error.value) == (
        "internal_rotation: found an internal rotation of 0.005 1/cm, whose levels are too many to "
        "sum; accepted is the constant of a group, from about 0.1 1/cm."
    )


def test_a_stiff_diatomic_approaches_the_rigid_harmonic_molecule() -> None:
    T = np.array([300.0, 1000.0, 3000.0])
    rigid = gas_functions(Spectrum(0.028, 1, (1.0,), ((2000.0, 1),)), T)
    summed = gas_functions(Spectrum(0.028, 1, (1.0,), ((2000.0, 1),), anharmonicity=1e-9), T)
    assert summed.heat_capacity == pytest.approx(rigid.heat_capacity, rel=1e-6)
    assert summed.entropy == pytest.approx(rigid.entropy, rel=1e-6)


def test_rotation_is_classical_from_where_it_is_said_to_be() -> None:
    """Against a spherical top's own sum, Σ (2 J + 1)² exp(−B J (J + 1))."""
    top = Spectrum(0.016, 12, (5.2412,) * 3, ())
    T = top.classical_from
    J = np.arange(60)
    x = KELVIN_PER_WAVENUMBER * 5.2412 * J * (J + 1) / T
    weights = (2 * J + 1) ** 2 * np.exp(-x)
    exact = GAS_CONSTANT * (np.log(weights.sum() / 12) + (x * weights).sum() / weights.sum())
    atom = gas_functions(Spectrum(0.016, 1, (), ()), T).entropy
    assert gas_functions(top, T).entropy - atom == pytest.approx(exact, abs=0.1)


def test_stretching_adds_to_the_entropy_of_water() -> None:
    """188.835 J/(mol K), CODATA (1989); ρ = 2.04e-5 1/K, recalled from tables of such factors."""
    water = Spectrum(0.0180153, 2, (27.877, 14.512, 9.285), ((3657.0, 1), (1595.0, 1), (3756.0, 1)))
    rigid = gas_functions(water, 298.15).entropy
    found = gas_functions(replace(water, stretching=2.04e-5), 298.15).entropy
    assert rigid == pytest.approx(188.835, abs=0.15)
    assert found == pytest.approx(188.835, abs=0.03)
