"""5,000 invented samples with known truth: rejection rates, coverages, and errors found.

Rates at 5 % of 5,000 samples have a standard deviation of 0.3 points; the bands asked for are
4–6 % and 93–97 %.
"""

from __future__ import annotations

from functools import cache

import numpy as np
import pytest
from sample_cases import (
    U_PRESSURE,
    Samples,
    analysis,
    reformer_plan,
    reformer_samples,
    reforming_and_shift,
    shift_plan,
    shift_samples,
)
from scipy.stats import chi2, ncx2

from gibbsmin.sample.batch import Batch, difference, run_batch, tail_probability
from gibbsmin.sample.equilibrium_fit import Readings
from gibbsmin.sample.plan import Plan
from gibbsmin.sample.reconciliation import reconcile
from gibbsmin.sample.suspects import suspects_of
from gibbsmin.sample.thresholds import FAINT, Thresholds
from gibbsmin.thermo.library import load_library

COUNT = 5000
VISIBLE_POWER = 0.9


def run(samples: Samples, readings: Readings) -> Batch:
    return run_batch(
        samples.plan,
        readings,
        np.zeros(readings.values.shape),
        np.full(readings.pressure.shape, U_PRESSURE) * readings.pressure,
        reforming_and_shift(samples.plan),
        load_library(),
    )


@cache
def usual() -> tuple[Samples, Batch]:
    samples = reformer_samples(COUNT)
    return samples, run(samples, samples.noisy(7))


@cache
def hot() -> tuple[Samples, Batch]:
    """So hot that little methane is left."""
    samples = reformer_samples(COUNT, (1200.0, 1600.0))
    return samples, run(samples, samples.noisy(8))


def test_closure_rejects_one_in_twenty() -> None:
    _, batch = usual()
    p = tail_probability(batch.closed.chi_square, batch.closed.degrees_of_freedom)
    assert set(batch.closed.degrees_of_freedom.tolist()) == {3}
    assert 0.04 <= (p < 0.05).mean() <= 0.06


def test_equilibrium_is_rejected_one_time_in_twenty() -> None:
    _, batch = usual()
    for fit, freedom in ((batch.measured_fit, 2), (batch.best_fit, 1)):
        rise, degrees = difference(fit, batch.closed)
        assert set(degrees.tolist()) == {freedom}
        assert 0.04 <= (tail_probability(rise, degrees) < 0.05).mean() <= 0.06


def test_adjustments_are_standard_normal() -> None:
    _, batch = usual()
    z = batch.closed.adjustments[:, :5]
    assert z.std(axis=0) == pytest.approx(1.0, abs=0.03)
    assert z.mean(axis=0) == pytest.approx(0.0, abs=0.06)


@pytest.mark.parametrize("place", [0, 1], ids=["shift", "reforming"])
def test_intervals_of_the_approach_cover_the_truth(place: int) -> None:
    _, batch = usual()
    reaction = batch.reactions[place]
    assert not reaction.faint.any()
    covered = (reaction.lower <= 0.0) & (reaction.upper >= 0.0)
    assert 0.93 <= covered.mean() <= 0.97
    ratio = (reaction.ratio_lower <= 0.0) & (reaction.ratio_upper >= 0.0)
    assert 0.93 <= ratio.mean() <= 0.97


def test_intervals_of_the_fitted_temperature_cover_the_truth() -> None:
    samples, batch = usual()
    assert 0.93 <= ((batch.lower <= samples.T) & (batch.upper >= samples.T)).mean() <= 0.97


def test_one_sided_limits_cover_where_methane_is_faint() -> None:
    samples, batch = hot()
    reforming = batch.reactions[1]
    truly_faint = samples.truth[:, 3] < FAINT * samples.u[:, 3]
    assert 0.3 < truly_faint.mean() < 0.7
    assert (batch.closed.bounded & truly_faint).any()
    faint = reforming.faint.any(axis=1)
    assert np.isneginf(reforming.lower[faint]).all()
    assert np.isfinite(reforming.upper[faint]).all()
    covered = (reforming.lower <= 0.0) & (reforming.upper >= 0.0)
    assert covered[truly_faint].mean() >= 0.93
    # Above 5 u the limits are two-sided and follow chi-square where ln y bends.
    assert 0.93 <= covered[~truly_faint].mean() <= 0.97
    # Nearest to the bound the limit is on the safe side.
    nothing_left = samples.truth[:, 3] < samples.u[:, 3]
    assert covered[nothing_left].mean() >= 0.97
    temperature = (batch.lower <= samples.T) & (batch.upper >= samples.T)
    assert 0.93 <= temperature[truly_faint].mean() <= 0.97
    assert 0.93 <= temperature[~truly_faint].mean() <= 0.97


@pytest.mark.parametrize(("column", "name"), list(enumerate(["H2", "CO", "CO2", "CH4", "N2"])))
def test_six_sigma_errors_are_found_where_they_show(column: int, name: str) -> None:
    samples, _ = usual()
    readings = samples.with_error(samples.noisy(9), column, 6.0)
    closed = reconcile(samples.plan.closure, readings.values, readings.uncertainties)
    redundancy = closed.redundancy[:, column]
    power = ncx2.sf(chi2.ppf(0.95, 3), 3, 36.0 * redundancy)
    visible = power >= VISIBLE_POWER
    if name == "CH4":
        assert not visible.any()
        return
    assert visible.any()
    p = tail_probability(closed.chi_square, closed.degrees_of_freedom)
    found = suspects_of(samples.plan, closed, readings.uncertainties, p.tolist(), Thresholds())
    detected = np.array([bool(suspects.names) for suspects in found]) & visible
    assert detected[visible].mean() >= 0.9
    held = np.array([name in suspects.names for suspects in found])
    assert held[detected].mean() >= 0.95
    named = [s.single for s, is_so in zip(found, detected, strict=True) if is_so and s.single]
    assert not {"CO", "CO2"} & set(named)  # the tests of both go together
    if name in ("H2", "N2"):
        assert named.count(name) / len(named) > 0.95


def rejected(plan: Plan, readings: Readings) -> tuple[int, float]:
    """Degrees of freedom, and the share of closures rejected at 5 %."""
    closed = reconcile(plan.closure, readings.values, readings.uncertainties)
    (freedom,) = set(closed.degrees_of_freedom.tolist())
    p = tail_probability(closed.chi_square, closed.degrees_of_freedom)
    return int(freedom), float((p < 0.05).mean())


def test_closure_of_normalised_analyses() -> None:
    """Scaled to 100 % by the analyser: a degree of freedom less, and the rate holds."""
    samples = reformer_samples(COUNT)
    readings = samples.noisy(10)
    gases = readings.values[:, :5]
    gases /= gases.sum(axis=1, keepdims=True)
    normalised = reformer_plan(analysis(normalised=True))
    freedom, share = rejected(normalised, readings)
    assert freedom == 2
    assert 0.04 <= share <= 0.06
    # Kept, the sum of 100 % would pass for a measurement that fits too well to be one.
    freedom, share = rejected(samples.plan, readings)
    assert freedom == 3
    assert not 0.04 <= share <= 0.06


@pytest.mark.parametrize("normalised", [False, True])
def test_closure_of_inlet_and_outlet_together(normalised: bool) -> None:
    samples = shift_samples(COUNT, shift_plan(normalised=normalised))
    readings = samples.noisy(11)
    if normalised:
        for part in (readings.values[:, :5], readings.values[:, 5:10]):
            part /= part.sum(axis=1, keepdims=True)
    freedom, share = rejected(samples.plan, readings)
    assert freedom == (3 if normalised else 5)
    assert 0.04 <= share <= 0.06


def test_approach_of_a_shift_reactor_from_inlet_and_outlet() -> None:
    samples = shift_samples(COUNT)
    batch = run(samples, samples.noisy(12))
    shift = next(r for r in batch.reactions if "CO2(g)" in r.reaction.coefficients)
    assert not shift.faint.any()
    assert (np.abs(shift.forward) == 1).all()
    covered = (shift.lower <= 0.0) & (shift.upper >= 0.0)
    assert 0.93 <= covered.mean() <= 0.97
    temperature = (batch.lower <= samples.T) & (batch.upper >= samples.T)
    assert 0.93 <= temperature.mean() <= 0.97
    rise, degrees = difference(batch.measured_fit, batch.closed)
    assert set(degrees.tolist()) == {1}
    assert 0.04 <= (tail_probability(rise, degrees) < 0.05).mean() <= 0.06
