"""What states in lanes are kept in: eight side by side, and the window of those that wait."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray, IntArray
from gibbsmin.minimise.kernel.storage import (
    Equations,
    Network,
    Pivots,
    Point,
    State,
    Tableau,
    pivots_for,
    scratch_for,
)
from gibbsmin.minimise.kernel.vector import LANES


class Lanes(NamedTuple):
    """Eight states of one basis side by side, a state a column; rows as in the tuples of one state.

    ``part`` and ``listed`` list the nonzero entries of the basis' gas rows, those of the k-th
    unknown from ``part[2k]`` on, negative ones from ``part[2k + 1]`` on.
    ``sums`` are Σ y and the amount of gas, ``odds`` by how much the condensed phases are at odds
    with the basis.  ``held`` is the member of the window in each lane, ``spent`` its iterations.
    From ``energies`` on is what only the proof needs.
    """

    reduced: FloatArray
    supply: FloatArray
    log_fraction: FloatArray
    log_total: FloatArray
    amounts: FloatArray
    sums: FloatArray
    gain: FloatArray
    loss: FloatArray
    per_part: FloatArray
    weight: FloatArray
    jacobian: FloatArray
    step: FloatArray
    residual: FloatArray
    odds: FloatArray
    held: IntArray
    spent: IntArray
    part: IntArray
    listed: IntArray
    energies: FloatArray
    feed: FloatArray
    multipliers: FloatArray
    forces: FloatArray
    unmet: FloatArray
    size: FloatArray
    figures: FloatArray


class Window(NamedTuple):
    """States that wait for the lanes: which each is, where it stands, the place of its basis.

    ``turns`` says which came to need another basis.  ``order`` lists the members place by place,
    those of place p from ``begin[p]`` on.  ``kept`` and ``kept_total`` are place and ln N of each
    state of the stretch at hand that was proved; ``node`` and ``weight`` up to four states of it
    with a curve through them.
    """

    state: IntArray
    place: IntArray
    turns: BoolArray
    reduced: FloatArray
    supply: FloatArray
    log_fraction: FloatArray
    log_total: FloatArray
    order: IntArray
    begin: IntArray
    kept: IntArray
    kept_total: FloatArray
    node: IntArray
    weight: FloatArray


class LaneScratch(NamedTuple):
    """One worker's memory for states in lanes."""

    state: State
    tableau: Tableau
    pivots: Pivots
    point: Point
    equations: Equations
    lanes: Lanes
    window: Window


def lane_scratch_for(network: Network, places: int, members: int) -> LaneScratch:
    """Memory for so many tableaus to keep, and so many states to wait for the lanes."""
    rows, species = network.matrix.shape
    like = scratch_for(network, np.zeros((7, 0)), np.zeros((0, 0)))
    return LaneScratch(
        like.state,
        like.tableau,
        pivots_for(rows, species, places),
        like.point,
        like.equations,
        lanes_for(rows, species),
        window_for(rows, species, places, members),
    )


def lanes_for(rows: int, species: int) -> Lanes:
    """Memory for eight states."""

    def none(count: int) -> FloatArray:
        return np.zeros((count, LANES))

    return Lanes(
        reduced=none(species),
        supply=none(rows),
        log_fraction=none(rows),
        log_total=none(1),
        amounts=none(species),
        sums=none(2),
        gain=none(rows),
        loss=none(rows),
        per_part=none(2 * rows),
        weight=none(rows * species),
        jacobian=none((rows + 1) ** 2),
        step=none(rows + 1),
        residual=none(1),
        odds=none(1),
        held=np.zeros(LANES, dtype=np.int64),
        spent=np.zeros(LANES, dtype=np.int64),
        part=np.zeros(2 * rows + 1, dtype=np.int64),
        listed=np.zeros(rows * species, dtype=np.int64),
        energies=none(species),
        feed=none(rows),
        multipliers=none(rows),
        forces=none(species),
        unmet=none(rows),
        size=none(rows),
        figures=none(3),
    )


def window_for(rows: int, species: int, places: int, members: int) -> Window:
    """Memory for the states that wait for the lanes."""
    return Window(
        state=np.zeros(members, dtype=np.int64),
        place=np.zeros(members, dtype=np.int64),
        turns=np.zeros(members, dtype=np.bool_),
        reduced=np.zeros((members, species)),
        supply=np.zeros((members, rows)),
        log_fraction=np.zeros((members, rows)),
        log_total=np.zeros(members),
        order=np.zeros(members, dtype=np.int64),
        begin=np.zeros(places + 3, dtype=np.int64),
        kept=np.zeros(members, dtype=np.int64),
        kept_total=np.zeros(members),
        node=np.zeros(4, dtype=np.int64),
        weight=np.zeros(4),
    )
