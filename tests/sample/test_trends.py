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
