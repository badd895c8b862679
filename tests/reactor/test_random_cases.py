"""Two thousand random valid cases from the whole library, every one of them certified.

A case is a set of elements, candidates among all records of these elements, a feed of some of
the candidates, a temperature of 300–4000 K and a pressure of 1e-3–300 bar.  Cases that share
their candidates are solved as one batch.
"""

from __future__ import annotations

import numpy as np
import numpy.typing as npt
import pytest
from scipy.optimize import linprog

from gibbsmin.minimise import Programme, Solution, minimise
from gibbsmin.reactor.candidates import Selection
from gibbsmin.reactor.chemistry import Chemistry
from gibbsmin.reactor.model import StageModel, stage_model
from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.species import Species

SEED = 20250
BATCHES = 200
STATES = 10
MOST_CANDIDATES = 250
COMMON = ("H", "C", "N", "O", "S", "Cl")
T_RANGE = (300.0, 4000.0)  # K
P_RANGE = (1e2, 3e7)  # Pa
GAP, BALANCE, STATIONARITY = 1e-10, 1e-12, 1e-10
AGREEMENT = 1e-8  # in RT
SMALLEST_FRACTION = 1e-300  # below it a mole fraction loses digits to underflow
FORCED_TO_ZERO = 1e-5  # mol, against feeds of at least 1e-3 mol


@pytest.mark.parametrize("number", range(BATCHES))
def test_every_state_of_a_random_batch_is_certified(number: int) -> None:
    programme = random_programme(number)
    solution = minimise(programme)
    certificate = solution.certificate
    assert solution.certified.all()
    assert (certificate.gap <= GAP).all()
    assert (certificate.balance <= BALANCE).all()
    assert (certificate.stationarity <= STATIONARITY).all()
    for state in range(programme.states):
        assert_optimal(programme, solution, state)


def assert_optimal(programme: Programme, solution: Solution, state: int) -> None:
    """The optimality conditions, recomputed without the code that writes certificates."""
    A, b, gas = programme.matrix, programme.supplies[state], programme.gas
    n, multipliers = solution.amounts[state], solution.multipliers[state]
    assert (n >= 0).all()
    assert (np.abs(A @ n - b) <= BALANCE * (np.abs(A) @ n + np.abs(b))).all()

    forces = np.nan_to_num(multipliers) @ A - programme.energies[state]
    present, has_gas = n > 0, (n[gas] > 0).any()
    mixed = gas & (n > SMALLEST_FRACTION * n[gas].sum())
    assert np.abs(forces[present & ~gas]).max(initial=0.0) <= AGREEMENT
    assert np.abs(np.log(n[mixed] / n[mixed].sum()) - forces[mixed]).max(initial=0.0) <= AGREEMENT

    limit = np.where(gas, np.log(SMALLEST_FRACTION) if has_gas else -AGREEMENT, AGREEMENT)
    suspects = ~present & (forces > limit)
    for column in np.flatnonzero(suspects):
        assert most_possible(programme, state, column) <= FORCED_TO_ZERO
    if not has_gas:
        assert np.exp(forces[gas & ~suspects]).sum() <= 1 + AGREEMENT


def most_possible(programme: Programme, state: int, column: int) -> float:
    """The most of a species that the supplies allow, mol."""
    cost = np.zeros(programme.matrix.shape[1])
    cost[column] = -1.0
    answer = linprog(cost, A_eq=programme.matrix, b_eq=programme.supplies[state])
    return float(-answer.fun)


def random_programme(number: int) -> Programme:
    random = np.random.default_rng((SEED, number))
    model, feed = random_feed(random, random_candidates(random))
    T = random.uniform(*T_RANGE, STATES)
    P = np.exp(random.uniform(*np.log(P_RANGE), STATES))
    return model.programme(T, P, feed)


def random_candidates(random: np.random.Generator) -> list[Species]:
    """All or some of the records of one to seven elements, at least two."""
    library = load_library()
    elements = sorted({symbol for record in library.records for symbol, _ in record.elements})
    records: tuple[Species, ...] = ()
    while not 2 <= len(records) <= MOST_CANDIDATES:
        common = random.choice(COMMON, size=random.integers(0, 6), replace=False)
        others = random.choice(elements, size=random.integers(0, 4), replace=False)
        records = library.of_elements({*common.tolist(), *others.tolist()})
    if random.random() < 0.5:
        return list(records)
    count = random.integers(2, len(records) + 1)
    return [records[k] for k in np.sort(random.choice(len(records), size=count, replace=False))]


def random_feed(
    random: np.random.Generator, candidates: list[Species]
) -> tuple[StageModel, npt.NDArray[np.float64]]:
    """One to six candidates as the feed, in amounts that span four decades."""
    size = random.integers(1, min(6, len(candidates)) + 1)
    chosen = random.choice(len(candidates), size=size, replace=False)
    feed = [candidates[k] for k in chosen]
    consider = tuple(record.name for record in candidates)
    model = stage_model(Chemistry(Selection(consider=consider)), feed, load_library())
    return model, 10 ** random.uniform(-3, 1, (STATES, size))
