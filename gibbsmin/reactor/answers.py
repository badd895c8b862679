"""Every temperature that meets a content, where there may be none, one or several.

At equilibrium, enthalpy, energy and entropy never fall as T rises, so that one bracket finds the
answer.  Under an approach that is not proved, and where the enthalpy of a named reaction changes
sign the approach has no meaning and leaves a gap.  So the content is looked at on a grid of each
stretch of temperatures in which the approach holds.  What this finds is complete to that grid.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import Final

import numpy as np

from gibbsmin.arrays import FloatArray, IntArray
from gibbsmin.reactor.approach import Shift
from gibbsmin.reactor.roots import Residual, roots_between

_STEP: Final = 1.0
"""K, to which the ends of a stretch are found."""

_RATIO: Final = 1.04
"""Between neighbours of the grid."""


def every_answer(
    shift: Shift, residual: Residual, states: int, limits: tuple[float, float]
) -> tuple[FloatArray, FloatArray]:
    """The only temperature (B,) of each state, and the lowest and highest (2, B) where it has more.

    States that share their approaches share the grid on which they are looked at.
    """
    T, ends = np.full(states, np.nan), np.full((2, states), np.nan)
    differences = shift.differences.reshape(len(shift.keys), -1)
    _, kinds = np.unique(differences, axis=1, return_inverse=True)
    kind = np.broadcast_to(kinds.reshape(-1), (states,))
    for which in range(kind.max(initial=-1) + 1):
        index = np.flatnonzero(kind == which)
        own = shift if shift.differences.ndim == 1 else shift.of_states(index[0])

        def of_own(T: FloatArray, place: IntArray, index: IntArray = index) -> FloatArray:
            return residual(T, index[place])

        roots = roots_between(of_own, *brackets(of_own, stretches(own, *limits), index.size))
        T[index], ends[:, index] = only_answers(roots)
    return T, ends


def stretches(shift: Shift, lowest: float, highest: float) -> tuple[FloatArray, ...]:
    """Grids (K,) of the stretches in K in which each approach holds, without change of sense."""
    T = np.arange(lowest, highest + _STEP, _STEP)
    senses = shift.senses(T)
    holds = np.all(senses != 0.0, axis=0)
    breaks = np.any(senses[:, 1:] != senses[:, :-1], axis=0)
    runs = np.split(np.arange(T.size), np.flatnonzero(breaks) + 1)
    return tuple(_spaced(T[run[0]], T[run[-1]]) for run in runs if holds[run[0]])


def brackets(
    residual: Residual, grids: Sequence[FloatArray], states: int
) -> tuple[FloatArray, FloatArray]:
    """Ends in K, two arrays (A, B), of all intervals in which the residual changes its sign.

    The A answers of a state stand in rising order; NaN follows where it has fewer.
    """
    lefts, rights, owners = [], [], []
    for T in grids:
        index = np.tile(np.arange(states), T.size)
        above = residual(np.repeat(T, states), index).reshape(T.size, states)
        known = ~np.isnan(above[:-1]) & ~np.isnan(above[1:])
        k, state = np.nonzero(known & ((above[:-1] > 0.0) != (above[1:] > 0.0)))
        lefts.append(T[k])
        rights.append(T[k + 1])
        owners.append(state)
    left, right, owner = (np.concatenate(parts) for parts in (lefts, rights, owners))
    order = np.lexsort((left, owner))
    left, right, owner = left[order], right[order], owner[order]
    place = np.arange(owner.size) - np.searchsorted(owner, owner)
    shape = (1 + int(place.max(initial=0)), states)
    found = np.full(shape, np.nan), np.full(shape, np.nan)
    found[0][place, owner], found[1][place, owner] = left, right
    return found


def only_answers(roots: FloatArray) -> tuple[FloatArray, FloatArray]:
    """The answer of each state that has just one, (B,), and else the lowest and highest, (2, B).

    ``roots`` (A, B) stand in rising order, NaN after the last; NaN stands for what is not there.
    """
    count = np.count_nonzero(~np.isnan(roots), axis=0)
    highest = np.take_along_axis(roots, np.maximum(count - 1, 0)[np.newaxis], axis=0)[0]
    several = count > 1
    ends = np.where(several, np.array([roots[0], highest]), np.nan)
    return np.where(several, np.nan, roots[0]), ends


def _spaced(low: float, high: float) -> FloatArray:
    count = 2 + int(np.log(high / low) / np.log(_RATIO))
    return np.geomspace(low, high, count)
