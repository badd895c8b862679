"""Optimality checked from the answer alone, by other means than the package's certificate."""

from __future__ import annotations

import numpy as np
from scipy.optimize import linprog
from scipy.special import logsumexp

from gibbsmin.minimise import Programme, Solution


def assert_optimal(programme: Programme, solution: Solution) -> None:
    """The Karush-Kuhn-Tucker conditions of every state, on the face that the answer claims."""
    A, gas = programme.matrix, programme.gas
    for state in range(programme.states):
        n, b = solution.amounts[state], programme.supplies[state]
        energies = programme.energies[state]
        prices = np.nan_to_num(solution.multipliers[state]) @ A
        face = solution.certificate.driving_forces[state] > -np.inf
        forces = prices - energies
        rounding = 1e-12 * (1.0 + np.abs(energies[face]).max(initial=0.0))

        assert (n >= 0).all()
        assert (n[~face] == 0).all()
        size = np.abs(A) @ n + np.abs(b)
        assert (np.abs(A @ n - b) <= 1e-12 * size).all()
        # Dual feasibility.
        assert (forces[face & ~gas] <= rounding).all()
        if (face & gas).any():
            assert logsumexp(forces[face & gas]) <= rounding
        # Each species present is at the potential of its elements.
        present = face & ~gas & (n > 0)
        np.testing.assert_allclose(forces[present], 0.0, atol=1e-10)
        total = n[gas].sum()
        if total > 0:
            fractions = np.where(gas & face, n / total, 1.0)
            told = fractions >= 1e-300
            expected = np.where(gas & face & told, forces, 0.0)
            np.testing.assert_allclose(np.log(np.where(told, fractions, 1.0)), expected, atol=1e-10)
            assert (forces[gas & face & ~told] < np.log(1e-299)).all()
        _assert_face(A, b, face)


def _assert_face(A: np.ndarray, b: np.ndarray, face: np.ndarray) -> None:
    """Species outside the face are zero at every feasible point (by linear programming)."""
    for species in np.flatnonzero(~face):
        scale = np.abs(b).max()
        if scale == 0:
            continue
        cost = np.zeros(face.size)
        cost[species] = -1.0
        found = linprog(cost, A_eq=A, b_eq=b / scale, bounds=(0, None))
        assert found.status == 0
        assert -found.fun <= 1e-7
