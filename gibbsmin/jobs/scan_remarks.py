"""What is said beside many states: records of the user's own, and ideal gases that mislead."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

import numpy as np

from gibbsmin.arrays import FloatArray, IntArray
from gibbsmin.errors import InputError
from gibbsmin.jobs.axes import applied
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.conditions import Conditions
from gibbsmin.jobs.real_gas import ideal_gas_warning
from gibbsmin.jobs.remarks import own_records_notes
from gibbsmin.jobs.scan_states import of_one_equation
from gibbsmin.jobs.train import Step, run_train

_LOOKED_AT = 32
"""States, evenly spread, that are looked at."""


def scan_remarks(case: Case, conditions: Conditions) -> tuple[str, ...]:
    """Sentences on all states of a case's axes or of a table of conditions."""
    return (*own_records_notes(case.own_records), *_of_ideal_gases(case, conditions))


def _of_ideal_gases(case: Case, conditions: Conditions) -> Iterator[str]:
    """Of each stage the state in which an equation of state would move most."""
    worst: dict[str, tuple[float, str]] = {}
    for step in _looked_at(case, conditions):
        if step.stage.chemistry.equation is None:
            name = step.stage.name
            found = ideal_gas_warning(step.states, of_many=True)
            worst[name] = max(worst.get(name, found), found)
    for name, (_, said) in worst.items():
        if said:
            yield f"{name}: {said}" if len(case.stages) > 1 else said


def _looked_at(case: Case, conditions: Conditions) -> Iterator[Step]:
    """The steps of some of the states, those of one equation together."""
    places = np.unique(np.linspace(0, conditions.states - 1, _LOOKED_AT).astype(int)).tolist()
    blocks = [[inside for inside, _ in conditions.block(place, place + 1)] for place in places]
    values = [np.concatenate(each) for each in zip(*blocks, strict=True)]
    for rows in of_one_equation(case, conditions.axes, values):
        try:
            yield from _solved(case, conditions, values, rows)
        except InputError:
            # One that is refused must not hide the others; the scan itself tells of it.
            for row in rows:
                yield from _accepted(case, conditions, values, np.array([row]))


def _accepted(
    case: Case, conditions: Conditions, values: Sequence[FloatArray], row: IntArray
) -> list[Step]:
    try:
        return _solved(case, conditions, values, row)
    except InputError:
        return []


def _solved(
    case: Case, conditions: Conditions, values: Sequence[FloatArray], rows: IntArray
) -> list[Step]:
    some = [each[rows] for each in values]
    return list(run_train(applied(case, conditions.axes, some, case.library), case.library))
