"""What searches along an axis share: the axes, the stage, and its states at any position."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

import numpy as np

from gibbsmin.arrays import FloatArray, IntArray
from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.errors import InputError
from gibbsmin.jobs.axes import applied
from gibbsmin.jobs.axis import Axis
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.case_stage import StageCase
from gibbsmin.jobs.train import Step, run_train
from gibbsmin.thermo.library import Library

KEPT_OUT = 1e6
"""J/mol by which a phase is kept out: with it the phase never forms."""


@dataclass(frozen=True)
class Path:
    """A case along the axis that is searched, in rows of a second axis if there is one."""

    axis: Axis
    second: Axis | None
    stage: StageCase
    library: Library

    @property
    def rows(self) -> int:
        """Number of values of the second axis, 1 without one."""
        return 1 if self.second is None else int(self.second.values.size)

    @property
    def grid(self) -> FloatArray:
        """The axis's values in rising order."""
        return np.sort(self.axis.values)

    def step(self, case: Case, position: FloatArray, row: IntArray) -> Step:
        """The stage solved at positions (k,) of rows (k,)."""
        axes, values = [self.axis], [position]
        if self.second is not None:
            axes.append(self.second)
            values.append(self.second.values[row])
        varied = applied(case, axes, values, self.library)
        return step_of(run_train(varied, self.library), self.stage)

    def shown(self, position: FloatArray) -> FloatArray:
        """SI values in the axis's unit: units are linear, so that two points tell."""
        (a, b), (x, y) = self.axis.values[[0, -1]], self.axis.shown[[0, -1]]
        return np.asarray(x + (position - a) * (y - x) / (b - a))


def path_of(case: Case, stage: StageCase, library: Library) -> Path:
    """The axis to search along, and the one that varies from row to row.

    Raises
    ------
    InputError
        for no axis, more than two, or an axis to search that has a single value.
    """
    if not 1 <= len(case.axes) <= 2:
        raise InputError(
            f"found {len(case.axes)} axes" if case.axes else "found no axis",
            "accepted is one [[axis]] to search along, and perhaps a second for a curve",
            key="axis",
            file=case.file,
        )
    if np.unique(case.axes[0].values).size < 2:
        raise InputError(
            "found a single value to search along",
            "accepted is an axis with first, last and count",
            key="axis.1",
            file=case.file,
        )
    return Path(case.axes[0], case.axes[1] if len(case.axes) == 2 else None, stage, library)


def stage_named(case: Case, name: str, key: str) -> StageCase:
    """The stage of that name; without a name the only one.

    Raises
    ------
    InputError
        for another name, and for none where there are several stages.
    """
    names = [stage.name for stage in case.stages]
    if not name and len(names) == 1:
        return case.stages[0]
    if name not in names:
        raise InputError(
            f'found "{name}", which is no stage' if name else "found no stage",
            f"accepted is one of {', '.join(names)}",
            key=key,
            file=case.file,
        )
    return case.stages[names.index(name)]


def step_of(steps: Iterable[Step], stage: StageCase) -> Step:
    """A stage's own step, not that of its joined bypass, in a train that runs."""
    return next(step for step in steps if step.stage.key == stage.key and not step.joins)


def driving_force(step: Step, phase: str) -> FloatArray:
    """a·λ − g̃ of a phase that is kept out, (k,); NaN where not certified."""
    found, model = step.states.equilibria, step.states.model
    column = [record.name for record in model.records].index(phase)
    force = found.solution.certificate.driving_forces[:, column]
    return np.asarray(force + KEPT_OUT / (GAS_CONSTANT * found.temperature))
