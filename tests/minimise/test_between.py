"""Bounds between two supplies: no state between breaks them, and they are nearly the best."""

from __future__ import annotations

from dataclasses import replace

import cvxpy as cp
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from minimise.problems import PROBLEMS

from gibbsmin.arrays import FloatArray
from gibbsmin.minimise import Interval, Programme, Solution, largest_between, minimise

REFORMER = PROBLEMS["reformer"]
CARBON = np.array([1.0, 0.0, 0.0, 0.0])  # rows C, H, N, O
WITHOUT_CARBON = np.r_[REFORMER.energies[0, :-1], 50.0]


def solved(supplies: FloatArray) -> tuple[Programme, Solution]:
    """States of a reformer, carbon kept out by an energy."""
    programme = replace(
        REFORMER, supplies=supplies, energies=np.tile(WITHOUT_CARBON, (len(supplies), 1))
    )
    solution = minimise(programme)
    assert solution.certified.all()
    return programme, solution


def bounds(one: FloatArray, two: FloatArray) -> tuple[float, float, FloatArray]:
    """Least and largest a·λ of carbon between two supplies, and its λ at both."""
    programme, solution = solved(np.stack([one, two]))
    interval = Interval(
        WITHOUT_CARBON[np.newaxis],
        programme.supplies[:, np.newaxis],
        solution.multipliers[:, np.newaxis],
    )
    first = float(solution.multipliers[0] @ CARBON)
    low = first - float(largest_between(programme, interval, -CARBON[np.newaxis])[0])
    high = first + float(largest_between(programme, interval, CARBON[np.newaxis])[0])
    return low, high, solution.multipliers


def supplies(steam: float) -> FloatArray:
    """C, H, N, O of one CH4, some steam and N2."""
    return np.array([1.0, 4.0 + 2.0 * steam, 0.2, steam])


@settings(deadline=None)  # the first example may load the compiled form
@given(st.floats(0.2, 6.0), st.floats(1e-4, 2.0))
def test_no_state_between_breaks_the_bounds(steam: float, width: float) -> None:
    one, two = supplies(steam), supplies(steam * (1.0 + width))
    low, high, _ = bounds(one, two)
    shares = np.linspace(0.0, 1.0, 33)[:, np.newaxis]
    potential = solved((1.0 - shares) * one + shares * two)[1].multipliers @ CARBON
    assert low <= potential.min() + 1e-9
    assert high >= potential.max() - 1e-9
    assert np.isfinite([low, high]).all()


def test_the_bounds_close_in_on_the_ends_as_the_interval_shrinks() -> None:
    """The room they leave falls with the width, down to intervals a millionth wide."""
    room = []
    for width in (1e-1, 1e-2, 1e-3, 1e-4, 1e-5, 1e-6):
        low, high, multipliers = bounds(supplies(1.5), supplies(1.5 * (1.0 + width)))
        ends = multipliers @ CARBON
        room.append(max(high - ends.max(), ends.min() - low))
    assert np.all(np.array(room[1:]) < 0.15 * np.array(room[:-1]))


@pytest.mark.parametrize("sign", [1.0, -1.0])
def test_the_bounds_lie_little_beyond_the_convex_programme_s_optimum(sign: float) -> None:
    """The same set given to a cone solver, whose optimum no bound may undercut."""
    one, two = supplies(1.5), supplies(1.6)
    low, high, (first, second) = bounds(one, two)
    potentials = cp.Variable(4)
    A, gas = REFORMER.matrix, REFORMER.gas
    problem = cp.Problem(
        cp.Maximize(sign * (CARBON @ potentials)),
        [
            cp.log_sum_exp(A[:, gas].T @ potentials - WITHOUT_CARBON[gas]) <= 0,
            A[:, ~gas].T @ potentials <= WITHOUT_CARBON[~gas],
            two @ (potentials - first) >= 0,
            one @ (potentials - second) >= 0,
        ],
    )
    problem.solve(solver=cp.CLARABEL)
    assert problem.status == cp.OPTIMAL
    best = float(problem.value)
    bound = high if sign > 0 else -low
    width = abs(float(CARBON @ (first - second)))
    assert best - 1e-7 <= bound <= best + 0.3 * width


def test_an_end_without_potentials_proves_nothing() -> None:
    programme, _ = solved(np.stack([supplies(1.0), supplies(2.0)]))
    unknown = np.full((2, 1, 4), np.nan)
    interval = Interval(WITHOUT_CARBON[np.newaxis], programme.supplies[:, np.newaxis], unknown)
    assert largest_between(programme, interval, CARBON[np.newaxis]).tolist() == [np.inf]
    nothing = interval.part(slice(0, 0))
    assert largest_between(programme, nothing, np.zeros((0, 4))).size == 0
