"""Dew points of water and of sulphuric acid."""

from __future__ import annotations

import numpy as np
import pytest

from gibbsmin.constants import STANDARD_ATMOSPHERE
from gibbsmin.reactor.dew_points import acid_dew_point, water_dew_point, water_saturation_pressure
from gibbsmin.thermo.library import load_library

# Saturation of water and ice: °C, Pa.  IAPWS-95 (2018) and IAPWS sublimation pressure (2011),
# recalled from memory.  Beside them the departure of an ideal gas that the docstring states, K.
SATURATION = [
    (-40.0, 12.84, 0.05),
    (-20.0, 103.26, 0.05),
    (0.01, 611.657, 0.05),
    (25.0, 3169.9, 0.05),
    (60.0, 19946.0, 0.15),
    (100.0, 101418.0, 0.5),
    (150.0, 476160.0, 1.75),
    (180.0, 1002800.0, 3.35),
]


@pytest.mark.parametrize(("celsius", "pressure", "departure"), SATURATION)
def test_water_dew_point_meets_the_steam_tables(
    celsius: float, pressure: float, departure: float
) -> None:
    found = float(water_dew_point(pressure, load_library())) - 273.15
    assert found == pytest.approx(celsius, abs=departure)


def test_saturation_pressure_is_the_inverse_of_the_dew_point() -> None:
    T = np.array([[240.0, 273.15], [330.0, 430.0]])
    pressure = water_saturation_pressure(T, load_library())
    assert water_dew_point(pressure, load_library()) == pytest.approx(T, abs=1e-6)


def test_water_dew_point_is_an_array_and_nan_outside_its_range() -> None:
    found = water_dew_point(np.array([[0.0, 2339.0], [1e8, np.nan]]), load_library())
    assert found[0, 1] == pytest.approx(293.15, abs=0.05)
    assert np.isnan(found[[0, 1, 1], [0, 0, 1]]).all()


def test_acid_dew_point_of_a_flue_gas() -> None:
    """10 % H2O with 10 ppm SO3 condenses at 130–140 °C (common practice)."""
    found = acid_dew_point(0.10, 10e-6, STANDARD_ATMOSPHERE) - 273.15
    assert 130.0 < found < 140.0


def test_acid_dew_point_rises_with_acid_water_and_pressure() -> None:
    acid = acid_dew_point(0.10, np.array([1e-6, 10e-6, 100e-6]), 1e5)
    # Some 20 K a decade of SO3 (common practice).
    assert np.diff(acid) == pytest.approx([22.0, 24.0], abs=3.0)
    assert (np.diff(acid_dew_point(np.array([0.05, 0.10, 0.20]), 10e-6, 1e5)) > 0.0).all()
    assert acid_dew_point(0.10, 10e-6, 2e5) > acid_dew_point(0.10, 10e-6, 1e5)


def test_acid_dew_point_lies_far_above_the_water_dew_point() -> None:
    water = water_dew_point(0.10 * STANDARD_ATMOSPHERE, load_library())
    assert acid_dew_point(0.10, 1e-6, STANDARD_ATMOSPHERE) > water + 50.0


@pytest.mark.parametrize(
    ("water", "trioxide"), [(0.005, 1e-5), (0.5, 1e-5), (0.1, 0.0), (0.1, 1e-2), (np.nan, 1e-5)]
)
def test_no_acid_dew_point_outside_the_range(water: float, trioxide: float) -> None:
    assert np.isnan(acid_dew_point(water, trioxide, 1e5))
