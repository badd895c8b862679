from __future__ import annotations

import numpy as np

from gibbsmin.minimise.closure import close_balance


def test_row_of_traces_closes_to_its_own_size() -> None:
    matrix = np.array([[1.0, 3.0, 0.0], [0.0, 1.0, 1.0]])
    exact = np.array([40.0, 1e-9, 2e-9])
    off = exact * (1.0 + np.array([1e-15, 3e-9, -1e-9]))
    closed = close_balance(matrix, matrix @ exact, off)
    np.testing.assert_allclose(matrix @ closed, matrix @ exact, rtol=1e-15)
    np.testing.assert_allclose(closed, off, rtol=1e-8)


def test_rows_that_nearly_coincide_do_not_chase_round_off() -> None:
    """The second species is known only to 1e-16/1e-9 from the difference of two rows."""
    matrix = np.array([[1.0, 1.0], [1.0, 2.0]])
    amounts = np.array([1.0, 1e-9])
    supplies = matrix @ amounts + np.array([0.0, 2e-16])
    closed = close_balance(matrix, supplies, amounts)
    np.testing.assert_allclose(closed, amounts, rtol=1e-13)


def test_zero_amounts_stay_zero() -> None:
    closed = close_balance(np.eye(2), np.array([1.0, 0.0]), np.array([0.9, 0.0]))
    np.testing.assert_array_equal(closed, [1.0, 0.0])
