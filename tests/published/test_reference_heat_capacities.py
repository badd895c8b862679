"""Ideal-gas heat capacities against those of published reference equations of state.

Cp/R = c + Σ a T^k + Σ v (u/T)² exp(u/T)/(exp(u/T) − 1)²
"""

from __future__ import annotations

import numpy as np
import numpy.typing as npt
import pytest
from published_values import rows

from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.properties import PropertyTable

FloatArray = npt.NDArray[np.float64]
EQUATIONS = rows("reference_heat_capacities")


@pytest.mark.parametrize("row", EQUATIONS, ids=[row["record"] for row in EQUATIONS])
def test_heat_capacity_meets_the_reference_equation(row: dict[str, str]) -> None:
    """A row with a ``fault`` is a known fault of the library's; it must be one still."""
    T = np.linspace(float(row["T_low_K"]), float(row["T_high_K"]), 51)
    found = PropertyTable.of([load_library()[row["record"]]]).heat_capacity(T)[:, 0]
    deviation = 100 * (found / reference_heat_capacity(row, T) - 1)
    meets = np.abs(deviation).max() <= float(row["tolerance_percent"])
    assert meets == (not row["fault"])


def reference_heat_capacity(row: dict[str, str], T: FloatArray) -> FloatArray:
    """Cp in J/mol/K."""
    result = np.full_like(T, float(row["constant"]))
    for coefficient, exponent in pairs(row["powers"]):
        result += coefficient * T**exponent
    for strength, temperature in pairs(row["planck_einstein"]):
        x = temperature / T
        result += strength * x**2 * np.exp(-x) / np.expm1(-x) ** 2
    return GAS_CONSTANT * result


def pairs(text: str) -> list[tuple[float, float]]:
    """Read ``"1.0 2.5; 3 4"``."""
    split = [part.split() for part in text.split(";") if part.strip()]
    return [(float(first), float(second)) for first, second in split]
