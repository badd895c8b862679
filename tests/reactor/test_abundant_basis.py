"""The balance in terms of the most abundant records."""

from __future__ import annotations

import numpy as np
import pytest

from gibbsmin.reactor.abundant_basis import abundant_basis

# Columns CO2, CO, O2, N2; rows C, O, N.
MATRIX = np.array([[1.0, 1.0, 0.0, 0.0], [2.0, 1.0, 2.0, 0.0], [0.0, 0.0, 0.0, 2.0]])


def test_each_state_takes_its_heaviest_independent_columns() -> None:
    weights = np.array([[1.0, 1e-9, 1e-12, 5.0], [1e-9, 1.0, 3.0, 5.0]])
    basis = abundant_basis(MATRIX, np.zeros((3, 1)), weights)
    assert sorted(basis.columns[0]) == [0, 1, 3]
    assert sorted(basis.columns[1]) == [1, 2, 3]


def test_reduced_matrix_is_that_of_the_basis() -> None:
    weights = np.array([[1.0, 1e-9, 1e-12, 5.0]])
    basis = abundant_basis(MATRIX, MATRIX[:, [2]], weights)
    B = MATRIX[:, basis.columns[0]]
    assert basis.matrix[0] == pytest.approx(np.linalg.solve(B, MATRIX), abs=1e-14)
    assert basis.directions[0] == pytest.approx(np.linalg.solve(B, MATRIX[:, [2]]), abs=1e-14)
    row = list(basis.columns[0]).index(0)
    assert basis.matrix[0, row] == pytest.approx([1.0, 0.0, 2.0, 0.0])


def test_a_row_that_nothing_present_fills_is_left_open() -> None:
    basis = abundant_basis(MATRIX, np.zeros((3, 0)), np.array([[1.0, 0.5, 0.2, 0.0]]))
    assert sorted(basis.columns[0]) == [-1, 0, 1]


def test_dependent_rows_are_left_open() -> None:
    matrix = np.vstack([MATRIX, MATRIX[0] + MATRIX[1]])
    basis = abundant_basis(matrix, np.zeros((4, 0)), np.ones((1, 4)))
    assert np.count_nonzero(basis.columns[0] < 0) == 1
