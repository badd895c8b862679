"""S(298.15 K) against statistical mechanics: the rigid rotor with harmonic vibrations.

    S = R [5/2 + ln(q_trans) + ln(q_rot) + d/2 + Σ (x/(eˣ − 1) − ln(1 − e⁻ˣ)) + S_el/R],  x = hcν/kT

with q_trans = (2π m kT/h²)^(3/2) kT/P°, and q_rot = kT/(σ hcB) for a linear molecule (d = 2) or
√π/σ · √((kT/hc)³/(ABC)) for any other (d = 3).  σ is the symmetry number.
"""

from __future__ import annotations

from math import exp, log, log1p, pi, prod, sqrt

import pytest
from published_values import CheckValue, check_values

from gibbsmin.constants import (
    AVOGADRO_CONSTANT,
    BOLTZMANN_CONSTANT,
    GAS_CONSTANT,
    PLANCK_CONSTANT,
    REFERENCE_TEMPERATURE,
    SPEED_OF_LIGHT,
    STANDARD_PRESSURE,
)
from gibbsmin.thermo.library import load_library

CHECKS = check_values("spectroscopic_entropies")


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_library_entropy_is_that_of_the_molecular_constants(check: CheckValue) -> None:
    record = load_library()[check["record"]]
    assert abs(record.S298 - molecular_entropy(check, record.molar_mass)) <= check.tolerance


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_printed_entropy_is_that_of_the_molecular_constants(check: CheckValue) -> None:
    molar_mass = load_library()[check["record"]].molar_mass
    assert check.meets(molecular_entropy(check, molar_mass))


def molecular_entropy(check: CheckValue, molar_mass: float) -> float:
    """S in J/mol/K at 298.15 K and P°, of the constants in one row of the table."""
    T = REFERENCE_TEMPERATURE
    wave_number = BOLTZMANN_CONSTANT * T / (PLANCK_CONSTANT * SPEED_OF_LIGHT) / 100  # kT/hc in 1/cm
    mass = molar_mass / AVOGADRO_CONSTANT
    momentum = sqrt(2 * pi * mass * BOLTZMANN_CONSTANT * T) / PLANCK_CONSTANT
    translation = 5 / 2 + log(momentum**3 * BOLTZMANN_CONSTANT * T / STANDARD_PRESSURE)
    vibrations = [v / wave_number for v in numbers(check["vibrations_per_cm"])]
    vibration = sum(x / (exp(x) - 1) - log1p(-exp(-x)) for x in vibrations)
    rotation = rotational_entropy(
        [B / wave_number for B in numbers(check["rotational_constants_per_cm"])],
        float(check["symmetry_number"]),
    )
    levels = [tuple(map(float, level.split(":"))) for level in check["electronic"].split(";")]
    return GAS_CONSTANT * (
        translation + rotation + vibration + electronic_entropy(levels, wave_number)
    )


def rotational_entropy(constants: list[float], symmetry: float) -> float:
    """S/R of the classical rotor; rotational constants in units of kT."""
    if len(constants) == 1:
        return 1 - log(symmetry * constants[0])
    return 3 / 2 + log(sqrt(pi / prod(constants)) / symmetry)


def electronic_entropy(levels: list[tuple[float, ...]], wave_number: float) -> float:
    """S/R of electronic levels given as wave number and degeneracy."""
    weights = [(level / wave_number, g * exp(-level / wave_number)) for level, g in levels]
    q = sum(weight for _, weight in weights)
    return log(q) + sum(x * weight for x, weight in weights) / q


def numbers(text: str) -> list[float]:
    return [float(part) for part in text.split(";")]
