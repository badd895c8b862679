"""Limits of the temperature of best fit from the profile of chi-square over the temperature."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from gibbsmin.arrays import FloatArray, IntArray
from gibbsmin.sample.equilibrium_fit import HIGHEST, LOWEST, Fit, Readings, fit_equilibrium
from gibbsmin.sample.limits import ONE_SIDED, TWO_SIDED
from gibbsmin.sample.plan import Plan
from gibbsmin.sample.thresholds import Z_95

_ROUNDS = 12
_CLOSE = 1e-3
"""The rise of chi-square at a limit is met to this."""

_WIDEST_FACTOR = 4.0


def temperature_limits(
    plan: Plan, readings: Readings, fit: Fit, curved: IntArray
) -> tuple[FloatArray, FloatArray]:
    """Lower and upper 95 % limit (B,) of the temperature of best fit, K.

    They are the normal ones but for the samples ``curved``, whose chi-square is followed to where
    it has risen by that of a two-sided interval on both sides; or, where it does not rise so far
    on one side, by that of a one-sided one on the other.
    """
    lower = fit.temperature - Z_95 * fit.u_temperature
    upper = fit.temperature + Z_95 * fit.u_temperature
    lower[np.isnan(lower)], upper[np.isnan(upper)] = -np.inf, np.inf
    if curved.size:
        some, of_fit = readings.subset(curved), fit.subset(curved)
        ends = [_end(plan, some, of_fit, sense, TWO_SIDED) for sense in (-1.0, 1.0)]
        for k, sense in ((0, -1.0), (1, 1.0)):
            alone = np.flatnonzero(np.isfinite(ends[k]) & ~np.isfinite(ends[1 - k]))
            if alone.size:
                nearer = some.subset(alone), of_fit.subset(alone)
                ends[k][alone] = _end(plan, *nearer, sense, ONE_SIDED)
        lower[curved], upper[curved] = ends
    return lower, upper


def _end(plan: Plan, readings: Readings, fit: Fit, sense: float, rise: float) -> FloatArray:
    """Where chi-square has risen so far on one side of the best fit; infinite where it does not.

    The root of the rise is nearly straight in T near the best fit, so that the secant from there
    is followed, within the bracket known so far.
    """
    base = fit.rest
    end = LOWEST if sense < 0 else HIGHEST
    near, far = base.copy(), np.full(len(base), end)
    u = np.where(np.isfinite(fit.u_temperature), fit.u_temperature, 100.0)
    T = np.clip(base + sense * np.sqrt(rise) * u, LOWEST, HIGHEST)
    held = replace(readings, u_temperature=np.zeros(len(base)))
    found, inlet = np.full(len(base), sense * np.inf), fit.inlet
    for _ in range(_ROUNDS):
        trial = fit_equilibrium(plan, held, inlet, T)
        over = trial.chi_square - fit.chi_square
        met = np.abs(over - rise) <= _CLOSE
        found = np.where(met, T, found)
        if (met | (far == near)).all():
            break
        far, near = np.where(over > rise, T, far), np.where(over > rise, near, T)
        factor = np.sqrt(rise / np.maximum(over, rise / _WIDEST_FACTOR**2))
        secant = base + (T - base) * factor
        inside = (secant - near) * (secant - far) < 0.0
        reached = ~inside & (sense * (secant - far) >= 0.0)
        T = np.where(inside, secant, np.where(reached, far, 0.5 * (near + far)))
    return found
