from __future__ import annotations

import subprocess
import sys

import numpy as np
import pytest
from minimise.problems import PROBLEMS, REFORMER, build

from gibbsmin.minimise import Method, Settings, dispatch, minimise
from gibbsmin.minimise.conic import ConicProgramme


def test_importing_the_minimiser_does_not_import_the_modelling_library() -> None:
    code = "import sys, gibbsmin.minimise; sys.exit('cvxpy' in sys.modules)"
    assert subprocess.run([sys.executable, "-c", code], check=False).returncode == 0  # noqa: S603


@pytest.mark.parametrize("name", ["reformer", "reformer over carbon", "ten species"])
@pytest.mark.parametrize("scale", [1e-6, 1.0, 1e6])
def test_start_is_near_the_optimum(name: str, scale: float) -> None:
    programme = PROBLEMS[name].subset(0)
    best = minimise(programme)
    conic = ConicProgramme(programme.matrix, programme.gas)
    start = conic.solve(scale * programme.supplies[0], programme.energies[0])
    assert start is not None
    total = best.amounts[0].sum()
    np.testing.assert_allclose(start.amounts / scale, best.amounts[0], atol=1e-5 * total)
    present = best.amounts[0] > 1e-6 * total
    prices = programme.matrix.T @ start.multipliers
    np.testing.assert_allclose(
        prices[present], (programme.matrix.T @ best.multipliers[0])[present], atol=1e-3
    )


def test_one_conic_programme_serves_all_states_of_a_face(monkeypatch: pytest.MonkeyPatch) -> None:
    built = []

    class Counted(ConicProgramme):
        def __init__(self, *arguments: object) -> None:
            built.append(arguments)
            super().__init__(*arguments)  # type: ignore[arg-type]

    monkeypatch.setattr(dispatch, "ConicProgramme", Counted)
    # With nitrogen four states, without it two, in turn.
    feeds = [
        {"CH4(g)": 1.0, "H2O(g)": 1.0 + state, "N2(g)": float(state % 3 > 0)} for state in range(6)
    ]
    solution = minimise(build(REFORMER, *feeds), Settings(compiled=False))
    assert solution.certified.all()
    assert (solution.method == Method.CONIC).all()
    assert len(built) == 2
