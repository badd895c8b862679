"""Closure on the balance against a general solver, a quadratic programme and its own identities."""

from __future__ import annotations

from typing import Any

import cvxpy
import numpy as np
import numpy.typing as npt
import pytest
import scipy.optimize
from hypothesis import given, settings
from hypothesis import strategies as st
from sample_cases import analysis, reformer_plan, reformer_samples

from gibbsmin.sample.bounds import bounded
from gibbsmin.sample.reconciliation import Equations, Reconciliation, reconcile

FloatArray = npt.NDArray[np.float64]
SAMPLES = reformer_samples(40)
NOISY = SAMPLES.noisy(1)


def closed() -> Reconciliation:
    return reconcile(SAMPLES.plan.closure, NOISY.values, NOISY.uncertainties)


def general_solution(equations: Equations, values: FloatArray, u: FloatArray) -> Any:
    """scipy's trust-region least squares over the null space of the balances."""
    _, sizes, vectors = np.linalg.svd(equations.matrix)
    Z = vectors[np.count_nonzero(sizes > 1e-10) :].T
    point = np.linalg.lstsq(equations.matrix, equations.constants, rcond=None)[0]

    def residuals(v: FloatArray) -> FloatArray:
        x = point + Z @ v
        return ((equations.above @ x) / (equations.below @ x) - values) / u

    truth = np.linalg.lstsq(Z, SAMPLES_START - point, rcond=None)[0]
    found = scipy.optimize.least_squares(
        residuals, truth, xtol=1e-15, ftol=1e-15, gtol=1e-15, x_scale="jac"
    )
    return point + Z @ found.x, 2.0 * found.cost


SAMPLES_START = reconcile(SAMPLES.plan.closure, SAMPLES.truth[:1], SAMPLES.u[:1]).unknowns[0]


def test_every_sample_equals_a_general_least_squares_solution() -> None:
    found = closed()
    assert not found.bounded.any()
    n = SAMPLES.plan.outlet_count
    for state in range(40):
        x, chi_square = general_solution(
            SAMPLES.plan.closure, NOISY.values[state], NOISY.uncertainties[state]
        )
        assert found.unknowns[state, :n] == pytest.approx(x[:n], rel=1e-7, abs=1e-9)
        assert found.chi_square[state] == pytest.approx(chi_square, rel=1e-9)


def test_true_readings_are_left_as_they_are() -> None:
    found = reconcile(SAMPLES.plan.closure, SAMPLES.truth, SAMPLES.u)
    n = SAMPLES.plan.outlet_count
    assert np.abs(found.unknowns[:, :n] - SAMPLES.wet).max() < 1e-11
    assert found.chi_square.max() < 1e-18
    assert set(found.degrees_of_freedom.tolist()) == {3}
    assert found.determined.all()
    assert found.solved.all()


def test_leaving_a_measurement_out_lowers_chi_square_by_its_adjustment_squared() -> None:
    found = closed()
    for column in range(5):
        values = NOISY.values.copy()
        values[:, column] = np.nan
        without = reconcile(SAMPLES.plan.closure, values, NOISY.uncertainties)
        fall = found.chi_square - without.chi_square
        assert fall == pytest.approx(found.adjustments[:, column] ** 2, rel=1e-5, abs=1e-7)
        assert (without.degrees_of_freedom == 2).all()


def test_flows_cannot_be_judged_while_water_is_not_measured() -> None:
    found = closed()
    assert found.can_be_judged[:, :5].all()
    assert not found.can_be_judged[:, 5:].any()
    assert np.isnan(found.adjustments[:, 5:]).all()
    # CO and CO2 leave the same residual: moving carbon between them moves only water.
    assert np.abs(found.correlation[:, 1, 2]).min() > 0.995


def test_redundancies_add_up_to_the_degrees_of_freedom() -> None:
    found = closed()
    assert found.redundancy.sum(axis=1) == pytest.approx(found.degrees_of_freedom, rel=1e-9)


def test_a_normalised_analysis_has_a_degree_of_freedom_less() -> None:
    plan = reformer_plan(analysis(normalised=True))
    values = SAMPLES.truth.copy()
    values[:, :5] *= 0.97
    values[:, :5] /= values[:, :5].sum(axis=1, keepdims=True)
    found = reconcile(plan.closure, values, SAMPLES.u)
    assert set(found.degrees_of_freedom.tolist()) == {2}
    assert found.chi_square.max() < 1e-18


def test_what_nothing_determines_is_told() -> None:
    names = [record.name for record in SAMPLES.plan.species]

    def loose(values: FloatArray) -> list[str]:
        known = reconcile(SAMPLES.plan.closure, values, SAMPLES.u[:1]).determined[0].tolist()
        return [name for name, is_known in zip(names, known, strict=False) if not is_known]

    assert loose(SAMPLES.truth[:1]) == []
    # Without the ratio of the flows only what steam was used up is known, not what is left.
    without_flow = SAMPLES.truth[:1].copy()
    without_flow[:, 5] = np.nan
    assert loose(without_flow) == ["H2O(g)"]


@settings(max_examples=40, deadline=None)
@given(st.integers(0, 10_000))
def test_bounds_give_what_a_quadratic_programme_gives(seed: int) -> None:
    random = np.random.default_rng(seed)
    E = random.integers(0, 3, (2, 6)).astype(float)
    E[0] += 0.5  # bounds the set
    e = E @ random.uniform(0.0, 1.0, 6)
    C, d = random.standard_normal((1, 5, 6)), random.standard_normal((1, 5))
    x = bounded(E, e, C, d, np.zeros((1, 6)))[0]
    cp: Any = cvxpy
    unknown = cp.Variable(6)
    problem = cp.Problem(
        cp.Minimize(cp.sum_squares(C[0] @ unknown - d[0])), [E @ unknown == e, unknown >= 0]
    )
    problem.solve(solver=cp.CLARABEL, tol_gap_abs=1e-12, tol_gap_rel=1e-12, tol_feas=1e-12)
    assert x.min() >= 0.0
    assert E @ x == pytest.approx(e, abs=1e-8)
    assert ((C[0] @ x - d[0]) ** 2).sum() == pytest.approx(problem.value, rel=1e-6, abs=1e-8)


def test_a_bound_holds_and_costs_chi_square() -> None:
    values = SAMPLES.truth.copy()
    values[:, 3] = -0.002
    found = reconcile(SAMPLES.plan.closure, values, SAMPLES.u)
    assert found.unknowns.min() >= 0.0
    assert found.bounded.any()
    assert (found.chi_square >= found.free_chi_square - 1e-9).all()
    assert (found.unknowns[found.bounded][:, 3] == 0.0).all()
