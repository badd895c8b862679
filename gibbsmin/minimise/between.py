"""Bounds on a potential over all supplies on a straight line between two solved ones.

With λ₁ at b₁ and λ₂ at b₂ at the same energies, the multipliers λ at any b between are dual
feasible, and by the optimality of λ₁ at b₁, of λ₂ at b₂ and of λ at b

    b₂·(λ − λ₁) ≥ 0    and    b₁·(λ − λ₂) ≥ 0.

The largest a·λ over that convex set is by duality the least of

    G(a + ν₁ b₂ + ν₂ b₁) − ν₁ b₂·λ₁ − ν₂ b₁·λ₂    over ν₁, ν₂ ≥ 0,

G(b) the least Gibbs energy at supplies b.  Any weights and any amounts that meet those supplies
bound it from above, so that a table of weights, solved as one batch, proves what it proves.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.minimise.dispatch import minimise
from gibbsmin.minimise.programme import Programme

_WEIGHTS = np.geomspace(0.1, 2.0, 7)
"""Weights times the distance of b₁ from b₂, both of length 1: the best stay near one half."""

_SHARES = np.array([0.0, 0.5, 1.0])
"""How much of a weight is on b₂; the best favour one end."""

_LEAST_DISTANCE = 1e-9
_TOGETHER = 1_000
"""Intervals in memory at a time."""


@dataclass(frozen=True, slots=True, eq=False)
class Interval:
    """I intervals of supplies, each at energies of its own that do not change within it.

    Parameters
    ----------
    energies
        g̃, shape (I, species).
    supplies
        b₁ and b₂, shape (2, I, rows).
    multipliers
        λ₁ and λ₂, shape (2, I, rows); NaN where unknown, of which nothing is proved.
    """

    energies: FloatArray
    supplies: FloatArray
    multipliers: FloatArray

    def part(self, chosen: slice) -> Interval:
        """Some of the intervals."""
        return Interval(
            self.energies[chosen], self.supplies[:, chosen], self.multipliers[:, chosen]
        )


def largest_between(programme: Programme, intervals: Interval, column: FloatArray) -> FloatArray:
    """An upper bound on a·(λ − λ₁) over each interval, shape (I,), in RT.

    Infinite where none is found.  A lower bound is the negative of that for −a.

    Parameters
    ----------
    programme
        One whose matrix, gas, direction and atoms hold for the intervals.
    intervals
        Both ends of each.
    column
        a of each interval, shape (I, rows): element counts of what is bounded.
    """
    count = len(intervals.energies)
    parts = [slice(k, k + _TOGETHER) for k in range(0, count, _TOGETHER)]
    bounds = [_bound(programme, intervals.part(part), column[part]) for part in parts]
    return np.concatenate([np.zeros(0), *bounds])


def _bound(programme: Programme, intervals: Interval, column: FloatArray) -> FloatArray:
    """In terms of d = λ − λ₁, so that short intervals lose no digits.

    The energies are then what λ₁ leaves of them, and the bound is their least sum less
    ν₂ b₁·(λ₂ − λ₁).
    """
    matrix, gas = programme.matrix, programme.gas
    one, two = (b / np.linalg.norm(b, axis=1, keepdims=True) for b in intervals.supplies)
    apart = np.fmax(np.linalg.norm(two - one, axis=1), _LEAST_DISTANCE)
    left = intervals.energies - intervals.multipliers[0] @ matrix
    moved = np.sum(one * (intervals.multipliers[1] - intervals.multipliers[0]), axis=1)
    weight, share = (each.ravel() for each in np.meshgrid(_WEIGHTS, _SHARES))
    on_two, on_one = (np.outer(w, 1.0 / apart) for w in (weight * share, weight * (1.0 - share)))
    supplies = column + on_two[..., np.newaxis] * two + on_one[..., np.newaxis] * one
    energies = np.broadcast_to(left, (weight.size, *left.shape))
    trials = Programme(
        matrix=matrix,
        supplies=supplies.reshape(-1, matrix.shape[0]),
        energies=energies.reshape(-1, matrix.shape[1]),
        gas=gas,
        direction=programme.direction,
        atoms=programme.atoms,
    )
    amounts = minimise(trials).amounts.reshape(energies.shape)
    bounds = _gibbs_energy(amounts, energies, gas) - on_one * moved
    return np.asarray(np.where(np.isnan(bounds), np.inf, bounds).min(axis=0))


def _gibbs_energy(amounts: FloatArray, energies: FloatArray, gas: np.ndarray) -> FloatArray:
    """Σ n g̃ + Σ_gas n ln(n/N), term by term."""
    in_gas = amounts * gas
    total = np.sum(in_gas, axis=-1, keepdims=True)
    with np.errstate(divide="ignore", invalid="ignore"):
        mixing = np.where(in_gas > 0.0, in_gas * np.log(in_gas / total), 0.0 * in_gas)
    return np.asarray(np.sum(amounts * energies + mixing, axis=-1))
