"""Reactions of a sample: published constants, exact equilibrium, limits and what is undefined."""

from __future__ import annotations

import math

import numpy as np
import pytest
from published_values import CheckValue, check_values
from sample_cases import records

from gibbsmin.constants import GAS_CONSTANT, STANDARD_ATMOSPHERE, STANDARD_PRESSURE
from gibbsmin.jobs.case_reactions import coefficients_of
from gibbsmin.sample.limits import ONE_SIDED, extreme
from gibbsmin.sample.reactions import (
    GivenConstant,
    JudgedReaction,
    equilibrium_temperature,
    judged_reaction,
    log_quotient,
    quotient_slopes,
)
from gibbsmin.thermo.library import load_library

REFORMING = "CH4 + H2O = CO + 3 H2"
SHIFT = "CO + H2O = CO2 + H2"
PUBLISHED = [
    value
    for value in check_values("constants")
    if value["reaction"] in ("CH4(g) + H2O(g) = CO(g) + 3 H2(g)", "CO(g) + H2O(g) = CO2(g) + H2(g)")
    and value["quantity"] == "K"
]


def read(text: str) -> JudgedReaction:
    library = load_library()
    return judged_reaction(text, coefficients_of(text, library), library)


def test_there_are_published_constants_of_both() -> None:
    assert len(PUBLISHED) >= 12
    assert len({value["reaction"] for value in PUBLISHED}) == 2


@pytest.mark.parametrize("published", PUBLISHED, ids=str)
def test_a_gas_at_a_published_constant_is_at_equilibrium(published: CheckValue) -> None:
    """T − T_eq of a gas whose Q is the published K is within what its stated spread makes of it."""
    reaction = read(published["reaction"])
    T = np.array([float(published["temperature_K"])])
    change = sum(reaction.coefficients.values())
    unit = STANDARD_ATMOSPHERE if published["pressure_unit"] == "atm" else STANDARD_PRESSURE
    log_Q = math.log(published.value) + change * math.log(unit / STANDARD_PRESSURE)
    spread = math.log1p(published.tolerance / published.value)
    assert float(reaction.constant.log_K(T)[0]) == pytest.approx(log_Q, abs=spread)
    found, flat = equilibrium_temperature(reaction.constant, np.array([log_Q]), T)
    assert not flat[0]
    enthalpy = float(reaction.constant.enthalpy(T)[0])
    allowed = 1.05 * spread * GAS_CONSTANT * T[0] ** 2 / abs(enthalpy)
    assert abs(T[0] - found[0]) <= allowed


@pytest.mark.parametrize("text", [REFORMING, SHIFT])
def test_quotient_equal_to_the_constant_gives_the_temperature_back(text: str) -> None:
    constant = read(text).constant
    T = np.linspace(400.0, 2000.0, 41)
    found, _ = equilibrium_temperature(constant, constant.log_K(T), T + 30.0)
    assert np.abs(found - T).max() < 1e-6


def test_quotient_and_its_slopes() -> None:
    nu = np.array([-1.0, -1.0, 1.0, 3.0, 0.0])
    y = np.array([[0.05, 0.3, 0.1, 0.5, 0.05]])
    P = np.array([25e5])
    expected = math.log(0.1 * 0.5**3 / (0.05 * 0.3) * 25.0**2)
    assert log_quotient(nu, y, P)[0] == pytest.approx(expected, rel=1e-12)
    slopes = quotient_slopes(nu, y)[0]
    for column in range(5):
        step = np.zeros(5)
        step[column] = 1e-6
        up, down = (log_quotient(nu, y + sign * step, P)[0] for sign in (1, -1))
        assert slopes[column] == pytest.approx((up - down) / 2e-6, rel=1e-6, abs=1e-6)
    none_left = np.array([[0.0, 0.3, 0.1, 0.5, 0.1]])
    assert log_quotient(nu, none_left, P)[0] == math.inf
    assert math.isnan(log_quotient(nu, np.array([[0.0, 0.3, 0.0, 0.6, 0.1]]), P)[0])


def test_a_reaction_without_enthalpy_has_no_equilibrium_temperature() -> None:
    # Hydrogen from one isotope to the other: as near to no enthalpy as the library has.
    exchange = read("H2 + D2 = 2 HD")
    T = np.array([800.0])
    found, flat = equilibrium_temperature(exchange.constant, exchange.constant.log_K(T), T)
    assert flat[0]
    assert math.isnan(found[0])


def test_quotients_that_no_temperature_meets() -> None:
    T = np.array([1000.0, 1000.0])
    found, flat = equilibrium_temperature(read(SHIFT).constant, np.array([-50.0, np.inf]), T)
    assert np.isnan(found).all()
    assert not flat.any()


def test_a_given_constant_follows_van_t_hoff() -> None:
    slope, level = -26830.0, 30.114  # K = exp(30.114 − 26830 K/T), after Xu & Froment (1989)
    T = np.array([900.0, 1000.0, 1150.0])
    given = GivenConstant(T, level + slope / T)
    asked = np.array([800.0, 950.0, 1300.0])
    assert given.log_K(asked) == pytest.approx(level + slope / asked, rel=1e-12)
    assert given.enthalpy(asked) == pytest.approx(-GAS_CONSTANT * slope, rel=1e-9)
    found, _ = equilibrium_temperature(given, level + slope / asked, asked)
    assert found == pytest.approx(asked, rel=1e-10)
    assert np.isnan(given.u_log_K(asked)).all()


def test_u_of_the_data_adds_the_records_in_quadrature() -> None:
    constant = read(SHIFT).constant
    T = np.array([700.0])
    steps = []
    from gibbsmin.thermo.uncertainty import record_uncertainties

    library = load_library()
    known = record_uncertainties([library[name] for name in records("CO H2O CO2 H2")])
    for of_H, of_S in zip(known.enthalpy, known.entropy, strict=True):
        steps += [of_H / (GAS_CONSTANT * 700.0), of_S / GAS_CONSTANT]
    assert constant.u_log_K(T)[0] == pytest.approx(math.hypot(*steps), rel=1e-12)


def test_extreme_of_a_linear_function_is_the_normal_limit() -> None:
    slope = np.array([1.0, -2.0, 0.5])
    root = np.array([[1.0, 0.0, 0.0], [0.3, 0.8, 0.0], [-0.2, 0.1, 0.5]])
    covariance = (root @ root.T)[np.newaxis]
    centre = np.array([[1.0, 2.0, 3.0]])
    found = extreme(
        lambda x: (x @ slope, np.broadcast_to(slope, x.shape)),
        centre,
        covariance,
        np.array([ONE_SIDED]),
        np.array([1.0]),
        centre,
        np.full((1, 3), -np.inf),
    )
    u = math.sqrt(slope @ covariance[0] @ slope)
    assert found[0] == pytest.approx(float(centre[0] @ slope) + 1.6448536 * u, rel=1e-7)
