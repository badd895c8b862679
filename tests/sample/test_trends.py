"""Drifts and change points: published tests with the false-alarm rate that they state."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.stats import kendalltau

from gibbsmin.sample.trends import trend_of


def test_the_drift_test_is_kendalls() -> None:
    x = np.random.default_rng(1).standard_normal(40) + 0.02 * np.arange(40)
    found = trend_of("x", x)
    assert found is not None
    reference = kendalltau(np.arange(40), x, method="asymptotic").pvalue
    # scipy makes no correction for continuity, which matters little at n = 40
    assert found.drift_probability == pytest.approx(reference, rel=0.05)


def test_false_alarms_are_as_stated() -> None:
    """2,000 series of 60 independent samples at 1 %: drift 0.5 to 1.6 %, change at most that."""
    random = np.random.default_rng(7)
    found = [trend_of("x", random.standard_normal(60)) for _ in range(2000)]
    drifts = np.mean([f is not None and f.drifts(0.01) for f in found])
    changes = np.mean([f is not None and f.changes(0.01) for f in found])
    assert 0.005 <= drifts <= 0.016
    assert changes <= 0.013


def test_a_step_is_found_where_it_is() -> None:
    random = np.random.default_rng(3)
    x = random.standard_normal(60)
    x[35:] += 3.0
    found = trend_of("x", x)
    assert found is not None
    assert found.changes(0.01)
    assert abs(found.change - 35) <= 2
    assert found.step == pytest.approx(3.0, abs=1.0)


def test_a_drift_is_found_with_its_slope() -> None:
    random = np.random.default_rng(4)
    x = 0.05 * np.arange(80) + random.standard_normal(80)
    x[[5, 17]] = np.nan
    found = trend_of("x", x)
    assert found is not None
    assert found.samples == 78
    assert found.drifts(0.01)
    assert found.slope == pytest.approx(0.05, abs=0.02)


def test_few_or_equal_samples_tell_nothing() -> None:
    assert trend_of("x", np.arange(9.0)) is None
    found = trend_of("x", np.ones(20))
    assert found is not None
    assert found.drift_probability == 1.0
    assert found.change_probability == 1.0


def test_change_point_by_ranks_is_that_of_the_definition() -> None:
    random = np.random.default_rng(6)
    for values in (random.standard_normal(31), random.integers(0, 4, 30).astype(float)):
        signs = np.sign(values[np.newaxis] - values[:, np.newaxis])
        U = [signs[: t + 1, t + 1 :].sum() for t in range(values.size - 1)]
        found = trend_of("", values)
        assert found is not None
        assert abs(U[found.change - 1]) == np.abs(U).max()
        n = values.size
        expected = min(1.0, 2.0 * np.exp(-6.0 * np.max(np.abs(U)) ** 2 / (n**3 + n**2)))
        assert found.change_probability == pytest.approx(expected, rel=1e-12)


def test_a_long_series_tells_its_slope() -> None:
    random = np.random.default_rng(7)
    found = trend_of("", 1e-3 * np.arange(4000) + random.standard_normal(4000))
    assert found is not None
    assert found.slope == pytest.approx(1e-3, rel=0.05)
    assert found.drifts(1e-6)
