"""Error bars: how sure a case's results are, and which of its numbers make them unsure."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.errors import InputError
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.inputs import (
    Input,
    input_changes,
    record_inputs,
    stage_inputs,
    stream_inputs,
)
from gibbsmin.jobs.sensitivity import Sensitivities, sensitivities
from gibbsmin.jobs.stated import StatedUncertainty
from gibbsmin.jobs.train import Step, answered, run_train
from gibbsmin.thermo.species import Species

_NEGATIVE = -1e-9
"""A smallest eigenvalue below this is no round-off."""


def uncertainty(case: Case) -> tuple[Sensitivities, ...]:
    """First-order error bars and sensitivities of a case's stages, in order.

    Every step that a prediction tells has an entry, a joined bypass too.  Inputs are the enthalpies
    of formation and entropies of all records that take part, and the numbers of the case itself.

    Raises
    ------
    InputError
        as :func:`gibbsmin.jobs.predict.predict`, and for correlations that contradict each other.
    """
    library = case.library
    steps = list(answered(run_train(case, library)))
    inputs = _inputs(case, steps)
    changes, correlation = input_changes(case, inputs), correlation_of(case, inputs)
    return tuple(sensitivities(steps, changes, correlation, library))


def uncertain_inputs(case: Case, steps: Sequence[Step]) -> list[Input]:
    """The numbers that a solved train rests on and that are not exact."""
    return [each for each in _inputs(case, steps) if np.any(each.uncertainty)]


def _inputs(case: Case, steps: Sequence[Step]) -> list[Input]:
    return _stated(
        case,
        [
            *stream_inputs(case.feeds),
            *stage_inputs(case.stages),
            *record_inputs(_records(steps)),
        ],
    )


def _records(steps: Sequence[Step]) -> list[Species]:
    """Every record that enters or may leave a stage, once."""
    records = (
        record
        for step in steps
        for record in (*step.states.inlet.records, *step.states.model.records)
    )
    return list(dict.fromkeys(records))


def _stated(case: Case, inputs: Sequence[Input]) -> list[Input]:
    """The inputs with the uncertainties that the case states."""
    stated = {each.name: each for each in case.uncertainties}
    return [
        replace(each, uncertainty=_in_steps(case, each, stated[each.name]), origin="stated")
        if each.name in stated
        else each
        for each in inputs
    ]


def _in_steps(case: Case, given: Input, stated: StatedUncertainty) -> FloatArray:
    """A stated uncertainty in steps; an amount of zero has no step and so none."""
    step = np.asarray(given.step, dtype=float)
    size = np.asarray(stated.value)
    if stated.is_share:
        size = stated.value * np.abs(_value(case, given.name))
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.where(step == 0.0, 0.0, size / step)


def _value(case: Case, name: str) -> FloatArray:
    """The number of the case that a share refers to; 1 for a whole stream."""
    for stream in case.feeds:
        place = f"feed.{stream.name}"
        if name == place:
            return np.ones(())
        if name == f"{place}.pressure":
            return np.asarray(stream.pressure, dtype=float)
        if name.startswith(f"{place}.amounts."):
            return np.asarray(stream.amounts[name.removeprefix(f"{place}.amounts.")], dtype=float)
    key, _, field = name.rpartition(".")
    stage = next(stage for stage in case.stages if stage.key == key)
    return np.asarray(getattr(stage.specification, field), dtype=float)


def correlation_of(case: Case, inputs: Sequence[Input]) -> FloatArray:
    """The inputs' correlation matrix.

    Raises
    ------
    InputError
        when no numbers can be correlated so: the matrix is not positive semidefinite.
    """
    places = {each.name: k for k, each in enumerate(inputs)}
    matrix = np.eye(len(inputs))
    for given in case.correlations:
        for name in (given.first, given.second):
            if name not in places:
                raise InputError(
                    f'found "{name}", which takes no part in the case',
                    "accepted is a number that its results rest on",
                    key="correlation",
                    file=case.file,
                )
        k, j = places[given.first], places[given.second]
        matrix[k, j] = matrix[j, k] = given.coefficient
    if case.correlations and (smallest := float(np.linalg.eigvalsh(matrix)[0])) < _NEGATIVE:
        raise InputError(
            f"found correlations that contradict each other (smallest eigenvalue {smallest:.3g})",
            "accepted is a matrix that is positive semidefinite",
            key="correlation",
            file=case.file,
        )
    return matrix


def factor_of(correlation: FloatArray) -> FloatArray:
    """L with L Lᵀ the correlation matrix, which may be singular."""
    if np.array_equal(correlation, np.eye(len(correlation))):
        return correlation
    values, vectors = np.linalg.eigh(correlation)
    return np.asarray(vectors * np.sqrt(np.maximum(values, 0.0)))
