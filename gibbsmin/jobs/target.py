"""Targets: the value of an axis's number at which a result meets a given value."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray, IntArray
from gibbsmin.errors import InputError
from gibbsmin.jobs.axis import Axis
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.crossings import find_crossings
from gibbsmin.jobs.feed_parts import resolve
from gibbsmin.jobs.search import Path, path_of, stage_named
from gibbsmin.jobs.train import Step
from gibbsmin.reactor.conversion import conversions
from gibbsmin.results import WATER
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Phase
from gibbsmin.units import read_amount, read_heat, read_pressure, read_share, read_temperature

Result = Callable[[Step], FloatArray]
Reader = Callable[[object], float]

_OF_STAGE: Mapping[str, tuple[Reader, Result]] = {
    "temperature": (read_temperature, lambda step: step.states.equilibria.temperature),
    "pressure": (read_pressure, lambda step: step.states.equilibria.pressure),
    "heat": (lambda given: read_heat(given).value, lambda step: step.states.energy.heat),
    "shaft work": (
        lambda given: read_heat(given).value,
        lambda step: step.states.energy.shaft_work,
    ),
}


@dataclass(frozen=True)
class Target:
    """Where a result meets a value: Z answers in m rows.

    Attributes
    ----------
    result, stage : what is looked at and the stage it is of
    wanted : its value in SI
    axis, second : what varies, and what varies from row to row where there is such an axis
    row : (Z,) which value of the second axis each answer belongs to; 0 without one
    position, shown : (Z,) on the axis, in SI and in the user's unit
    rising : (Z,) whether the result rises there with the axis's number
    reached : (Z,) the result in SI, found by solving once more
    certified : (Z,) whether that state is proved
    lowest, highest : (m,) the result's range on the grid, which tells how far off a target is
    unsolved : (m,) grid points without an answer
    """

    result: str
    stage: str
    wanted: float
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
        read, result = result_of(case.target.result, path.library)
    except InputError as error:
        raise error.at(key="target.result", file=case.file) from None
    try:
        wanted = read(case.target.value)
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
    return Target(
        result=case.target.result,
        stage=stage.name,
        wanted=wanted,
        axis=path.axis,
        second=path.second,
        row=found.row,
        position=found.position,
        shown=path.shown(found.position),
        rising=found.rising,
        reached=reached,
        certified=certified,
        lowest=_extreme(by_row, np.fmin),
        highest=_extreme(by_row, np.fmax),
        unsolved=found.unsolved.sum(axis=1),
    )


def result_of(text: str, library: Library) -> tuple[Reader, Result]:
    """How a result's value is read, and how it is taken from a solved stage.

    Results are ``temperature``, ``pressure``, ``heat``, ``shaft work`` and, with a species,
    ``fraction``, ``dry fraction``, ``amount``, ``conversion`` and ``activity``.

    Raises
    ------
    InputError
        for another text; a record that is no candidate is told when the result is taken.
    """
    if text in _OF_STAGE:
        return _OF_STAGE[text]
    kind, _, species = text.rpartition(" ")
    if kind not in _OF_SPECIES:
        raise InputError(
            f'found "{text}", which is no result',
            f"accepted is {', '.join(_OF_STAGE)}, or one of {', '.join(_OF_SPECIES)} with a "
            'species, such as "dry fraction CH4"',
        )
    name = resolve(species, library).name
    read, of = _OF_SPECIES[kind]
    return read, lambda step: of(step, name)


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
    return np.where(certified, result(step), np.nan), certified


def _column(step: Step, name: str) -> int:
    names = [record.name for record in step.states.model.records]
    if name not in names:
        raise InputError(
            f'found "{name}", which is no candidate of {step.stage.name}',
            f"accepted is one of {', '.join(names)}",
            key="target.result",
        )
    return names.index(name)


def _amount(step: Step, name: str) -> FloatArray:
    return step.states.equilibria.amounts[:, _column(step, name)]


def _fraction(step: Step, name: str, without: str = "") -> FloatArray:
    records = step.states.model.records
    counted = np.array([r.phase is Phase.GAS and r.name != without for r in records])
    if not counted[_column(step, name)]:
        raise InputError(
            f'found "{name}", which is no part of that gas',
            f"accepted is a gas, such as {records[int(np.argmax(counted))].name}",
            key="target.result",
        )
    with np.errstate(invalid="ignore", divide="ignore"):
        total = step.states.equilibria.amounts[:, counted].sum(axis=1)
        return np.asarray(_amount(step, name) / total)


def _conversion(step: Step, name: str) -> FloatArray:
    shares = conversions(
        step.states.inlet, step.states.model.records, step.states.equilibria.amounts
    )
    if name not in shares:
        raise InputError(
            f'found "{name}", which does not enter {step.stage.name}',
            f"accepted is one of {', '.join(shares)}",
            key="target.result",
        )
    return shares[name]


def _activity(step: Step, name: str) -> FloatArray:
    forces = step.states.equilibria.solution.certificate.driving_forces
    return np.asarray(np.exp(forces[:, _column(step, name)]))


def _moles(given: object) -> float:
    return read_amount(given).value


def _plain(given: object) -> float:
    if isinstance(given, bool) or not isinstance(given, int | float) or given <= 0.0:
        raise InputError(f'found "{given}"', "accepted is a number above zero, such as 0.5")
    return float(given)


_OF_SPECIES: Mapping[str, tuple[Reader, Callable[[Step, str], FloatArray]]] = {
    "fraction": (read_share, _fraction),
    "dry fraction": (read_share, lambda step, name: _fraction(step, name, WATER)),
    "conversion": (read_share, _conversion),
    "amount": (_moles, _amount),
    "activity": (_plain, _activity),
}
