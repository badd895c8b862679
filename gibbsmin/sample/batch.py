"""Runs a batch of samples through closure, equilibrium and judgement of reactions."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from scipy.special import chdtrc

from gibbsmin.arrays import BoolArray, FloatArray, IntArray
from gibbsmin.reactor.conditions import Equilibria, at_temperature
from gibbsmin.sample.energetics import EnergeticsBatch, energetics
from gibbsmin.sample.equilibrium_fit import Fit, Readings, fit_equilibrium
from gibbsmin.sample.findings import SolidFinding
from gibbsmin.sample.judged import Judged, gas_of, judge
from gibbsmin.sample.plan import Plan
from gibbsmin.sample.reactions import JudgedReaction
from gibbsmin.sample.reconciliation import Reconciliation, reconcile
from gibbsmin.sample.solids import solids_of
from gibbsmin.sample.temperature_profile import temperature_limits
from gibbsmin.sample.thresholds import CURVED
from gibbsmin.thermo.library import Library


@dataclass(frozen=True, eq=False)
class Batch:
    """Everything computed for B samples of one plan, as arrays.

    Attributes
    ----------
    plan, readings : what was measured
    below : (B, M) detection limits of the readings that were below one, else 0
    u_pressure : (B,) Pa
    closed : the closure on the element balance
    equilibria : of the reconciled feed at the measured temperature and pressure
    reactions : each judged in every sample
    measured_fit, best_fit : equilibrium with the temperature measured, and free
    lower, upper : (B,) 95 % limits of the temperature of best fit
    energetics : excess Gibbs energy and entropies
    solids : of each sample
    """

    plan: Plan
    readings: Readings
    below: FloatArray
    u_pressure: FloatArray
    closed: Reconciliation
    equilibria: Equilibria
    reactions: Sequence[Judged]
    measured_fit: Fit
    best_fit: Fit
    lower: FloatArray
    upper: FloatArray
    energetics: EnergeticsBatch
    solids: Sequence[tuple[SolidFinding, ...]]


def run_batch(
    plan: Plan,
    readings: Readings,
    below: FloatArray,
    u_pressure: FloatArray,
    reactions: Sequence[JudgedReaction],
    library: Library,
) -> Batch:
    """Close, fit and judge B samples of one plan."""
    closed = reconcile(plan.closure, readings.values, readings.uncertainties)
    y, z = closed.unknowns[:, : plan.outlet_count], closed.unknowns[:, plan.outlet_count :]
    T, P = readings.temperature, readings.pressure
    known: BoolArray = np.asarray(closed.determined.all(axis=1))
    # An inlet that is not determined has no equilibrium of its own; the fits below still hold.
    feed = np.where(known[:, np.newaxis], z @ plan.inlets.sum(axis=0).T, np.nan)
    equilibria = at_temperature(plan.model, T, P, feed)
    names = [record.name for record in plan.species]
    conditions = (T, readings.u_temperature, P, u_pressure)
    readings = replace(readings, log_fugacity=_log_fugacity(plan, y, T, P))
    of_gas = readings.log_fugacity[:, list(plan.columns)]
    gas = gas_of(names, closed, _of_gas(plan, np.nan_to_num(feed)), of_gas, conditions)
    judged = judge(gas, reactions)

    measured_fit = fit_equilibrium(plan, readings, z, T)
    free = replace(readings, u_temperature=np.full(len(T), np.inf))
    best_fit = fit_equilibrium(plan, free, measured_fit.inlet, measured_fit.rest)
    reacting = [any(name in reaction.coefficients for reaction in reactions) for name in names]
    curved = gas.below(CURVED)[:, reacting].any(axis=1) & np.isfinite(best_fit.chi_square)
    lower, upper = temperature_limits(plan, free, best_fit, np.flatnonzero(curved))
    return Batch(
        plan,
        readings,
        below,
        u_pressure,
        closed,
        equilibria,
        judged,
        measured_fit,
        best_fit,
        lower,
        upper,
        energetics(plan, y, z, of_gas, equilibria),
        solids_of(plan.species, y, of_gas, gas.faint, T, P, library),
    )


def _log_fugacity(
    plan: Plan, gas: FloatArray, temperature: FloatArray, pressure: FloatArray
) -> FloatArray:
    """ln φ (B, S) of the candidates in the gas as it was measured."""
    amounts = np.zeros((len(gas), len(plan.model.records)))
    amounts[:, list(plan.columns)] = np.maximum(gas, 0.0)
    return plan.model.mixture.log_fugacity(temperature, pressure, amounts)


def tail_probability(chi_square: FloatArray, degrees_of_freedom: IntArray) -> FloatArray:
    """Probability of a chi-square at least as large; NaN without a degree of freedom."""
    free = degrees_of_freedom > 0
    return np.where(free, chdtrc(np.where(free, degrees_of_freedom, 1), chi_square), np.nan)


def difference(fit: Fit, closed: Reconciliation) -> tuple[FloatArray, IntArray]:
    """Chi-square difference of equilibrium over the closure alone, and its degrees of freedom."""
    rise = np.maximum(fit.chi_square - closed.chi_square, 0.0)
    return rise, np.maximum(fit.degrees_of_freedom - closed.degrees_of_freedom, 0)


def _of_gas(plan: Plan, feed: FloatArray) -> FloatArray:
    """(B, n_y) what entered of the sample's own records."""
    entered = np.zeros((len(feed), plan.outlet_count))
    names = [record.name for record in plan.species]
    for column, record in enumerate(plan.model.feed_records):
        if record.name in names:
            entered[:, names.index(record.name)] = feed[:, column]
    return entered
