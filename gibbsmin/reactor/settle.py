"""Fixed points of a batch of states, by substitution with Anderson's acceleration.

Each state has a vector x that is to equal what its answer makes of it, x = G(x).  The residuals
F = G(x) − x of the last few rounds are combined to the least one, weighted by what matters in the
state, and the next x is that combination of the G (D. G. Anderson, J. ACM 12 (1965) 547).  A
state whose residual grows forgets its history and goes on in shorter steps.  States that have
settled drop out.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import FloatArray, IntArray

SETTLED = 5e-11
"""Largest residual of a settled state."""

_ROUNDS = 80
_DEPTH = 3
_GROWTH = 1.5
_RIDGE = 1e-13
_STRIDE = 5
_FEWEST = 64

Answer = Callable[[FloatArray, IntArray], tuple[FloatArray, FloatArray]]
"""Of x (k, K) and the indices (k,) of the states: G (k, K) and the weights (k, K)."""

History = list[tuple[FloatArray, FloatArray]]
"""Changes of x and of F between rounds, each (k, K); 0 where a state has none."""


@dataclass(frozen=True)
class Settled:
    """Where B states came to rest.

    Attributes
    ----------
    x : (B, K)
    error : (B,) the largest residual; NaN for no answer
    history : the first changes on the way, from which a neighbour may learn
    """

    x: FloatArray
    error: FloatArray
    history: History


def settle(answer: Answer, start: FloatArray, history: History | None = None) -> Settled:
    """Solve x = G(x) from ``start`` (B, K); what did not settle is told by its error.

    The last call for a state was with the x that is returned for it.
    """
    x_of_all = start.copy()
    error_of_all = np.full(len(start), np.nan)
    firsts: History = []
    history = history or []
    index = np.arange(len(start))
    x = start
    damping = np.ones(len(start))
    best = np.full(len(start), np.inf)
    last: tuple[FloatArray, FloatArray] | None = None
    for _ in range(_ROUNDS):
        result, weights = answer(x, index)
        residual = result - x
        error = np.abs(residual).max(axis=1, initial=0.0)
        x_of_all[index], error_of_all[index] = x, error
        if last is not None:
            change = (x - last[0], residual - last[1])
            history = [*history, change][-_DEPTH:]
            if len(firsts) < _DEPTH:
                firsts.append((np.zeros(start.shape), np.zeros(start.shape)))
                for whole, part in zip(firsts[-1], change, strict=True):
                    whole[index] = part
        keep = error > SETTLED
        if not keep.any():
            break
        index, x, residual, weights, error = (
            part[keep] for part in (index, x, residual, weights, error)
        )
        damping, best = damping[keep], best[keep]
        history = [(dx[keep], dF[keep]) for dx, dF in history]
        last = x, residual
        grown = error > _GROWTH * best
        damping = np.where(grown, damping / 2.0, damping)
        for dx, dF in history:
            dx[grown] = dF[grown] = 0.0
        best = np.minimum(best, error)
        x = x + _step(residual, weights, history, damping)
    return Settled(x_of_all, error_of_all, firsts)


def settle_along(answer: Answer, start: FloatArray) -> Settled:
    """The same for states of which neighbours are alike, as on a grid.

    Every fifth state is settled first; all start from what lies between these, and with what the
    nearest of them learned on its way.
    """
    states = len(start)
    if states < _FEWEST:
        return settle(answer, start)
    coarse = np.arange(0, states, _STRIDE)
    first = settle(lambda x, index: answer(x, coarse[index]), start[coarse])
    known = np.where((first.error <= SETTLED)[:, np.newaxis], first.x, start[coarse])
    below, steps = np.divmod(np.arange(states), _STRIDE)
    between = _interpolated(known, below, steps / _STRIDE)
    learned = [(np.nan_to_num(dx)[below], np.nan_to_num(dF)[below]) for dx, dF in first.history]
    found = settle(answer, between, learned)
    left = np.flatnonzero(found.error > SETTLED)
    if left.size:
        # Neighbours may be no guide, as where a phase comes and goes between them.
        again = settle(lambda x, index: answer(x, left[index]), start[left])
        found.x[left], found.error[left] = again.x, again.error
    return found


def _interpolated(known: FloatArray, below: IntArray, share: FloatArray) -> FloatArray:
    """Values a share of the way from one known state to the next, by a cubic through four.

    Where the four do not lie on a smooth curve, as at the end of a row of a grid, straight.
    """
    last = len(known) - 1
    a, b, c, d = (known[np.clip(below + k, 0, last)] for k in (-1, 0, 1, 2))
    t = share[:, np.newaxis]
    straight = b + t * (c - b)
    bends = a - 2.0 * b + c, b - 2.0 * c + d
    curved = straight + t * (t - 1.0) / 6.0 * ((2.0 - t) * bends[0] + (1.0 + t) * bends[1])
    largest = np.maximum(np.abs(bends[0]), np.abs(bends[1]))
    smooth = (np.abs(bends[1] - bends[0]) <= 0.5 * largest + SETTLED).all(axis=1)
    inside = (below > 0) & (below < last - 1) & smooth
    return np.where(inside[:, np.newaxis], curved, straight)


def _step(
    residual: FloatArray,
    weights: FloatArray,
    history: History,
    damping: FloatArray,
) -> FloatArray:
    """The damped residual, less what the history of changes explains of it."""
    if not history:
        return residual * damping[:, np.newaxis]
    changes = np.stack([dx for dx, _ in history], axis=1)
    answers = np.stack([dF for _, dF in history], axis=1)
    weighted = answers * weights[:, np.newaxis]
    normal = weighted @ answers.swapaxes(1, 2)
    size = np.trace(normal, axis1=1, axis2=2)
    places = np.arange(len(history))
    normal[:, places, places] += np.where(size > 0.0, _RIDGE * size, 1.0)[:, np.newaxis]
    shares = np.linalg.solve(normal, weighted @ residual[..., np.newaxis])
    left = residual[:, np.newaxis] - shares.swapaxes(1, 2) @ answers
    moved = shares.swapaxes(1, 2) @ changes
    return np.asarray((left * damping[:, np.newaxis, np.newaxis] - moved)[:, 0])
