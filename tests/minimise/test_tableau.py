from __future__ import annotations

import numpy as np
import pytest
from scipy.optimize import linprog

from gibbsmin.minimise.tableau import (
    cheapest_vertex,
    feasible_vertex,
    independent_columns,
    subtract,
)


def test_subtraction_zeroes_round_off_and_keeps_what_is_small() -> None:
    left, right = np.array([0.1 + 0.2, 1.0 + 1e-10, 1e-20]), np.array([0.3, 1.0, 0.0])
    difference = subtract(left, right)
    assert difference[0] == 0.0
    assert difference[1] == pytest.approx(1e-10, rel=1e-5)
    assert difference[2] == 1e-20


@pytest.mark.parametrize("seed", range(30))
def test_vertex_solves_the_linear_programme(seed: int) -> None:
    random = np.random.default_rng(seed)
    matrix = random.integers(0, 4, (4, 9)) * (random.random((4, 9)) < 0.7)
    matrix = np.vstack([matrix, [2.0, -1.0, 0.0, 1.0] @ matrix])
    matrix = matrix[:, matrix.any(axis=0)].astype(np.float64)
    supplies = matrix @ (random.random(matrix.shape[1]) * (random.random(matrix.shape[1]) < 0.5))
    costs = random.normal(size=matrix.shape[1]) + random.normal(size=5) @ matrix
    vertex = feasible_vertex(matrix, supplies)
    assert vertex is not None
    assert vertex.basis.size == np.linalg.matrix_rank(matrix)
    expected = linprog(costs, A_eq=matrix, b_eq=supplies, bounds=(0, None))
    if expected.status == 3:
        pytest.fail("columns of at least one sign bound every cost")
    vertex = cheapest_vertex(vertex, costs)
    amounts = np.zeros(matrix.shape[1])
    amounts[vertex.basis] = vertex.values
    assert (amounts >= 0).all()
    np.testing.assert_allclose(matrix @ amounts, supplies, atol=1e-13)
    assert costs @ amounts == pytest.approx(expected.fun, abs=1e-9)
    np.testing.assert_allclose(matrix[:, vertex.basis] @ vertex.entries, matrix, atol=1e-12)


def test_independent_columns_keep_the_order() -> None:
    matrix = np.array([[1.0, 2.0, 0.0, 1.0], [0.0, 0.0, 3.0, 1.0]])
    np.testing.assert_array_equal(independent_columns(matrix, [1, 0, 3, 2]), [1, 3])
    np.testing.assert_array_equal(independent_columns(matrix, []), [])
