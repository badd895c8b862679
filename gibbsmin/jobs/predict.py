"""Predict: the outlets of a case's stages at equilibrium."""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import suppress
from dataclasses import replace
from itertools import repeat

from gibbsmin.errors import InputError
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.case_stage import StageCase
from gibbsmin.jobs.stage import conversion, stage_outlet
from gibbsmin.jobs.train import Step, answered, placed_in, run_train
from gibbsmin.reactor.inlet import inlet_of
from gibbsmin.results import Outlet, StageOutlet


def predict(case: Case) -> Outlet:
    """The certified outlets of a case's stages; each stage takes the outlet of the one before.

    A state that cannot be certified comes back with that status and NaN in every figure, and
    ends the train.

    Raises
    ------
    InputError
        when the candidates cannot hold the feed or a specification cannot be met; the sentence
        names file and key.
    """
    library = case.library
    outlets: list[StageOutlet] = []
    before: StageCase | None = None
    for step, ideal in zip(answered(run_train(case, library)), _ideal_steps(case), strict=False):
        try:
            outlets.append(stage_outlet(step, library, ideal, before))
        except InputError as error:
            raise placed_in(step.stage, case, error) from None
        before = step.stage
    last = outlets[-1]
    inlet = inlet_of(case.feeds, library)
    return Outlet(
        title=case.title,
        unit=case.feeds[0].unit,
        is_flow=case.feeds[0].is_flow,
        conversion=conversion(inlet, last.records, last.amounts),
        stages=tuple(outlets),
    )


def _ideal_steps(case: Case) -> Iterator[Step | None]:
    """The same train with ideal gases, to compare real ones with; nothing where all are ideal."""
    if any(stage.chemistry.equation is not None for stage in case.stages):
        stages = tuple(
            replace(stage, chemistry=replace(stage.chemistry, equation=None))
            for stage in case.stages
        )
        # Where no ideal gas meets a specification there is nothing to compare with.
        with suppress(InputError):
            yield from run_train(replace(case, stages=stages), case.library)
    yield from repeat(None)
