"""The kernel over a batch: blocks of states on all cores."""

from __future__ import annotations

import os
from collections.abc import Callable
from concurrent.futures import ThreadPoolExecutor
from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.minimise.kernel.form import forms
from gibbsmin.minimise.kernel.lane_storage import lane_scratch_for
from gibbsmin.minimise.kernel.memory import in_one_memory
from gibbsmin.minimise.kernel.storage import Answers, Network, network_of, scratch_for
from gibbsmin.minimise.programme import Programme
from gibbsmin.minimise.settings import Settings
from gibbsmin.minimise.solution import Solution
from gibbsmin.minimise.status import Method, Status

_BLOCK = 16384

_STRIDE = 6  # of the coarse grid that warm starts in lanes follow
_WINDOW = 2048
_KEPT = 128
_LARGEST_KEPT = 2_000  # entries of a tableau


@dataclass(frozen=True, slots=True, eq=False)
class Warmth:
    """Enthalpies given in place of temperatures.

    The programme's energies then are what of g̃ does not depend on temperature; its other part
    follows from the pieces.

    Parameters
    ----------
    pieces
        A, B, C, D, E, h, s over R of each species' pieces, shape (7, species, K).
    breaks
        Temperatures at which a further piece begins, shape (K − 1, species).
    offsets
        Added to H/R, K, shape (states, species).
    contents
        H/R wanted, K mol, shape (states,).
    start
        Where to look for the temperature first, K, shape (states,).
    limits
        Lowest and highest temperature, K.
    """

    pieces: FloatArray
    breaks: FloatArray
    offsets: FloatArray
    contents: FloatArray
    start: FloatArray
    limits: tuple[float, float]


def answer_batch(programme: Programme, settings: Settings, solution: Solution) -> None:
    """Write what the kernel can prove into the solution; leave the rest unanswered."""
    none = np.zeros(programme.energies.shape[1])
    cold = Warmth(
        np.zeros((7, none.size, 1)),
        np.zeros((0, none.size)),
        none[np.newaxis],
        np.zeros(programme.states),
        np.zeros(programme.states),
        (0.0, 0.0),
    )
    answer_heated_batch(programme, cold, settings, solution)


def answer_heated_batch(
    programme: Programme, warmth: Warmth, settings: Settings, solution: Solution
) -> FloatArray:
    """The same at the enthalpies given; temperatures (states,), NaN where none is proved.

    A start of 0 leaves the programme's energies as they are.  A block of consecutive states is
    one chain of warm starts and one worker's task; the kernel releases the interpreter lock, so
    that threads share the cores.
    """
    temperatures = warmth.start.copy()
    if programme.states == 0:
        return temperatures
    network = network_of(programme.matrix, programme.gas, programme.direction, programme.atoms)
    form = forms.choose(network, programme.states)
    tolerances = np.array(
        [settings.gap_tolerance, settings.balance_tolerance, settings.stationarity_tolerance]
    )
    figures = np.full((programme.states, 3), np.nan)
    answers = Answers(
        solution.amounts,
        solution.multipliers,
        solution.certificate.driving_forces,
        figures,
        solution.status,
        solution.method,
    )
    places = _places(network)
    stride = _STRIDE if settings.warm_start else 1
    heated = bool(temperatures.any())
    workers = min(settings.threads or os.cpu_count() or 1, programme.states)
    rounds = -(-programme.states // (_BLOCK * workers))
    block = -(-programme.states // (rounds * workers))  # so that all workers end together

    pieces = np.ascontiguousarray(warmth.pieces[:, network.order]).reshape(7, -1)
    breaks = np.ascontiguousarray(warmth.breaks[:, network.order])
    offsets = np.ascontiguousarray(warmth.offsets)

    def run(first: int) -> None:
        part = slice(first, first + block)
        energies, supplies = programme.energies[part], programme.supplies[part]
        own_answers = Answers._make(array[part] for array in answers)
        if form.solve_in_lanes is not None and places > 0 and not heated:
            waiting = min(block, _WINDOW)
            own_network, lanes = in_one_memory(
                (network, lane_scratch_for(network, places, waiting))
            )
            form.solve_in_lanes(
                own_network, lanes, energies, supplies, tolerances, stride, own_answers
            )
            if (own_answers.status == Status.CERTIFIED).all():
                return
        own_network, scratch = in_one_memory((network, scratch_for(network, pieces, breaks)))
        scratch.heat.target[1:3] = warmth.limits
        form.solve_states(
            own_network,
            scratch,
            energies,
            supplies,
            tolerances,
            settings.warm_start,
            warmth.contents[part],
            offsets[part],
            temperatures[part],
            own_answers,
        )

    share_out(run, range(0, programme.states, block), workers)
    _settle(programme, solution, figures)
    return temperatures


def share_out(run: Callable[[int], None], blocks: range, workers: int) -> None:
    """Run the blocks on so many threads, of which this one is the first."""
    waiting = iter(blocks)  # taking the next one is a single step of the interpreter

    def work() -> None:
        for first in waiting:
            run(first)

    helpers = min(workers, len(blocks)) - 1
    if helpers == 0:
        work()
        return
    with ThreadPoolExecutor(helpers) as pool:
        helping = [pool.submit(work) for _ in range(helpers)]
        work()
        for helper in helping:
            helper.result()


def _places(network: Network) -> int:
    """How many tableaus a worker keeps; none where bases are as many as states."""
    rows, species = network.matrix.shape
    return _KEPT if rows * (species + rows) <= _LARGEST_KEPT else 0


def _settle(programme: Programme, solution: Solution, figures: np.ndarray) -> None:
    """Keep the proofs of certified states; leave the others to the next method."""
    certified = solution.status == Status.CERTIFIED
    figures[~certified] = np.nan
    certificate = solution.certificate
    certificate.gap[:] = figures[:, 0]
    certificate.balance[:] = figures[:, 1]
    certificate.stationarity[:] = figures[:, 2]
    solution.method[~certified] = Method.NONE
    # Whether supplies are infeasible is for the exact search for the face to say.
    solution.status[solution.status == Status.INFEASIBLE] = Status.UNCERTIFIED
    _unbound(programme, solution)


def _unbound(programme: Programme, solution: Solution) -> None:
    """NaN for the multiplier of each row that holds no species of the face."""
    if not np.isneginf(np.fmin.reduce(solution.certificate.driving_forces, axis=None)):
        return
    off = np.flatnonzero(np.isneginf(solution.certificate.driving_forces).any(axis=1))
    used = (programme.matrix != 0).astype(float)
    face = np.isfinite(solution.certificate.driving_forces[off]).astype(float)
    solution.multipliers[off] = np.where(face @ used.T > 0, solution.multipliers[off], np.nan)
