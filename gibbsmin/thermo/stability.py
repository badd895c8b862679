"""Whether a gas is one stable phase: Michelsen's tangent-plane analysis.

A mixture of fractions y is stable where no other composition lies below the tangent plane of its
Gibbs energy.  With d = ln y + ln φ(y), a trial of amounts W is looked for at which

    ln W + ln φ(W) = d,   t = 1 + Σ W (ln W + ln φ(W) − d − 1),

and t < 0 at any trial, settled or not, proves that a second phase would form (M. L. Michelsen,
Fluid Phase Equilib. 9 (1982) 1).  Trials start from Wilson's estimate of the liquid and of the
vapour that the mixture could be beside, and from its least volatile gas alone; so a stable verdict
is as sure as these starts, an unstable one is proved.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray, IntArray
from gibbsmin.thermo.gas_state import GasState
from gibbsmin.thermo.real_gas import RealGas

_ROUNDS = 40
_SETTLED = 1e-8
_BELOW = -1e-7
_TRACE = 1e-6
_SAME = 1e-4
_NEAR = 0.1


@dataclass(frozen=True)
class Stability:
    """Verdict on B states.

    Attributes
    ----------
    stable : (B,) whether no second phase was found
    other : (B, S) mole fractions of the second phase; NaN where stable
    """

    stable: BoolArray
    other: FloatArray


def stability(gas: RealGas, state: GasState) -> Stability:
    """Judge the B states of a gas.

    States above the critical temperature of all their gases beyond traces are taken as stable,
    and those that Wilson's estimate puts at less than a tenth of their dew pressure.
    """
    y = state.y
    stable = np.ones(len(y), dtype=bool)
    other = np.full(y.shape, np.nan)
    with np.errstate(invalid="ignore"):
        condensable = gas.known & (y > _TRACE)
        highest = np.where(condensable, np.nan_to_num(gas.critical_temperatures), 0.0).max(axis=1)
        judged = np.flatnonzero(highest > state.T)
        near = _starts(gas, state.T[judged], state.P[judged], y[judged])[0][0].sum(axis=1)
        judged = judged[near > _NEAR]
    if judged.size == 0:
        return Stability(stable, other)
    y = y[judged]
    plane = np.log(np.maximum(y, 1e-300)) + state.log_fugacity[judged]
    for start, liquid in _starts(gas, state.T[judged], state.P[judged], y):
        left = np.flatnonzero(stable[judged])
        if left.size == 0:
            break
        part = judged[left]
        W = _trial(gas, state, part, plane[left], start[left], liquid)
        found = ~np.isnan(W[:, 0])
        stable[judged[left[found]]] = False
        other[judged[left[found]]] = W[found]
    return Stability(stable, other)


def _starts(
    gas: RealGas, T: FloatArray, P: FloatArray, y: FloatArray
) -> list[tuple[FloatArray, bool]]:
    """Trial amounts (k, S), and whether they are of a liquid."""
    Tc, Pc, omega = gas.critical_temperatures, gas.critical_pressures, gas.acentric_factors
    exponent = 5.373 * (1.0 + omega) * (1.0 - Tc / T[:, np.newaxis])
    ratios = np.where(gas.known, Pc / P[:, np.newaxis] * np.exp(exponent), np.inf)
    liquid = y / ratios
    alone = np.where(liquid == liquid.max(axis=1, keepdims=True), 1.0, 1e-6 * y)
    vapour = y * np.where(gas.known, ratios, 1.0)
    return [(liquid, True), (alone, True), (vapour, False)]


def _trial(
    gas: RealGas,
    state: GasState,
    part: IntArray,
    plane: FloatArray,
    start: FloatArray,
    liquid: bool,
) -> FloatArray:
    """Fractions of a phase below the tangent plane of part of the states; NaN where none."""
    T, P, y, V = (array[part] for array in (state.T, state.P, state.y, state.V))
    pulls = state.pulls.of_states(part)
    result = np.full(y.shape, np.nan)
    index = np.arange(len(y))
    W = np.maximum(start, 1e-300)
    W = W / W.sum(axis=1, keepdims=True)
    for _ in range(_ROUNDS):
        trial = gas.state(T[index], P[index], W, pulls.of_states(index), liquid=liquid)
        logs = trial.log_fugacity
        target = plane[index] - logs
        below = 1.0 + np.sum(W * (np.log(W) - target - 1.0), axis=1)
        new = np.maximum(np.exp(np.minimum(target, 50.0)), 1e-300)
        fractions = W / W.sum(axis=1, keepdims=True)
        same = np.abs(fractions - y[index]).max(axis=1) < _SAME
        same &= np.abs(trial.V / V[index] - 1.0) < _SAME
        found = (below < _BELOW) & ~same
        result[index[found]] = fractions[found]
        settled = np.abs(new - W).max(axis=1) < _SETTLED
        going = ~(found | same | settled)
        index, W = index[going], new[going]
        if index.size == 0:
            break
    return result
