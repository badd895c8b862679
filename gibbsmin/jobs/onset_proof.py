"""Whether all crossings of a phase along an axis of the feed are found.

Along an axis that moves the supplies b on a straight line, at constant g̃, the multipliers λ at any
b between b₁ and b₂ are dual feasible without the phase and meet b₂·(λ − λ₁) ≥ 0 and
b₁·(λ − λ₂) ≥ 0: by the optimality of λ₁ at b₁, and of λ at b, each sum is the larger.  Over this
convex set the largest a·λ − g̃ of the phase, if below zero, or the smallest, if above, proves the
interval free of crossings; otherwise it is halved.
"""

from __future__ import annotations

import warnings
from dataclasses import dataclass
from typing import Any

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.crossings import Crossings
from gibbsmin.jobs.search import Path, driving_force

_ABOUT = 1e-3
"""Share of the axis about a crossing that is not examined for further ones."""

_LEVELS = 9
_CLEAR = 1e-7
"""How far from zero a bound must stay, in RT: what the conic solver may be wrong by."""


@dataclass(frozen=True)
class Completeness:
    """What is known of further crossings in one row.

    Attributes
    ----------
    proved : whether there are no others, but for 0.1 % of the axis about each
    intervals : how many intervals that took
    text : a sentence for people
    """

    proved: bool
    intervals: int
    text: str


def completeness(
    kept_out: Case, path: Path, phase: str, found: Crossings
) -> tuple[Completeness, ...]:
    """The statement for each row, from a case with the phase kept out."""
    grid = path.grid
    if not _is_straight(path):
        text = f"Complete to the grid used: {grid.size} values of {path.axis.name}."
        return tuple(Completeness(False, 0, text) for _ in range(path.rows))
    return tuple(
        _proved(kept_out, path, phase, row, found.position[found.row == row])
        for row in range(path.rows)
    )


def _is_straight(path: Path) -> bool:
    """Whether the axis moves the supplies of a stage of fixed temperature and pressure alone.

    In a real gas it moves the energies as well, by way of the fugacity coefficients.
    """
    specification = path.stage.specification
    of_feed = bool(path.axis.scale) or ".amounts." in path.axis.name
    return (
        of_feed
        and path.stage.chemistry.equation is None
        and specification.temperature is not None
        and specification.pressure is not None
        and path.stage.key in ("outlet", "stage.0")
    )


def _proved(
    kept_out: Case, path: Path, phase: str, row: int, crossings: FloatArray
) -> Completeness:
    grid = path.grid
    about = _ABOUT * (grid[-1] - grid[0])
    ends = np.unique(
        np.concatenate([grid, *(crossings + d for d in (-about, about)), grid[[0, -1]]])
    )
    ends = ends[(ends >= grid[0]) & (ends <= grid[-1])]
    near = np.abs(ends[:, np.newaxis] - crossings) < about * (1.0 - 1e-9)
    ends = ends[~near.any(axis=1)]
    pairs = [
        (a, b)
        for a, b in zip(ends[:-1].tolist(), ends[1:].tolist(), strict=True)
        if not ((crossings > a) & (crossings < b)).any()
    ]
    examined = 0
    for _ in range(_LEVELS):
        bound = _Bound(kept_out, path, phase, row, sorted({end for pair in pairs for end in pair}))
        examined += len(pairs)
        open_pairs = [pair for pair in pairs if not bound.is_free(*pair)]
        if not open_pairs:
            text = (
                "Proved: no other crossing between the ends of the axis, but for 0.1 % of it "
                "about each."
            )
            return Completeness(True, examined, text)
        pairs = [half for a, b in open_pairs for half in ((a, (a + b) / 2.0), ((a + b) / 2.0, b))]
    shown = path.shown(np.array([pairs[0][0], pairs[-1][1]]))
    text = (
        f"Not proved between {shown[0]:.6g} and {shown[1]:.6g} {path.axis.unit}".rstrip()
        + f"; complete to the grid used: {grid.size} values."
    )
    return Completeness(False, examined, text)


def _cones() -> Any:
    """The modelling library, which takes a while to load."""
    import cvxpy

    return cvxpy


class _Bound:
    """Bounds on the driving force between positions of one row.

    With λ = λ₁ + d, the driving force is that at the first end + a·d.
    """

    def __init__(self, kept_out: Case, path: Path, phase: str, row: int, ends: list[float]) -> None:
        cp = _cones()
        position = np.array(ends)
        step = path.step(kept_out, position, np.full(position.size, row))
        model, found = step.states.model, step.states.equilibria
        programme = model.programme(found.temperature, found.pressure, step.states.inlet.amounts)
        self._place = {end: k for k, end in enumerate(ends)}
        self._force = driving_force(step, phase)
        self._multipliers = found.solution.multipliers
        self._supplies = programme.supplies
        self._energies = programme.energies
        self._matrix = programme.matrix
        column = [record.name for record in model.records].index(phase)
        gas = np.flatnonzero(programme.gas)
        others = np.setdiff1d(np.flatnonzero(~programme.gas), [column])

        A = programme.matrix
        change: Any = cp.Variable(A.shape[0])
        self._left = cp.Parameter(A.shape[1])
        self._ends = cp.Parameter((2, A.shape[0]))
        self._least = cp.Parameter(2)
        constraints = [
            cp.log_sum_exp(A[:, gas].T @ change - self._left[gas]) <= 0,
            self._ends @ change >= self._least,
        ]
        if others.size:
            constraints.append(A[:, others].T @ change <= self._left[others])
        moved = A[:, column] @ change
        self._largest = cp.Problem(cp.Maximize(moved), constraints)
        self._smallest = cp.Problem(cp.Minimize(moved), constraints)

    def is_free(self, a: float, b: float) -> bool:
        """Whether no crossing lies between two ends; False where the bounds do not tell."""
        cp = _cones()
        one, two = self._place[a], self._place[b]
        force = self._force[[one, two]]
        potentials = self._multipliers[[one, two]]
        if not (np.isfinite(force).all() and np.isfinite(potentials).all()):
            return False
        if force[0] * force[1] <= 0.0:
            return False
        b_one, b_two = (self._supplies[k] / np.linalg.norm(self._supplies[k]) for k in (one, two))
        self._left.value = self._energies[one] - potentials[0] @ self._matrix
        self._ends.value = np.stack([b_two, b_one])
        self._least.value = np.array([0.0, b_one @ (potentials[1] - potentials[0])])
        problem = self._largest if force[0] < 0.0 else self._smallest
        with warnings.catch_warnings():
            # An inaccurate solution has its own status, which proves nothing.
            warnings.simplefilter("ignore", UserWarning)
            try:
                problem.solve(solver=cp.CLARABEL)
            except cp.SolverError:
                return False
        if problem.status != cp.OPTIMAL:
            return False
        extreme = force[0] + float(problem.value)
        return bool(extreme < -_CLEAR if force[0] < 0.0 else extreme > _CLEAR)
