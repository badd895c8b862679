from __future__ import annotations

import numpy as np
import pytest
from minimise.problems import PROBLEMS, TEN_SPECIES, build

from gibbsmin.minimise import minimise
from gibbsmin.minimise.conic import Start
from gibbsmin.minimise.newton import Reduced, _equations, solve_gas
from gibbsmin.minimise.phases import polish

NO_PHASES = np.array([], dtype=np.int64)


def reduced(name: str) -> Reduced:
    programme = PROBLEMS[name]
    return Reduced(programme.matrix, programme.supplies[0], programme.energies[0], programme.gas)


@pytest.mark.parametrize("supplies", [[0.3, 0.0], [-0.2, 1.5]])
def test_jacobian_is_the_derivative(supplies: list[float]) -> None:
    nu = np.array([[1.0, 0.0, 2.0, -1.0], [0.0, 1.0, -1.0, 0.5]])
    reduced_energies = np.array([0.0, 0.0, 1.0, 3.0])

    def equations(unknowns: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        log_y = unknowns[:-1] @ nu - reduced_energies
        return _equations(nu, np.array(supplies), log_y, log_y + unknowns[-1])

    at = np.array([-0.7, -1.3, 0.4])
    _, jacobian = equations(at)
    for k in range(3):
        step = 1e-6 * np.eye(3)[k]
        central = (equations(at + step)[0] - equations(at - step)[0]) / 2e-6
        np.testing.assert_allclose(jacobian[:, k], central, atol=1e-9)


@pytest.mark.parametrize("seed", range(10))
def test_gas_is_found_from_poor_potentials(seed: int) -> None:
    """Potentials off by some tens of RT in each element."""
    state = reduced("ten species")
    best = minimise(PROBLEMS["ten species"])
    off = best.multipliers[0] + np.random.default_rng(seed).normal(size=3) * 10
    point = solve_gas(state, NO_PHASES, off, 3.0)
    assert point is not None
    assert point.converged
    np.testing.assert_allclose(point.amounts, best.amounts[0], rtol=1e-11)
    np.testing.assert_allclose(point.multipliers, best.multipliers[0], rtol=1e-12)


@pytest.mark.parametrize("present", [True, False])
def test_active_set_is_repaired_whatever_phases_the_start_names(present: bool) -> None:
    for name in ("reformer", "reformer over carbon"):
        state = reduced(name)
        best = minimise(PROBLEMS[name])
        amounts = np.ones(7)
        amounts[6] = float(present)
        answers = polish(state, Start(amounts, np.array([0.0, -0.5, -0.5, -24.0])))
        np.testing.assert_allclose(next(answers)[0], best.amounts[0], rtol=1e-10)


def test_phases_that_leave_the_gas_no_room_have_no_answer() -> None:
    programme = build(TEN_SPECIES | {"H2O(s)": -40.0, "N2(s)": -30.0, "O2(s)": -30.0}, {"N2(g)": 1})
    state = Reduced(programme.matrix, np.ones(3), programme.energies[0], programme.gas)
    assert solve_gas(state, np.array([10, 11, 12]), np.zeros(3), 0.0) is None
