from __future__ import annotations

import numpy as np
import pytest
from scipy.optimize import linprog

from gibbsmin.minimise.faces import find_face

CARBON_OXIDES = np.array([[1.0, 1.0], [1.0, 2.0]])
"""Rows C and O of CO and CO2."""


@pytest.mark.parametrize("seed", range(60))
def test_face_agrees_with_linear_programmes(seed: int) -> None:
    """Whole-number supplies with many zeros, mixed signs and dependent rows."""
    random = np.random.default_rng(seed)
    rows, species = random.integers(1, 6), random.integers(1, 10)
    matrix = random.integers(-1, 4, (rows, species)) * (random.random((rows, species)) < 0.5)
    matrix = np.vstack([matrix, matrix.sum(axis=0)]).astype(np.float64)
    feed = random.integers(0, 3, species) * (random.random(species) < 0.4)
    face = find_face(matrix, matrix @ feed)
    assert face is not None
    for column in range(species):
        cost = -np.eye(species)[column]
        largest = linprog(cost, A_eq=matrix, b_eq=matrix @ feed, bounds=(0, 1e3))
        assert face.species[column] == (-largest.fun > 1e-6)
    kept = matrix[:, face.species]
    assert face.rows.size == np.linalg.matrix_rank(kept) == np.linalg.matrix_rank(kept[face.rows])
    np.testing.assert_array_equal(face.empty, ~kept.any(axis=1))


@pytest.mark.parametrize("seed", range(30))
def test_infeasible_supplies_have_no_face(seed: int) -> None:
    """Supplies beyond a hyperplane that has every column on its other side (Farkas)."""
    random = np.random.default_rng(seed)
    matrix = random.integers(-2, 4, (4, 7)).astype(np.float64)
    normal = random.normal(size=4)
    matrix *= np.where(normal @ matrix < 0, -1.0, 1.0)
    supplies = matrix @ random.random(7)
    supplies -= normal * (normal @ supplies + 0.01) / (normal @ normal)
    assert find_face(matrix, supplies) is None


@pytest.mark.parametrize("sign", [1.0, -1.0])
def test_zero_supply_removes_its_species_for_rows_of_either_sign(sign: float) -> None:
    face = find_face(np.array([[1.0, 1.0, 0.0], [0.0, sign, sign]]), np.array([1.0, 0.0]))
    assert face is not None
    np.testing.assert_array_equal(face.species, [True, False, False])
    np.testing.assert_array_equal(face.empty, [False, True])


def test_reduction_goes_on_through_rows_that_become_one_signed() -> None:
    """n1 = 0 by the first row, then n2 = n1 = 0 by the second."""
    face = find_face(np.array([[0.0, 1, 0], [0, 1, -1], [1, 1, 1]]), np.array([0.0, 0, 2]))
    assert face is not None
    np.testing.assert_array_equal(face.species, [True, False, False])


def test_combination_of_rows_at_zero_removes_species() -> None:
    face = find_face(CARBON_OXIDES, np.array([1.0, 1.0]))
    assert face is not None
    np.testing.assert_array_equal(face.species, [True, False])


@pytest.mark.parametrize("excess", [1e-11, 1e-6, 1e-2])
def test_a_small_excess_is_not_zero(excess: float) -> None:
    face = find_face(CARBON_OXIDES, np.array([1.0, 1.0 + excess]))
    assert face is not None
    assert face.species.all()


@pytest.mark.parametrize("scale", [1e-6, 1.0, 1e6])
def test_round_off_of_the_supplies_is_zero(scale: float) -> None:
    supplies = scale * np.array([0.1 + 0.2, 0.3])
    for order in (supplies, supplies[::-1]):
        face = find_face(CARBON_OXIDES, order)
        assert face is not None
        np.testing.assert_array_equal(face.species, [True, False])


def test_small_shortage_is_infeasible() -> None:
    assert find_face(CARBON_OXIDES, np.array([1.0, 1.0 - 1e-10])) is None


def test_restores_amounts_and_multipliers() -> None:
    matrix = np.array([[1.0, 0, 2], [0, 3, 1], [1, 0, 2]])
    face = find_face(matrix, np.array([1.0, 0.0, 1.0]))
    assert face is not None
    np.testing.assert_array_equal(face.reduced(matrix), [[1.0]])
    np.testing.assert_array_equal(face.restored_amounts(np.array([1.0])), [1.0, 0.0, 0.0])
    np.testing.assert_array_equal(face.restored_multipliers(np.array([5.0])), [5.0, np.nan, 0.0])
