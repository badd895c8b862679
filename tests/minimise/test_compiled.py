"""The compiled method against the conic one, against its own interpreted form and itself."""

from __future__ import annotations

import subprocess
import sys
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from benchmarks.systems import grid, ordinary, torture
from minimise.optimality import assert_optimal
from minimise.problems import PROBLEMS

from gibbsmin.minimise import Method, Programme, Settings, Solution, Status, minimise, settle_form
from gibbsmin.minimise.certificate import certify
from gibbsmin.minimise.compiled import answer_batch
from gibbsmin.minimise.dispatch import unanswered
from gibbsmin.minimise.kernel.form import forms, interpreted
from gibbsmin.minimise.kernel.storage import Network, network_of

NAMES = ["reformer", "combustion", "sulphur", "big"]
COMPILED_NOW = 10**9  # states that no interpreter would take


def network_of_programme(programme: Programme) -> Network:
    return network_of(programme.matrix, programme.gas, programme.direction, programme.atoms)


def compiled(programme: Programme, settings: Settings | None = None) -> Solution:
    """Answer by the kernel alone, in its compiled form."""
    assert forms.choose(network_of_programme(programme), COMPILED_NOW) is not interpreted
    solution = unanswered(programme)
    answer_batch(programme, settings or Settings(), solution)
    return solution


@pytest.mark.parametrize("name", PROBLEMS)
def test_kernel_alone_proves_each_problem(name: str) -> None:
    programme = PROBLEMS[name]
    solution = compiled(programme)
    assert solution.certified.all()
    assert np.isin(solution.method, (Method.COMPILED, Method.RECOVERY)).all()
    assert_optimal(programme, solution)


@pytest.mark.parametrize("name", NAMES)
def test_interpreted_form_gives_the_compiled_answer(
    name: str, monkeypatch: pytest.MonkeyPatch
) -> None:
    programme = torture(name, 40 if name == "big" else 150)
    expected = compiled(programme)
    monkeypatch.setattr(forms, "choose", lambda *_: interpreted)
    found = unanswered(programme)
    answer_batch(programme, Settings(), found)
    np.testing.assert_array_equal(found.status, expected.status)
    total = expected.amounts.sum(axis=1, keepdims=True)
    np.testing.assert_allclose(found.amounts / total, expected.amounts / total, atol=1e-11)


@pytest.mark.parametrize("kind", [ordinary, torture])
@pytest.mark.parametrize("name", NAMES)
def test_every_state_is_proved(name: str, kind: Callable[[str, int], Programme]) -> None:
    """The kernel's proof is judged by the batch certificate, which shares no code with it."""
    programme = kind(name, 20_000 if kind is torture else 5_000)
    solution = minimise(programme)
    assert (solution.status == Status.CERTIFIED).all()
    conic = (solution.method == Method.CONIC).mean()
    assert conic <= 0.005
    face = solution.certificate.driving_forces > -np.inf
    proof = certify(programme, solution.amounts, solution.multipliers, face)
    assert proof.within(Settings()).all()
    # Both are round-off; the kernel bounds the violation, so its gap may be a little larger.
    np.testing.assert_allclose(proof.gap, solution.certificate.gap, rtol=0, atol=1e-11)
    np.testing.assert_allclose(
        proof.stationarity, solution.certificate.stationarity, rtol=0, atol=1e-11
    )


@pytest.mark.parametrize("name", NAMES)
def test_two_methods_agree(name: str) -> None:
    """Amounts to 1e-8 of the total and the same phases."""
    programme = ordinary(name, 500, seed=11)
    fast, slow = minimise(programme), minimise(programme, Settings(compiled=False))
    assert fast.certified.all()
    assert slow.certified.all()
    assert (slow.method == Method.CONIC).all()
    total = fast.amounts.sum(axis=1, keepdims=True)
    np.testing.assert_allclose(fast.amounts / total, slow.amounts / total, atol=1e-8, rtol=0)
    condensed = ~programme.gas
    np.testing.assert_array_equal(fast.amounts[:, condensed] > 0, slow.amounts[:, condensed] > 0)


def bent(programme: Programme) -> Programme:
    """With states out of line: some moved elsewhere, some fed otherwise, one without carbon."""
    energies, supplies = programme.energies.copy(), programme.supplies.copy()
    energies[7], energies[100:103] = energies[300], energies[250:253]
    supplies[40:44] *= 3.0
    supplies[60] *= np.linspace(0.9, 1.1, supplies.shape[1])
    supplies[80, 0] = 0.0
    return replace(programme, energies=energies, supplies=supplies)


@pytest.mark.parametrize("change", [lambda programme: programme, bent])
@pytest.mark.parametrize("name", NAMES)
def test_warm_answers_equal_cold_ones(name: str, change: Callable[[Programme], Programme]) -> None:
    programme = change(grid(name, 100, 4))
    warm = compiled(programme)
    cold = compiled(programme, Settings(warm_start=False))
    assert warm.certified.all()
    total = cold.amounts.sum(axis=1, keepdims=True)
    np.testing.assert_allclose(warm.amounts / total, cold.amounts / total, atol=1e-10, rtol=0)


@pytest.mark.parametrize("name", ["reformer", "combustion", "sulphur"])
def test_most_states_are_answered_in_lanes(name: str, monkeypatch: pytest.MonkeyPatch) -> None:
    """And as one state after the other is."""
    programme = ordinary(name, 2_000)
    settle_form()
    form = forms.choose(network_of_programme(programme), COMPILED_NOW)
    solutions = []
    for part in (
        form._replace(solve_states=lambda *_: None),
        form._replace(solve_in_lanes=None),
    ):
        monkeypatch.setattr(forms, "choose", lambda *_, part=part: part)
        solutions.append(unanswered(programme))
        answer_batch(programme, Settings(warm_start=False), solutions[-1])
    in_lanes, alone = solutions
    answered = in_lanes.certified
    assert answered.mean() > 0.98
    assert alone.certified.all()
    total = alone.amounts.sum(axis=1, keepdims=True)
    difference = np.abs(in_lanes.amounts - alone.amounts) / total
    assert difference[answered].max() < 1e-12


@pytest.mark.parametrize("name", ["reformer", "combustion", "sulphur"])
def test_batch_equals_a_loop_of_single_states(name: str) -> None:
    programme = ordinary(name, 50)
    batch = compiled(programme, Settings(warm_start=False))
    for state in range(programme.states):
        single = compiled(programme.subset(state))
        np.testing.assert_array_equal(single.amounts[0], batch.amounts[state])
        np.testing.assert_array_equal(single.multipliers[0], batch.multipliers[state])


def test_threads_change_nothing() -> None:
    programme = ordinary("combustion", 10_000)
    settings = Settings(threads=2, warm_start=False)
    two = compiled(programme, settings)
    one = compiled(programme, Settings(threads=1, warm_start=False))
    np.testing.assert_array_equal(two.amounts, one.amounts)


def test_bad_states_leave_their_neighbours_alone() -> None:
    good = grid("reformer", 60, 1)
    energies, supplies = good.energies.copy(), good.supplies.copy()
    energies[10, 3], energies[20, 0], supplies[30, 1] = np.nan, np.inf, np.nan
    supplies[40, 0] = -1.0
    spoilt = Programme(good.matrix, supplies, energies, good.gas, good.direction, good.atoms)
    solution = minimise(spoilt)
    expected = np.full(60, Status.CERTIFIED)
    expected[[10, 20, 30]] = Status.INVALID
    expected[40] = Status.INFEASIBLE
    np.testing.assert_array_equal(solution.status, expected)
    bad = [10, 20, 30, 40]
    assert np.isnan(solution.amounts[bad]).all()
    others = np.delete(np.arange(60), bad)
    np.testing.assert_allclose(
        solution.amounts[others], minimise(good).amounts[others], rtol=0, atol=1e-10
    )


def test_one_state_imports_no_compiler() -> None:
    code = (
        "import sys; from benchmarks.systems import ordinary; from gibbsmin.minimise import *;"
        "assert minimise(ordinary('reformer', 1)).certified.all();"
        "assert not {'numba', 'cvxpy', 'matplotlib'} & set(sys.modules)"
    )
    subprocess.run([sys.executable, "-c", code], check=True, cwd=Path(__file__).parents[1])  # noqa: S603


def test_equal_batches_give_equal_bits() -> None:
    """Whatever else lies in memory: vector loops must not depend on where arrays are."""
    settle_form()
    programme = grid("reformer", 16, 4)
    first = minimise(programme)
    ballast = []  # moves what is allocated next
    for size in np.random.default_rng(5).integers(1, 3000, size=100):
        ballast.append(np.zeros(size))
        again = minimise(programme)
        assert again.amounts.tobytes() == first.amounts.tobytes()
        assert again.certificate.gap.tobytes() == first.certificate.gap.tobytes()
