"""Fixed points of a batch: linear and bent maps, states that have none."""

from __future__ import annotations

import numpy as np
import pytest

from gibbsmin.arrays import FloatArray, IntArray
from gibbsmin.reactor.settle import SETTLED, Answer, settle, settle_along


def test_a_linear_map_settles_in_a_few_rounds() -> None:
    random = np.random.default_rng(1)
    maps = random.normal(size=(50, 4, 4)) * 0.2
    goals = random.normal(size=(50, 4))
    calls = np.zeros(50, dtype=int)

    def answer(x: FloatArray, index: IntArray) -> tuple[FloatArray, FloatArray]:
        calls[index] += 1
        return goals[index] + np.einsum("bij,bj->bi", maps[index], x), np.ones_like(x)

    found = settle(answer, np.zeros((50, 4)))
    expected = np.linalg.solve(np.eye(4) - maps, goals[..., None])[..., 0]
    assert (found.error <= SETTLED).all()
    assert found.x == pytest.approx(expected, abs=1e-9)
    radius = np.abs(np.linalg.eigvals(maps)).max(axis=1)
    plain = np.log(SETTLED) / np.log(radius)
    assert np.median(calls) < 0.5 * np.median(plain)


def test_a_map_that_overshoots_settles_in_shorter_steps() -> None:
    def answer(x: FloatArray, _: IntArray) -> tuple[FloatArray, FloatArray]:
        return 3.0 * np.cos(x), np.ones_like(x)

    found = settle(answer, np.full((1, 1), 0.5))
    assert found.error[0] <= SETTLED
    assert 3.0 * np.cos(found.x[0, 0]) == pytest.approx(found.x[0, 0], abs=1e-9)


def test_what_has_no_answer_or_does_not_settle_says_so_and_leaves_the_others() -> None:
    last = np.full(3, np.nan)

    def answer(x: FloatArray, index: IntArray) -> tuple[FloatArray, FloatArray]:
        last[index] = x[:, 0]
        kinds = np.array([0.5, np.nan, 1.0])[index, np.newaxis]
        return kinds * x + 1.0, np.ones_like(x)

    found = settle(answer, np.zeros((3, 1)))
    assert found.x[0, 0] == pytest.approx(2.0)
    assert np.isnan(found.error[1])
    assert found.error[2] > SETTLED
    assert last[0] == found.x[0, 0]
    assert last[2] == found.x[2, 0]


def test_states_along_a_line_learn_from_their_neighbours() -> None:
    position = np.linspace(0.0, 1.0, 400)[:, np.newaxis]
    calls = {"alone": 0, "along": 0}

    def answer_for(kind: str) -> Answer:
        def answer(x: FloatArray, index: IntArray) -> tuple[FloatArray, FloatArray]:
            calls[kind] += len(index)
            return np.cos(x * (1.0 + 0.5 * position[index])) / 2.0, np.ones_like(x)

        return answer

    alone = settle(answer_for("alone"), np.zeros((400, 1)))
    along = settle_along(answer_for("along"), np.zeros((400, 1)))
    assert (along.error <= SETTLED).all()
    assert along.x == pytest.approx(alone.x, abs=1e-9)
    assert calls["along"] < 0.8 * calls["alone"]


def test_a_state_that_fails_spoils_no_neighbour() -> None:
    def answer(x: FloatArray, index: IntArray) -> tuple[FloatArray, FloatArray]:
        result = np.cos(x) / 2.0
        result[(index == 8) | (index == 13)] = np.nan
        return result, np.ones_like(x)

    found = settle_along(answer, np.zeros((100, 1)))
    bad = np.isin(np.arange(100), (8, 13))
    assert np.isnan(found.error).tolist() == bad.tolist()
    assert (found.error[~bad] <= SETTLED).all()
