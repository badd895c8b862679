"""Whether all crossings of a phase along an axis of the feed are found.

Along an axis that moves the supplies b on a straight line, at constant g̃, the driving force
a·λ − g̃ of the phase is bounded between any two positions by what is known at these
(:mod:`gibbsmin.minimise.between`).  A bound that keeps its sign proves the interval free of
crossings; otherwise it is halved.  The intervals of all rows are examined together.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray, IntArray
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.crossings import Crossings
from gibbsmin.jobs.search import Path, driving_force
from gibbsmin.minimise import Interval, largest_between

_ABOUT = 1e-5
"""Share of the axis about a crossing that is not examined for further ones: nearer to it the digits
of the multipliers are too few."""

_LEVELS = 16
"""How often an interval is halved at most."""

_MOST = 20_000
"""How many intervals are examined at a time, lest halving without end fill the memory."""

_CLEAR = 1e-9
"""How far from zero a bound must stay, in RT: more than the certificates of both ends leave."""


@dataclass(frozen=True)
class Completeness:
    """What is known of further crossings in one row.

    Attributes
    ----------
    proved : whether there are no others, but for 0.001 % of the axis about each
    intervals : how many intervals that took
    text : a sentence for people
    """

    proved: bool
    intervals: int
    text: str


def completeness(
    kept_out: Case, path: Path, phase: str, found: Crossings
) -> tuple[Completeness, ...]:
    """The statement for each row, from a case with the phase kept out."""
    size = path.grid.size
    if not _is_straight(kept_out, path):
        text = f"Complete to the grid used: {size} values of {path.axis.name}."
        return tuple(Completeness(False, 0, text) for _ in range(path.rows))
    row, ends = _intervals(path, found)
    examined = np.zeros(path.rows, dtype=np.int64)
    for _ in range(_LEVELS):
        if not 0 < row.size <= _MOST:
            break
        examined += np.bincount(row, minlength=path.rows)
        left_open = ~_are_free(kept_out, path, phase, row, ends)
        row, ends = _halved(row[left_open], ends[:, left_open])
    return tuple(
        _statement(path, int(examined[each]), ends[:, row == each]) for each in range(path.rows)
    )


def _statement(path: Path, examined: int, left_open: FloatArray) -> Completeness:
    if not left_open.size:
        text = (
            "Proved: no other crossing between the ends of the axis, but for 0.001 % of it "
            "about each."
        )
        return Completeness(True, examined, text)
    low, high = path.shown(np.array([left_open.min(), left_open.max()])).tolist()
    text = (
        f"Not proved between {low:.9g} and {high:.9g} {path.axis.unit}".rstrip()
        + f"; complete to the grid used: {path.grid.size} values."
    )
    return Completeness(False, examined, text)


def _is_straight(case: Case, path: Path) -> bool:
    """Whether the axis moves the supplies of a stage of fixed temperature and pressure alone.

    In a real gas it moves the energies as well, by way of the fugacity coefficients.
    """
    specification = path.stage.specification
    name = path.axis.name
    of_feed = bool(path.axis.scale) or (
        name.startswith("feed.") and (".amounts." in name or name.endswith(".total"))
    )
    return (
        of_feed
        and path.stage.chemistry.equation is None
        and specification.temperature is not None
        and specification.pressure is not None
        and path.stage.key == case.stages[0].key
    )


def _intervals(path: Path, found: Crossings) -> tuple[IntArray, FloatArray]:
    """Rows (I,) and ends (2, I) of the intervals between grid points, without the crossings."""
    grid = path.grid
    about = _ABOUT * (grid[-1] - grid[0])
    rows, ends = [], []
    for row in range(path.rows):
        crossings = found.position[found.row == row]
        places = np.concatenate([grid, crossings - about, crossings + about])
        places = np.unique(places[(places >= grid[0]) & (places <= grid[-1])])
        near = np.abs(places[:, np.newaxis] - crossings) < about * (1.0 - 1e-6)
        places = places[~near.any(axis=1)]
        pairs = np.stack([places[:-1], places[1:]])
        holds = (crossings > pairs[0][:, np.newaxis]) & (crossings < pairs[1][:, np.newaxis])
        pairs = pairs[:, ~holds.any(axis=1)]
        rows.append(np.full(pairs.shape[1], row))
        ends.append(pairs)
    return np.concatenate(rows), np.concatenate(ends, axis=1)


def _halved(row: IntArray, ends: FloatArray) -> tuple[IntArray, FloatArray]:
    middle = ends.mean(axis=0)
    halves = np.concatenate([[ends[0], middle], [middle, ends[1]]], axis=1)
    return np.concatenate([row, row]), halves


def _are_free(kept_out: Case, path: Path, phase: str, row: IntArray, ends: FloatArray) -> BoolArray:
    """Whether no crossing lies between the ends (2, I); False where the bounds do not tell."""
    step = path.step(kept_out, ends.ravel(), np.concatenate([row, row]))
    model, found = step.states.model, step.states.equilibria
    programme = model.programme(found.temperature, found.pressure, step.states.inlet.amounts)
    force = driving_force(step, phase).reshape(2, -1)
    potentials = found.solution.multipliers
    with np.errstate(invalid="ignore"):
        keeps_sign = (force[0] * force[1] > 0.0) & np.isfinite(potentials).all(axis=1).reshape(
            2, -1
        ).all(axis=0)
    free = np.zeros(row.size, dtype=bool)
    chosen = np.flatnonzero(keeps_sign)
    if not chosen.size:
        return free
    shape = (2, row.size, -1)
    intervals = Interval(
        energies=programme.energies[chosen],
        supplies=programme.supplies.reshape(shape)[:, chosen],
        multipliers=potentials.reshape(shape)[:, chosen],
    )
    column = programme.matrix[:, [record.name for record in model.records].index(phase)]
    away = np.sign(force[0, chosen])
    furthest = largest_between(programme, intervals, -away[:, np.newaxis] * column)
    free[chosen] = np.abs(force[0, chosen]) - furthest > _CLEAR
    return free
