from __future__ import annotations

import numpy as np
import pytest
from benchmarks.systems import ordinary

from gibbsmin.errors import InputError
from gibbsmin.minimise import Method, Settings, Status, minimise


@pytest.mark.parametrize("name", ["gap_tolerance", "balance_tolerance", "stationarity_tolerance"])
@pytest.mark.parametrize(
    ("value", "found"), [(0.0, "0.0"), (-1e-9, "-1e-09"), (float("nan"), "nan"), ("1", "'1'")]
)
def test_tolerance_must_be_positive(name: str, value: float, found: str) -> None:
    with pytest.raises(InputError) as caught:
        Settings(**{name: value})
    assert str(caught.value) == (
        f"settings.{name}: found {found}; accepted is a positive finite number."
    )


@pytest.mark.parametrize("name", ["gap_tolerance", "balance_tolerance", "stationarity_tolerance"])
def test_tolerance_beyond_double_precision_leaves_the_state_uncertified(name: str) -> None:
    programme = ordinary("big", 1)  # so many terms that none of the sums is exact by chance
    assert minimise(programme).certified.all()
    solution = minimise(programme, Settings(**{name: 1e-30}))
    assert solution.status[0] == Status.UNCERTIFIED
    assert solution.method[0] == Method.NONE
    assert np.isnan(solution.amounts).all()
    assert np.isnan(solution.multipliers).all()
    assert np.isnan(solution.certificate.gap).all()
    assert np.isnan(solution.certificate.driving_forces).all()
