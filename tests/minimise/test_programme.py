from __future__ import annotations

from typing import Any

import numpy as np
import pytest

from gibbsmin.errors import InputError
from gibbsmin.minimise import Programme


def arrays(**changed: Any) -> dict[str, Any]:
    """Hydrogen and oxygen into H2, O2 and H2O, two states."""
    good = {
        "matrix": [[2, 0, 2], [0, 2, 1]],
        "supplies": [[2.0, 1.0], [4.0, 1.0]],
        "energies": [[0.0, 0.0, -90.0], [0.0, 0.0, -60.0]],
        "gas": [True, True, True],
        "direction": [1.0, 1.0],
        "atoms": [2.0, 2.0, 3.0],
    }
    return good | changed


def test_array_likes_become_double_precision() -> None:
    programme = Programme(**arrays())
    assert programme.matrix.dtype == np.float64
    assert programme.gas.dtype == np.bool_
    assert programme.states == 2


def test_arrays_that_fit_are_not_copied() -> None:
    energies = np.zeros((2, 3))
    assert Programme(**arrays(energies=energies)).energies is energies


def test_subset_takes_consecutive_states() -> None:
    part = Programme(**arrays()).subset(1)
    assert part.states == 1
    np.testing.assert_array_equal(part.supplies, [[4.0, 1.0]])
    np.testing.assert_array_equal(part.energies, [[0.0, 0.0, -60.0]])


def test_values_that_are_not_finite_are_left_to_their_state() -> None:
    assert Programme(**arrays(supplies=[[np.nan, 1.0], [4.0, 1.0]])).states == 2


@pytest.mark.parametrize(
    ("changed", "message"),
    [
        (
            {"matrix": [1.0, 2.0]},
            "programme.matrix: found an array of shape (2,); "
            "accepted is (rows, species), each at least 1.",
        ),
        (
            {"matrix": np.zeros((0, 3))},
            "programme.matrix: found an array of shape (0, 3); "
            "accepted is (rows, species), each at least 1.",
        ),
        (
            {"matrix": [[2, 0, 2], [0, np.inf, 1]]},
            "programme.matrix: found an entry that is not finite; accepted are finite numbers.",
        ),
        (
            {"supplies": [2.0, 1.0]},
            "programme.supplies: found an array of shape (2,); "
            "accepted is (states, 2) beside a matrix of shape (2, 3).",
        ),
        (
            {"supplies": [[2.0], [4.0]]},
            "programme.supplies: found an array of shape (2, 1); "
            "accepted is (2, 2) beside a matrix of shape (2, 3).",
        ),
        (
            {"energies": [[0.0, 0.0, -90.0]]},
            "programme.energies: found an array of shape (1, 3); "
            "accepted is (2, 3) beside a matrix of shape (2, 3).",
        ),
        (
            {"gas": [True]},
            "programme.gas: found an array of shape (1,); "
            "accepted is (3,) beside a matrix of shape (2, 3).",
        ),
        (
            {"direction": 1.0},
            "programme.direction: found an array of shape (1,); "
            "accepted is (2,) beside a matrix of shape (2, 3).",
        ),
        (
            {"direction": [1.0, 0.0]},
            "programme.direction: found 0 for the species in column 1; "
            "accepted is a direction d with Aᵀd ≥ 1 for every species.",
        ),
        (
            {"direction": [1.0, np.nan]},
            "programme.direction: found nan for the species in column 0; "
            "accepted is a direction d with Aᵀd ≥ 1 for every species.",
        ),
        (
            {"atoms": [2.0, -2.0, 3.0]},
            "programme.atoms: found a count that is negative or not finite; "
            "accepted are atoms in one mole of each species, 0 or more.",
        ),
        (
            {"energies": [["a", 0.0, 0.0], [0.0, 0.0, 0.0]]},
            "programme.energies: found something that is no array of numbers; "
            "accepted is an array of numbers.",
        ),
    ],
)
def test_wrong_arrays_get_one_clear_sentence(changed: dict[str, Any], message: str) -> None:
    with pytest.raises(InputError) as caught:
        Programme(**arrays(**changed))
    assert str(caught.value) == message
