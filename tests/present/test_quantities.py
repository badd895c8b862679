"""Figures as people read them."""

from __future__ import annotations

import numpy as np
import pytest

from gibbsmin.present.quantities import amount_unit, amounts_in, fraction, heat, significant
from gibbsmin.thermo.library import load_library


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (0.0, "0"),
        (float("nan"), "–"),
        (278.8312, "278.83"),
        (0.342713, "0.34271"),
        (1234567.8, "1 234 600"),
        (9.99999e6, "1.000e+07"),
        (3.2e-18, "3.200e-18"),
        (-12.5, "-12.500"),
    ],
)
def test_significant(value: float, text: str) -> None:
    assert significant(value) == text


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (0.5, "50.000 %"),
        (1e-4, "0.010000 %"),
        (3.14e-5, "31.40 ppm"),
        (2e-9, "2.0e-09"),
        (0, "0"),
        (-1.1, "-110.00 %"),
        (-3.14e-5, "-31.40 ppm"),
    ],
)
def test_fraction(value: float, text: str) -> None:
    assert fraction(value) == text


@pytest.mark.parametrize(
    ("joule", "is_flow", "text"),
    [(6.6876e6, True, "6.6876 MW"), (-250.0, False, "-250.00 J"), (0.0, True, "0 W")],
)
def test_heat(joule: float, is_flow: bool, text: str) -> None:
    assert heat(joule, is_flow) == text


def test_amounts_come_back_in_moles_or_mass() -> None:
    records = [load_library()["H2O(g)"], load_library()["CO2(g)"]]
    amounts = np.array([1.0, 2.0])
    assert amounts_in("kmol/h", records, amounts).tolist() == pytest.approx([3.6, 7.2])
    assert amounts_in("g", records, amounts).tolist() == pytest.approx([18.015, 88.018], rel=1e-5)


def test_a_normal_volume_is_reported_in_moles() -> None:
    assert amount_unit("Nm3/h", True) == "kmol/h"
    assert amount_unit("scf", False) == "kmol"
    assert amount_unit("t/d", True) == "t/d"
