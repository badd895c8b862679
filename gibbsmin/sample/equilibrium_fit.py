"""Fits full equilibrium to samples: least squares over the inlet z and the temperature.

The outlet is n(z, T), the certified minimum of the Gibbs energy of what z brings, so that the
balance is met; its derivatives are the implicit ones of the optimum.  The steps are those of Gauss
and Newton in the logarithms of z and T, halved where chi-square would rise.  A measured temperature
is one more measurement, (T − T_meas)/u; without it the fit finds the temperature that suits the
gas best.  Fugacity coefficients of a real gas stay those of the gas as measured.
"""

from __future__ import annotations

from dataclasses import dataclass, fields

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray, IntArray
from gibbsmin.minimise import minimise
from gibbsmin.reactor.derivatives import derivatives, energy_slopes
from gibbsmin.reactor.mixture_slopes import mixture_slopes
from gibbsmin.sample.plan import Plan

LOWEST, HIGHEST = 250.0, 4000.0
"""K; a fit that ends there has found no temperature."""

_STEPS = 60
_SETTLED = 1e-10
"""A further fall of chi-square by less than this is not sought."""

_LARGEST_STEP = 2.0
_LARGEST_STEP_OF_T = 0.1
_SMALLEST_SHARE = 1e-5
_RANK = 1e-9
_END = 1e-6


@dataclass(frozen=True, eq=False)
class Readings:
    """What B samples measured.

    Attributes
    ----------
    values, uncertainties : s and u of gases and flows, (B, M); NaN where not measured
    temperature, pressure : (B,) K and Pa
    u_temperature : (B,) K; infinite where the temperature is left to the fit, 0 where it is held
    log_fugacity : (B, S) ln φ of the candidates; 0 for an ideal gas, solids and liquids
    """

    values: FloatArray
    uncertainties: FloatArray
    temperature: FloatArray
    u_temperature: FloatArray
    pressure: FloatArray
    log_fugacity: FloatArray

    @property
    def measured(self) -> BoolArray:
        """(B, M) whether there is a reading."""
        return np.isfinite(self.values) & np.isfinite(self.uncertainties)

    def subset(self, states: IntArray | BoolArray) -> Readings:
        """Some of the samples."""
        return Readings(*(getattr(self, field.name)[states] for field in fields(self)))


@dataclass(frozen=True, eq=False)
class Fit:
    """B samples fitted; NaN where a state could not be certified or the fit did not settle.

    Attributes
    ----------
    temperature, u_temperature : (B,) K; NaN where the gas tells none
    rest : (B,) K, where the temperature came to rest, be it at the end of its range
    inlet : (B, n_z) z
    chi_square : (B,)
    degrees_of_freedom : (B,), a measured temperature being one more measurement
    """

    temperature: FloatArray
    u_temperature: FloatArray
    rest: FloatArray
    inlet: FloatArray
    chi_square: FloatArray
    degrees_of_freedom: IntArray

    def subset(self, states: IntArray) -> Fit:
        """Some of the samples."""
        return Fit(*(getattr(self, field.name)[states] for field in fields(self)))


def fit_equilibrium(
    plan: Plan, readings: Readings, inlet: FloatArray, temperature: FloatArray
) -> Fit:
    """The best fit of each sample from a start: inlet (B, n_z) and temperature (B,) K."""
    best = _trial(plan, readings, inlet.copy(), temperature.copy())
    share = np.ones(len(inlet))
    settled = ~np.isfinite(best.chi_square)
    for _ in range(_STEPS):
        step = _gauss_newton(best)
        settled |= step.fall <= _SETTLED * (1.0 + best.chi_square)
        going = np.flatnonzero(~settled & (share >= _SMALLEST_SHARE))
        if going.size == 0:
            break
        z, T = _moved(best.subset(going), step.logs[going] * share[going, np.newaxis])
        tried = _trial(plan, readings.subset(going), z, T)
        better = tried.chi_square <= best.chi_square[going]
        best.put(going[better], tried.subset(better))
        share[going] = np.where(better, np.minimum(1.0, 2.0 * share[going]), share[going] / 4.0)
    return _told(best, step, readings, settled)


@dataclass(frozen=True, eq=False)
class _Trial:
    """Fitted less measured of B states, and its derivatives to ln z and ln T."""

    inlet: FloatArray
    temperature: FloatArray
    residuals: FloatArray
    jacobian: FloatArray

    @property
    def chi_square(self) -> FloatArray:
        return np.asarray((self.residuals**2).sum(axis=1))

    def subset(self, states: IntArray | BoolArray) -> _Trial:
        return _Trial(*(getattr(self, field.name)[states] for field in fields(self)))

    def put(self, states: IntArray, others: _Trial) -> None:
        for field in fields(self):
            getattr(self, field.name)[states] = getattr(others, field.name)


@dataclass(frozen=True, eq=False)
class _Step:
    """A step of B states in ln z and ln T, the fall of chi-square that it promises, u(ln T)."""

    logs: FloatArray
    fall: FloatArray
    rank: IntArray
    u_log_T: FloatArray


def _trial(plan: Plan, readings: Readings, inlet: FloatArray, temperature: FloatArray) -> _Trial:
    model, T = plan.model, temperature
    feed = inlet @ plan.inlets.sum(axis=0).T
    programme = model.programme(T, readings.pressure, feed)
    programme.energies[:] += readings.log_fugacity
    solution = minimise(programme)
    supplied = model.balance.feed_matrix @ plan.inlets.sum(axis=0)
    gas = mixture_slopes(model.mixture, T, readings.pressure, solution.amounts)
    found = derivatives(
        programme,
        solution,
        energy_slopes(model, T, gas.enthalpies),
        gas.energies_by_pressure,
        supplied,
    )

    x = np.hstack([solution.amounts, inlet])
    own = np.broadcast_to(np.eye(inlet.shape[1]), (len(inlet), *[inlet.shape[1]] * 2))
    of_z = np.concatenate([found.directions, own], axis=1) * inlet[:, np.newaxis]
    of_T = np.concatenate([found.log_temperature, np.zeros(inlet.shape)], axis=1)
    slopes = np.concatenate([of_z, of_T[..., np.newaxis]], axis=2)
    slopes[x == 0.0] = 0.0

    above, below = plan.equilibrium.above, plan.equilibrium.below
    measured = readings.measured
    weights = np.where(measured, 1.0 / np.where(measured, readings.uncertainties, 1.0), 0.0)
    whole = x @ below.T
    ratio = x @ above.T / whole
    rows = (above @ slopes - ratio[..., np.newaxis] * (below @ slopes)) / whole[..., np.newaxis]
    residuals = (ratio - np.where(measured, readings.values, 0.0)) * weights
    return _with_temperature(readings, inlet, T, residuals, rows * weights[..., np.newaxis])


def _with_temperature(
    readings: Readings,
    inlet: FloatArray,
    T: FloatArray,
    residuals: FloatArray,
    jacobian: FloatArray,
) -> _Trial:
    """Add the measurement of temperature; one that is held takes no part in a step."""
    u = readings.u_temperature
    held = u == 0.0
    weight = np.where(held, 0.0, 1.0 / np.where(held, 1.0, u))
    jacobian[held, :, -1] = 0.0
    row = np.zeros((len(T), 1, jacobian.shape[2]))
    row[:, 0, -1] = T * weight
    miss = (T - readings.temperature) * weight
    return _Trial(
        inlet,
        T,
        np.hstack([residuals, miss[:, np.newaxis]]),
        np.concatenate([jacobian, row], axis=1),
    )


def _gauss_newton(trial: _Trial) -> _Step:
    usable = np.isfinite(trial.jacobian).all(axis=(1, 2)) & np.isfinite(trial.chi_square)
    J = np.where(usable[:, np.newaxis, np.newaxis], trial.jacobian, 0.0)
    r = np.where(usable[:, np.newaxis], trial.residuals, 0.0)
    U, sizes, Vt = np.linalg.svd(J, full_matrices=False)
    kept = sizes > _RANK * np.maximum(sizes[:, :1], 1.0)
    inverse = np.where(kept, 1.0 / np.where(kept, sizes, 1.0), 0.0)
    along = np.einsum("bmk,bm->bk", U, r) * kept
    logs = -np.einsum("bkd,bk->bd", Vt, inverse * along)
    of_T = Vt[..., -1]
    told = np.einsum("bk,bk->b", of_T * kept, of_T) > 1.0 - _RANK
    u = np.sqrt(np.einsum("bk,bk->b", of_T * inverse, of_T * inverse))
    return _Step(
        logs,
        np.where(usable, (along**2).sum(axis=1), 0.0),
        kept.sum(axis=1),
        np.where(told & usable, u, np.nan),
    )


def _moved(trial: _Trial, logs: FloatArray) -> tuple[FloatArray, FloatArray]:
    of_z = np.clip(logs[:, :-1], -_LARGEST_STEP, _LARGEST_STEP)
    of_T = np.clip(logs[:, -1], -_LARGEST_STEP_OF_T, _LARGEST_STEP_OF_T)
    T = np.clip(trial.temperature * np.exp(of_T), LOWEST, HIGHEST)
    return trial.inlet * np.exp(of_z), T


def _told(best: _Trial, step: _Step, readings: Readings, settled: BoolArray) -> Fit:
    T = best.temperature
    good = settled & np.isfinite(best.chi_square)
    inside = (T > LOWEST * (1.0 + _END)) & (T < HIGHEST * (1.0 - _END))
    known = good & inside & np.isfinite(step.u_log_T)
    of_temperature = np.isfinite(readings.u_temperature) & (readings.u_temperature > 0.0)
    return Fit(
        temperature=np.where(known, T, np.nan),
        u_temperature=np.where(known, T * step.u_log_T, np.nan),
        rest=T,
        inlet=best.inlet,
        chi_square=np.where(good, best.chi_square, np.nan),
        degrees_of_freedom=readings.measured.sum(axis=1) + of_temperature - step.rank,
    )
