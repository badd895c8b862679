"""Every problem of the shared set is certified, and the certificate is what it says it is."""

from __future__ import annotations

import numpy as np
import pytest
from minimise.optimality import assert_optimal
from minimise.problems import PROBLEMS

from gibbsmin.minimise import Method, minimise


@pytest.mark.parametrize("name", PROBLEMS)
def test_problem_is_certified_and_optimal(name: str) -> None:
    programme = PROBLEMS[name]
    solution = minimise(programme)
    assert solution.certified.all()
    assert (solution.method != Method.NONE).all()
    assert np.isfinite(solution.amounts).all()
    assert_optimal(programme, solution)
