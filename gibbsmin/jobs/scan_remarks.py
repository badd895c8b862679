"""What is said beside many states: records of the user's own, and ideal gases that mislead."""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import suppress

import numpy as np

from gibbsmin.errors import InputError
from gibbsmin.jobs.axes import applied
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.conditions import Conditions
from gibbsmin.jobs.real_gas import ideal_gas_warning
from gibbsmin.jobs.remarks import own_records_notes
from gibbsmin.jobs.train import run_train

_LOOKED_AT = 32
"""States, evenly spread, that are looked at."""


def scan_remarks(case: Case, conditions: Conditions) -> tuple[str, ...]:
    """Sentences on all states of a case's axes or of a table of conditions."""
    return (*own_records_notes(case.own_records), *_of_ideal_gases(case, conditions))


def _of_ideal_gases(case: Case, conditions: Conditions) -> Iterator[str]:
    places = np.unique(np.linspace(0, conditions.states - 1, _LOOKED_AT).astype(int)).tolist()
    blocks = [[inside for inside, _ in conditions.block(place, place + 1)] for place in places]
    values = [np.concatenate(each) for each in zip(*blocks, strict=True)]
    # Where an input is refused the rows tell of it.
    with suppress(InputError):
        for step in run_train(applied(case, conditions.axes, values, case.library), case.library):
            if step.stage.chemistry.equation is None and (said := ideal_gas_warning(step.states)):
                yield f"{step.stage.name}: {said}" if len(case.stages) > 1 else said
