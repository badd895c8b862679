"""Targets: the value of an axis's number at which a result meets a given value."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray, IntArray
from gibbsmin.errors import InputError
from gibbsmin.jobs.axis import Axis
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.crossings import find_crossings
from gibbsmin.jobs.search import Path, path_of, stage_named
from gibbsmin.jobs.target_results import Result, result_of

_MET = 1e-8
"""Share of the wanted value within which it is met; elsewhere the result jumps over it."""

_OF_RANGE = 1e-12
"""The same as a share of the result's range, for a wanted value of zero."""


@dataclass(frozen=True)
class Target:
    """Where a result meets a value: Z answers in m rows.

    Attributes
    ----------
    result, stage : what is looked at and the stage it is of
    wanted : its value in SI
    unit, per_unit : the unit in which values of the result are told, and the SI value of one
    axis, second : what varies, and what varies from row to row where there is such an axis
    row : (Z,) which value of the second axis each answer belongs to; 0 without one
    position, shown : (Z,) on the axis, in SI and in the user's unit
    rising : (Z,) whether the result rises there with the axis's number
    reached : (Z,) the result in SI, found by solving once more
    certified : (Z,) whether that state is proved
    lowest, highest : (m,) the result's range on the grid, which tells how far off a target is
    unsolved : (m,) grid points without an answer
    lost_row, lost : (L,) and (2, L), rows and positions in the user's unit between which the result
        passes the value without meeting it: it jumps there, or no state is certified
    """

    result: str
    stage: str
    wanted: float
    unit: str
    per_unit: float
    axis: Axis
    second: Axis | None
    row: IntArray
    position: FloatArray
    shown: FloatArray
    rising: BoolArray
    reached: FloatArray
    certified: BoolArray
    lowest: FloatArray
    highest: FloatArray
    unsolved: IntArray
    lost_row: IntArray
    lost: FloatArray


def target(case: Case) -> Target:
    """All values of the case's first axis at which its ``[target]`` result meets the value.

    A second axis gives a curve.  None, one or several answers are found: those that the grid
    separates, or between which the result turns.

    Raises
    ------
    InputError
        for a case without the table or an axis, an unknown result, a value in the wrong unit,
        and what the case itself gets wrong.
    """
    if case.target is None:
        raise InputError(
            "found no [target] table",
            'accepted is one, such as [target] with result = "dry fraction CH4" and value = "2 %"',
            key="target",
            file=case.file,
        )
    stage = stage_named(case, case.target.stage, "target.stage")
    path = path_of(case, stage, case.library)
    try:
        result = result_of(case.target.result, case)
    except InputError as error:
        raise error.at(key="target.result", file=case.file) from None
    try:
        wanted = result.read(case.target.value)
    except InputError as error:
        raise error.at(key="target.value", file=case.file) from None

    def value(position: FloatArray, row: IntArray) -> FloatArray:
        return _values(path, case, result, position, row)[0]

    try:
        grid = value(np.tile(path.grid, path.rows), np.repeat(np.arange(path.rows), path.grid.size))
        found = find_crossings(lambda x, row: value(x, row) - wanted, path.grid, path.rows)
        reached, certified = _values(path, case, result, found.position, found.row)
    except InputError as error:
        raise error.at(file=case.file) from None
    by_row = grid.reshape(path.rows, -1)
    lowest, highest = _extreme(by_row, np.fmin), _extreme(by_row, np.fmax)
    room = np.fmax(_MET * abs(wanted), _OF_RANGE * (highest - lowest)[found.row])
    with np.errstate(invalid="ignore"):
        met = np.abs(reached - wanted) <= room
    jumps = np.stack([found.position[~met]] * 2)
    return Target(
        result=case.target.result,
        stage=stage.name,
        wanted=wanted,
        unit=result.unit,
        per_unit=result.per_unit,
        axis=path.axis,
        second=path.second,
        row=found.row[met],
        position=found.position[met],
        shown=path.shown(found.position[met]),
        rising=found.rising[met],
        reached=reached[met],
        certified=certified[met],
        lowest=lowest,
        highest=highest,
        unsolved=found.unsolved.sum(axis=1),
        lost_row=np.concatenate([found.lost_row, found.row[~met]]),
        lost=path.shown(np.concatenate([found.lost, jumps], axis=1)),
    )


def _extreme(values: FloatArray, of: np.ufunc) -> FloatArray:
    return np.asarray(of.reduce(values, axis=1))


def _values(
    path: Path, case: Case, result: Result, position: FloatArray, row: IntArray
) -> tuple[FloatArray, BoolArray]:
    """The result and its proof at positions (k,); NaN where not certified."""
    if position.size == 0:
        return np.zeros(0), np.zeros(0, dtype=bool)
    step = path.step(case, position, row)
    certified = step.states.equilibria.solution.certified
    return np.where(certified, result.of(step), np.nan), certified
