"""Real-gas mixtures: the relations that departures obey, limits, and rules for special gases."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import numpy.typing as npt
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.testing import assert_allclose

from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.errors import InputError
from gibbsmin.thermo.critical import critical_points
from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.real_gas import Equation, RealGas, equation_named

FloatArray = npt.NDArray[np.float64]
R = GAS_CONSTANT
NAMES = ("H2(g)", "N2(g)", "NH3(g)", "H2O(g)", "CO2(g)", "CH3OH(g)", "OH(g)", "He(g)")
STEP = 1e-3

conditions = st.tuples(
    st.sampled_from(Equation),
    st.floats(300.0, 1800.0).filter(
        # A difference across a critical temperature would meet the step in curvature there.
        lambda T: (
            min(abs(T / critical_points()[n].temperature - 1.0) for n in NAMES if n != "OH(g)")
            > 0.01
        )
    ),
    st.floats(3.0, 7.3),
    st.lists(st.floats(0.02, 1.0), min_size=len(NAMES), max_size=len(NAMES)),
).filter(
    # Gas-like states: the gas root of a mixture far above its dew point.
    lambda case: case[1] > 550.0 or case[2] < 5.0
)


def gas_of(equation: Equation, names: tuple[str, ...] = NAMES) -> RealGas:
    return RealGas.of(equation, [load_library()[name] for name in names])


def difference(function: Callable[[float], FloatArray]) -> FloatArray:
    """Derivative at 0, central and of the sixth order."""
    near, middle, far = (function(k * STEP) - function(-k * STEP) for k in (1, 2, 3))
    return (45 * near - 9 * middle + far) / (60 * STEP)


@settings(max_examples=60, deadline=None)
@given(conditions)
def test_departures_obey_the_laws(
    case: tuple[Equation, float, float, list[float]],
) -> None:
    equation, T, log_P, amounts = case
    gas, P, n = gas_of(equation), 10.0**log_P, np.array(amounts)
    state = gas.state(T, P, n)
    y = n / n.sum()

    def at(ln_T: float = 0.0, ln_P: float = 0.0) -> FloatArray:
        return gas.state(T * np.exp(ln_T), P * np.exp(ln_P), n).log_fugacity

    # Euler: G of the mixture is the sum of its parts.
    G = y @ state.log_fugacity
    assert_allclose(
        state.enthalpy_departure / (R * T) - state.entropy_departure / R, G, atol=1e-11, rtol=1e-11
    )
    # Gibbs-Helmholtz, of every gas and of the mixture.
    slopes = difference(lambda h: at(ln_T=h))
    assert_allclose(slopes, state.log_fugacity_by_temperature, atol=1e-8, rtol=1e-8)
    assert_allclose(y @ slopes, -state.enthalpy_departure / (R * T), atol=1e-8, rtol=1e-8)
    # V = ∂G/∂P, of every gas and of the mixture.
    assert_allclose(
        difference(lambda h: at(ln_P=h)), state.partial_compressibility - 1.0, atol=1e-8, rtol=1e-8
    )
    assert_allclose(y @ state.partial_compressibility, state.Z, rtol=1e-11)
    # Cp = ∂H/∂T.
    heated = difference(lambda h: gas.state(T * np.exp(h), P, n).enthalpy_departure / (R * T))
    assert_allclose(heated, state.heat_capacity_departure / R, atol=1e-7, rtol=1e-8)
    # Maxwell: ∂S/∂P at constant T is −∂V/∂T at constant P.
    pressed = difference(lambda h: gas.state(T, P * np.exp(h), n).entropy_departure / R)
    assert_allclose(pressed, 1.0 - state.Z * state.expansion, atol=1e-8, rtol=1e-8)
    volumes = difference(lambda h: np.log(gas.state(T, P * np.exp(h), n).V))
    assert_allclose(volumes, state.compression, rtol=1e-8)


@settings(max_examples=40, deadline=None)
@given(conditions)
def test_composition_derivatives_are_symmetric_and_obey_gibbs_and_duhem(
    case: tuple[Equation, float, float, list[float]],
) -> None:
    equation, T, log_P, amounts = case
    gas, P, n = gas_of(equation), 10.0**log_P, np.array(amounts)
    state = gas.state(T, P, n)
    slopes = state.log_fugacity_by_amounts
    assert_allclose(slopes, slopes.T, atol=1e-12)
    assert_allclose(state.y @ slopes, 0.0, atol=1e-10)
    for column in range(len(NAMES)):
        one = n.sum() * np.eye(len(NAMES))[column]
        step = 0.1 * n[column] / n.sum()
        by_difference = (
            difference(lambda h: gas.state(T, P, n + h * step * one).log_fugacity) / step  # noqa: B023
        )
        assert_allclose(by_difference, slopes[:, column], atol=1e-6, rtol=1e-6)


@pytest.mark.parametrize("equation", Equation)
def test_second_virial_limit_is_exact(equation: Equation) -> None:
    gas = gas_of(equation)
    T = 500.0
    y = np.arange(1.0, 9.0) / 36.0
    a = gas.pulls(T).root[:, None] * gas.pulls(T).root * gas.coupling
    b = (gas.volumes[:, None] + gas.volumes) / 2.0
    pairs = b - a / (R * T)
    B = y @ pairs @ y
    expected = (2.0 * pairs @ y - B) / (R * T)
    P = 0.1
    assert_allclose(gas.state(T, P, y).log_fugacity / P, expected, rtol=1e-5)
    assert_allclose((gas.state(T, 100.0, y).Z - 1.0) / 100.0, B / (R * T), rtol=1e-4)


@pytest.mark.parametrize("equation", Equation)
def test_the_critical_point_is_where_it_was_put(equation: Equation) -> None:
    point = critical_points()["CO2(g)"]
    gas = gas_of(equation, ("CO2(g)",))
    state = gas.state(point.temperature * (1 + 1e-9), point.pressure, [1.0])
    expected = 1.0 / 3.0 if equation is Equation.SOAVE_REDLICH_KWONG else 0.3074
    assert_allclose(state.Z, expected, atol=2e-3)


@pytest.mark.parametrize("equation", Equation)
@pytest.mark.parametrize("name", ["N2(g)", "H2O(g)", "CO2(g)", "H2(g)", "He(g)", "NO2(g)"])
def test_attraction_falls_from_a_continuous_slope_at_the_critical_temperature(
    equation: Equation, name: str
) -> None:
    gas = gas_of(equation, (name,))
    Tc = gas.critical_temperatures[0]
    near = np.array([Tc * (1 - 1e-12), Tc * (1 + 1e-12)])
    alpha, slope, _ = (part[:, 0] for part in gas.attraction.at(near))
    assert_allclose(alpha[1], alpha[0], atol=1e-10)
    assert_allclose(slope[1], slope[0], atol=2e-5)
    if name != "H2(g)":
        assert_allclose(alpha, 1.0, atol=1e-10)
    grid, _, _ = gas.attraction.at(np.linspace(max(0.5 * Tc, 100.0), 6000.0, 400))
    assert np.all(np.diff(grid[:, 0]) < 0.0)
    assert np.all(grid > 0.0)


def test_a_gas_without_constants_is_ideal_alone_and_shares_the_free_volume_of_others() -> None:
    alone = gas_of(Equation.SOAVE_REDLICH_KWONG, ("OH(g)", "H(g)")).state(1500.0, 3e7, [1.0, 2.0])
    assert_allclose(alone.Z, 1.0, atol=1e-8)
    assert_allclose(alone.log_fugacity, 0.0, atol=1e-8)
    assert_allclose(alone.enthalpy_departure / (R * 1500.0), 0.0, atol=1e-8)
    mixture = gas_of(Equation.SOAVE_REDLICH_KWONG, ("N2(g)", "OH(g)"))
    state = mixture.state(1500.0, 3e7, [1.0, 0.1])
    free = state.Z - state.B * 3e7 / (R * 1500.0)
    assert_allclose(state.log_fugacity[1], -np.log(free), atol=1e-8)
    assert mixture.known.tolist() == [True, False]


def test_liquid_volume_is_the_smallest_root() -> None:
    gas = gas_of(Equation.PENG_ROBINSON, ("NH3(g)",))
    vapour, liquid = (gas.state(300.0, 10.6e5, [1.0], liquid=side) for side in (False, True))
    assert liquid.V < vapour.V / 20
    # Saturation near 10.6 bar at 300 K (common practice): both have nearly one fugacity.
    assert_allclose(vapour.log_fugacity, liquid.log_fugacity, atol=0.02)
    single = gas.state(600.0, 10.6e5, [1.0], liquid=True)
    assert_allclose(single.V, gas.state(600.0, 10.6e5, [1.0]).V, rtol=1e-12)


def test_states_are_batched() -> None:
    gas = gas_of(Equation.PENG_ROBINSON)
    random = np.random.default_rng(3)
    T, P = random.uniform(500, 900, (2, 5)), random.uniform(1e5, 2e7, (2, 5))
    n = random.uniform(0, 1, (2, 5, 8))
    together = gas.state(T, P, n)
    for i, j in np.ndindex(2, 5):
        one = gas.state(T[i, j], P[i, j], n[i, j])
        assert_allclose(together.log_fugacity[i, j], one.log_fugacity, rtol=1e-12)
        assert_allclose(together.Z[i, j], one.Z, rtol=1e-12)


def test_no_gas_gives_nan() -> None:
    state = gas_of(Equation.PENG_ROBINSON).state(500.0, 1e5, np.zeros(8))
    assert np.isnan(state.log_fugacity).all()


def test_an_unknown_equation_is_answered_with_those_there_are() -> None:
    with pytest.raises(InputError) as caught:
        equation_named("van der Waals")
    assert str(caught.value) == (
        'found the equation of state "van der Waals"; '
        'accepted is "Soave-Redlich-Kwong" or "Peng-Robinson".'
    )
