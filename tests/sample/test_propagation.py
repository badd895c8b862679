"""Linear propagation against Monte Carlo: the spread of 4,000 repeated readings of one sample."""

from __future__ import annotations

from dataclasses import replace
from functools import cache

import numpy as np
import pytest
from sample_cases import U_PRESSURE, U_TEMPERATURE, reformer_samples, reforming_and_shift

from gibbsmin.sample.batch import Batch, run_batch
from gibbsmin.thermo.library import load_library

REPEATS = 4000
# The standard deviation of 4,000 draws is known to 1.1 %; curvature adds a little.
AGREE = 0.04


@cache
def repeated() -> tuple[Batch, Batch]:
    """One sample exactly, and read again and again; the pressure is read with an error, too."""
    one = reformer_samples(1)
    many = replace(
        one,
        **{
            name: np.repeat(getattr(one, name), REPEATS, axis=0)
            for name in ("T", "P", "truth", "u", "wet")
        },
    )
    readings = many.noisy(3)
    random = np.random.default_rng(4)
    spread = U_PRESSURE * many.P
    readings = replace(readings, pressure=many.P + spread * random.standard_normal(REPEATS))
    library, reactions = load_library(), reforming_and_shift(one.plan)
    found = [
        run_batch(
            one.plan,
            read,
            np.zeros(read.values.shape),
            U_PRESSURE * read.pressure,
            reactions,
            library,
        )
        for read in (one.exact(), readings)
    ]
    return found[0], found[1]


def test_reconciled_amounts() -> None:
    one, many = repeated()
    n = one.plan.outlet_count
    u = np.sqrt(np.diagonal(one.closed.covariance[0]))[:n]
    assert many.closed.unknowns[:, :n].std(axis=0) == pytest.approx(u, rel=AGREE)


@pytest.mark.parametrize("place", [0, 1], ids=["shift", "reforming"])
def test_quotient_temperature_and_approach(place: int) -> None:
    one, many = (batch.reactions[place] for batch in repeated())
    assert many.log_Q.std() == pytest.approx(one.u_log_Q[0], rel=AGREE)
    assert many.log_ratio.std() == pytest.approx(one.u_log_ratio[0], rel=AGREE)
    assert many.affinity.std() == pytest.approx(one.u_affinity[0], rel=AGREE)
    assert many.temperature.std() == pytest.approx(one.u_temperature[0], rel=AGREE)
    assert many.approach.std() == pytest.approx(one.u_approach[0], rel=AGREE)


def test_temperature_of_best_fit() -> None:
    one, many = repeated()
    u = float(one.best_fit.u_temperature[0])
    # The pressure's own error is no part of the fit; here it adds to the spread.
    assert u * (1 - AGREE) < many.best_fit.temperature.std() < 1.2 * u
    u = float(one.measured_fit.u_temperature[0])
    assert u < U_TEMPERATURE
    assert u * (1 - AGREE) < many.measured_fit.temperature.std() < 1.2 * u
