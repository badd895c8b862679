"""What a scan's table tells of each stage: the same columns in every block of states.

A record may leave a stage in some states only, such as carbon, and be passed on from there.  A
block of states that never see it has its columns all the same.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from gibbsmin.jobs.case import Case
from gibbsmin.jobs.train import Step
from gibbsmin.reactor.model import candidates_of
from gibbsmin.reactor.streams import Values
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Species


@dataclass(frozen=True)
class StageLayout:
    """The records that may leave a stage and those that may enter it, in any state of a scan."""

    records: tuple[Species, ...]
    fed: tuple[Species, ...]


def layouts_of(case: Case, steps: Sequence[Step], library: Library) -> list[StageLayout]:
    """The layout of each step of a train that ran in some states."""
    if len(steps) == 1:
        (only,) = steps
        return [StageLayout(only.states.model.records, only.states.inlet.records)]
    brought = {stream.name: [library[name] for name in stream.amounts] for stream in case.feeds}
    layouts: list[StageLayout] = []
    passing: list[Species] = []
    for step in steps:
        # What goes around a stage joins what leaves it.
        streams = [layouts[-1].fed] if step.joins else [brought[n] for n in step.stage.feeds]
        fed = tuple(dict.fromkeys([*passing, *(record for part in streams for record in part)]))
        records = candidates_of(step.stage.chemistry, fed, library)
        layouts.append(StageLayout(records, fed))
        removed = step.stage.removed
        passing = [record for record in records if not _all_of(removed.get(record.name, 0.0))]
    return layouts


def _all_of(share: Values) -> bool:
    """Whether nothing goes on in any state of any scan."""
    return np.ndim(share) == 0 and share == 1.0
