"""Tangent-plane analysis: saturation pressures, mixtures beside their liquid, gases far from it."""

from __future__ import annotations

import numpy as np
import pytest

from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.real_gas import Equation, RealGas
from gibbsmin.thermo.stability import stability


def gas_of(equation: Equation, *names: str) -> RealGas:
    return RealGas.of(equation, [load_library()[name] for name in names])


# Saturation pressures in bar: handbook values, recalled.
SATURATION = [
    ("NH3(g)", 250.0, 1.65),
    ("NH3(g)", 300.0, 10.62),
    ("NH3(g)", 350.0, 38.65),
    ("CO2(g)", 270.0, 32.03),
    ("H2O(g)", 500.0, 26.39),
    ("CH3OH(g)", 400.0, 7.74),
]


@pytest.mark.parametrize("equation", Equation)
@pytest.mark.parametrize(("name", "T", "expected"), SATURATION)
def test_a_pure_gas_condenses_at_its_saturation_pressure(
    equation: Equation, name: str, T: float, expected: float
) -> None:
    gas = gas_of(equation, name)
    P = expected * 1e5 * np.linspace(0.85, 1.15, 61)
    found = stability(gas, gas.state(np.full(P.size, T), P, np.ones((P.size, 1))))
    assert found.stable[0]
    assert not found.stable[-1]
    onset = P[np.argmin(found.stable)] / 1e5
    assert onset == pytest.approx(expected, rel=0.045)
    assert np.isnan(found.other[0]).all()


def test_a_second_phase_lies_below_the_tangent_plane_and_holds_the_heavy_gas() -> None:
    gas = gas_of(Equation.PENG_ROBINSON, "H2(g)", "CO(g)", "CH3OH(g)", "H2O(g)")
    n = np.tile([0.6, 0.15, 0.15, 0.10], (3, 1))
    T = np.array([350.0, 420.0, 520.0])
    state = gas.state(T, np.full(3, 80e5), n)
    found = stability(gas, state)
    assert found.stable.tolist() == [False, False, True]
    for i in (0, 1):
        W = found.other[i]
        assert W.sum() == pytest.approx(1.0)
        assert W[2] + W[3] > 0.9
        plane = np.log(state.y[i]) + state.log_fugacity[i]
        liquid = gas.state(T[i], 80e5, W, liquid=True)
        distance = W @ (np.log(np.maximum(W, 1e-300)) + liquid.log_fugacity - plane)
        assert distance < -1e-3


def test_hot_gases_and_radicals_are_stable() -> None:
    gas = gas_of(Equation.SOAVE_REDLICH_KWONG, "H2(g)", "N2(g)", "NH3(g)", "OH(g)")
    n = np.array([[3.0, 1.0, 1.0, 0.0], [0.0, 0.0, 0.0, 1.0], [0.0, 1.0, 0.0, 0.0]])
    state = gas.state(np.array([700.0, 300.0, 300.0]), np.full(3, 3e7), n)
    found = stability(gas, state)
    assert found.stable.all()
    assert np.isnan(found.other).all()
