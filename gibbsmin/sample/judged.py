"""Judges each reaction of an independent set in a batch of samples."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import partial

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray, IntArray
from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.sample.limits import ONE_SIDED, TWO_SIDED, Function, extreme
from gibbsmin.sample.reactions import (
    Constant,
    JudgedReaction,
    equilibrium_temperature,
    log_quotient,
    quotient_slopes,
)
from gibbsmin.sample.reconciliation import Reconciliation
from gibbsmin.sample.thresholds import CURVED, FAINT, Z_95

_PRESENT = 1e-9
_MOVED = 1e-6
"""Extents below this, in moles per mole of dry gas, have no direction."""

_LOWEST_SHARE = 1e-3


@dataclass(frozen=True, eq=False)
class Gas:
    """The reconciled gas of B samples at its conditions.

    Attributes
    ----------
    names : of the n gas records
    amounts : (B, n) moles per mole of dry gas
    centre, covariance : (B, n) and (B, n, n) without the bounds
    determined : (B, n)
    excess : (B,) rise of chi-square by the bounds
    feed : (B, n) what entered of the same records
    log_fugacity : (B, n) ln φ at the conditions; 0 in an ideal gas
    temperature, u_temperature, pressure, u_pressure : (B,) K and Pa
    """

    names: tuple[str, ...]
    amounts: FloatArray
    centre: FloatArray
    covariance: FloatArray
    determined: BoolArray
    excess: FloatArray
    feed: FloatArray
    log_fugacity: FloatArray
    temperature: FloatArray
    u_temperature: FloatArray
    pressure: FloatArray
    u_pressure: FloatArray

    def below(self, count: float) -> BoolArray:
        """(B, n) whether a record is below so many of its standard uncertainties, or unknown."""
        u = np.sqrt(np.diagonal(self.covariance, axis1=1, axis2=2))
        below: BoolArray = (self.centre < count * u) | ~self.determined
        return below

    @property
    def faint(self) -> BoolArray:
        """(B, n) whether a record is so small that the data give one-sided limits only."""
        return self.below(FAINT)


@dataclass(frozen=True, eq=False)
class Judged:
    """One reaction in B samples; u_… are standard uncertainties, figures as ReactionFinding's.

    ``lower`` and ``upper`` are 95 % limits of T − T_eq, ``ratio_lower`` and ``ratio_upper`` of
    ln(Q/K); infinite where the data give none.
    """

    reaction: JudgedReaction
    log_Q: FloatArray
    u_log_Q: FloatArray
    log_K: FloatArray
    u_log_K: FloatArray
    data_uncertainty: FloatArray
    log_ratio: FloatArray
    u_log_ratio: FloatArray
    affinity: FloatArray
    u_affinity: FloatArray
    temperature: FloatArray
    u_temperature: FloatArray
    approach: FloatArray
    u_approach: FloatArray
    lower: FloatArray
    upper: FloatArray
    ratio_lower: FloatArray
    ratio_upper: FloatArray
    flat: BoolArray
    forward: IntArray
    faint: BoolArray
    """(B, n) which of its records are faint."""


def gas_of(
    names: Sequence[str],
    closed: Reconciliation,
    feed: FloatArray,
    log_fugacity: FloatArray,
    conditions: tuple[FloatArray, FloatArray, FloatArray, FloatArray],
) -> Gas:
    """The outlet's part of a reconciliation; conditions are T, u(T), P and u(P), each (B,)."""
    n = len(names)
    return Gas(
        tuple(names),
        closed.unknowns[:, :n],
        closed.free_unknowns[:, :n],
        closed.covariance[:, :n, :n],
        closed.determined[:, :n],
        closed.chi_square - closed.free_chi_square,
        feed,
        log_fugacity,
        *conditions,
    )


def judge(gas: Gas, reactions: Sequence[JudgedReaction]) -> list[Judged]:
    """Every reaction in every sample."""
    nu = np.array([[r.coefficients.get(name, 0.0) for name in gas.names] for r in reactions])
    nu = nu.reshape(len(reactions), len(gas.names))
    extents = (gas.amounts - gas.feed) @ np.linalg.pinv(nu)
    return [
        _judged(gas, reaction, row, extents[:, place])
        for place, (reaction, row) in enumerate(zip(reactions, nu, strict=True))
    ]


def _judged(gas: Gas, reaction: JudgedReaction, nu: FloatArray, extent: FloatArray) -> Judged:
    constant, T = reaction.constant, gas.temperature
    fugacity = gas.log_fugacity @ nu
    log_Q = log_quotient(nu, gas.amounts, gas.pressure) + fugacity
    log_K = constant.log_K(T)
    slopes = quotient_slopes(nu, gas.amounts)
    of_gas = np.einsum("bi,bij,bj->b", slopes, gas.covariance, slopes)
    of_pressure = (nu.sum() * gas.u_pressure / gas.pressure) ** 2
    known = (gas.determined | (nu == 0.0)).all(axis=1) & np.isfinite(log_Q)
    u_Q = np.where(known, np.sqrt(of_gas + of_pressure), np.nan)
    log_Q = np.where((gas.determined | (nu == 0.0)).all(axis=1), log_Q, np.nan)
    T_eq, flat = equilibrium_temperature(constant, log_Q, T)
    with np.errstate(divide="ignore", invalid="ignore"):
        enthalpy = constant.enthalpy(np.where(np.isfinite(T_eq), T_eq, T))
        u_T_eq = np.where(
            np.isfinite(T_eq), u_Q * GAS_CONSTANT * T_eq**2 / np.abs(enthalpy), np.nan
        )
        of_data = constant.u_log_K(T_eq) * GAS_CONSTANT * T_eq**2 / np.abs(enthalpy)
    of_temperature = constant.enthalpy(T) / (GAS_CONSTANT * T**2) * gas.u_temperature
    u_ratio = np.hypot(u_Q, of_temperature)
    # A = −RT ln Q − ΔrG°, so that dA/dT = −R ln Q + ΔrS° = (A + ΔrH)/T.
    affinity = -GAS_CONSTANT * T * (log_Q - log_K)
    slope_of_affinity = (affinity + constant.enthalpy(T)) / T
    u_approach = np.hypot(gas.u_temperature, u_T_eq)
    faint = np.where(nu != 0.0, gas.faint, False)
    limits = _limits(gas, constant, nu, faint, (T - T_eq, u_approach), (log_Q - log_K, u_ratio))
    return Judged(
        reaction,
        log_Q,
        u_Q,
        log_K,
        constant.u_log_K(T),
        of_data,
        log_Q - log_K,
        u_ratio,
        affinity,
        np.hypot(GAS_CONSTANT * T * u_Q, slope_of_affinity * gas.u_temperature),
        T_eq,
        u_T_eq,
        T - T_eq,
        u_approach,
        *limits,
        flat,
        _forward(gas, nu, log_K, extent),
        faint,
    )


def _forward(gas: Gas, nu: FloatArray, log_K: FloatArray, extent: FloatArray) -> IntArray:
    """The way a reaction had to go: from Q against K in the feed, else from its extent."""
    present = gas.feed > _PRESENT * gas.feed.sum(axis=1, keepdims=True)
    reactants = (present | (nu >= 0.0)).all(axis=1)
    products = (present | (nu <= 0.0)).all(axis=1)
    log_Q = log_quotient(nu, np.where(present, gas.feed, 0.0), gas.pressure)
    log_Q += gas.log_fugacity @ nu
    with np.errstate(invalid="ignore"):
        from_either = np.sign(log_K - log_Q)
    by_extent = np.where(np.abs(extent) > _MOVED, np.sign(extent), 0.0)
    way = np.select(
        [reactants & products, reactants, products],
        [from_either, np.ones(len(extent)), -np.ones(len(extent))],
        by_extent,
    )
    return np.asarray(np.nan_to_num(way), dtype=np.int64)


def _limits(
    gas: Gas,
    constant: Constant,
    nu: FloatArray,
    faint: BoolArray,
    approach: tuple[FloatArray, FloatArray],
    ratio: tuple[FloatArray, FloatArray],
) -> tuple[FloatArray, FloatArray, FloatArray, FloatArray]:
    """95 % limits of T − T_eq and of ln(Q/K).

    Where a record is faint those of T − T_eq are one-sided; those of ln(Q/K) are so only where the
    record may be absent altogether.  Those of other small records follow chi-square on both sides.
    """
    lower, upper = approach[0] - Z_95 * approach[1], approach[0] + Z_95 * approach[1]
    low_ratio, high_ratio = ratio[0] - Z_95 * ratio[1], ratio[0] + Z_95 * ratio[1]
    for ends, sign in ((lower, -1), (upper, 1), (low_ratio, -1), (high_ratio, 1)):
        ends[faint.any(axis=1) | np.isnan(ends)] = sign * np.inf
    fugacity = gas.log_fugacity @ nu
    curved = np.where(nu != 0.0, gas.below(CURVED), False)
    states = np.flatnonzero(curved.any(axis=1) & ~faint.any(axis=1) & np.isfinite(low_ratio))
    if states.size:
        search = partial(_extreme, gas, nu, faint, states)
        for sense, of_ratio, of_approach in ((-1.0, low_ratio, lower), (1.0, high_ratio, upper)):
            way = np.full(states.size, sense)
            of_ratio[states] = search(_ratio(constant, nu, fugacity[states]), way, TWO_SIDED)
            of_approach[states] = search(_approach(constant, nu, fugacity[states]), way, TWO_SIDED)
    down: BoolArray = np.asarray((faint & (nu < 0.0)).any(axis=1))
    up: BoolArray = np.asarray((faint & (nu > 0.0)).any(axis=1))
    states = np.flatnonzero((down ^ up) & (gas.determined | (nu == 0.0)).all(axis=1))
    if not states.size:
        return lower, upper, low_ratio, high_ratio
    # A faint reactant may be more, not less, than it seems: ln Q has a lower limit, and so on.
    away = np.where(down[states], -1.0, 1.0)
    search = partial(_extreme, gas, nu, faint, states)
    near = search(_ratio(constant, nu, fugacity[states]), -away, TWO_SIDED)
    both = np.isfinite(near)
    far = search(_ratio(constant, nu, fugacity[states]), away, np.where(both, TWO_SIDED, ONE_SIDED))
    low_ratio[states] = np.where(away < 0.0, far, near)
    high_ratio[states] = np.where(away < 0.0, near, far)
    # T − T_eq falls as ln Q rises where the reaction takes up heat.
    away = -away * np.sign(constant.enthalpy(gas.temperature[states]))
    far = search(_approach(constant, nu, fugacity[states]), away, ONE_SIDED)
    lower[states] = np.where(away < 0.0, far, -np.inf)
    upper[states] = np.where(away > 0.0, far, np.inf)
    return lower, upper, low_ratio, high_ratio


def _extreme(
    gas: Gas,
    nu: FloatArray,
    faint: BoolArray,
    states: IntArray,
    function: Function,
    sense: FloatArray,
    rise: FloatArray | float,
) -> FloatArray:
    """Limit of a function of x = (y, ln P, T) at a rise of chi-square."""
    n = len(gas.names)
    u = np.sqrt(np.diagonal(gas.covariance[states], axis1=1, axis2=2))
    covariance = np.zeros((len(states), n + 2, n + 2))
    covariance[:, :n, :n] = gas.covariance[states]
    covariance[:, n, n] = (gas.u_pressure[states] / gas.pressure[states]) ** 2
    covariance[:, n + 1, n + 1] = gas.u_temperature[states] ** 2
    outside = [np.log(gas.pressure[states]), gas.temperature[states]]
    centre = np.column_stack([gas.centre[states], *outside])
    lowest = np.full(centre.shape, -np.inf)
    lowest[:, :n] = np.where(nu != 0.0, _LOWEST_SHARE * u, -np.inf)
    start = centre.copy()
    start[:, :n] = np.where(faint[states], np.maximum(start[:, :n], 2.0 * u), start[:, :n])
    start = np.maximum(start, lowest)
    rise = rise + gas.excess[states]
    return extreme(function, centre, covariance, rise, sense, start, lowest)


def _ratio(constant: Constant, nu: FloatArray, fugacity: FloatArray) -> Function:
    def function(x: FloatArray) -> tuple[FloatArray, FloatArray]:
        y, T = x[:, :-2], x[:, -1]
        value = log_quotient(nu, y, np.exp(x[:, -2])) + fugacity - constant.log_K(T)
        of_T = -constant.enthalpy(T) / (GAS_CONSTANT * T**2)
        of_pressure = np.full(len(x), nu.sum())
        return value, np.column_stack([quotient_slopes(nu, y), of_pressure, of_T])

    return function


def _approach(constant: Constant, nu: FloatArray, fugacity: FloatArray) -> Function:
    def function(x: FloatArray) -> tuple[FloatArray, FloatArray]:
        y, T = x[:, :-2], x[:, -1]
        log_Q = log_quotient(nu, y, np.exp(x[:, -2])) + fugacity
        T_eq, _ = equilibrium_temperature(constant, log_Q, T)
        with np.errstate(divide="ignore"):
            slope = -GAS_CONSTANT * T_eq**2 / constant.enthalpy(np.nan_to_num(T_eq, nan=1000.0))
        of_y = quotient_slopes(nu, y) * slope[:, np.newaxis]
        return T - T_eq, np.column_stack([of_y, slope * nu.sum(), np.ones(len(x))])

    return function
