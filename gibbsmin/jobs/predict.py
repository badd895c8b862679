"""Predict: the outlets of a case's stages at equilibrium."""

from __future__ import annotations

from gibbsmin.errors import InputError
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.stage import conversion, stage_outlet
from gibbsmin.jobs.train import placed_in, run_train
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
    for step in run_train(case, library):
        try:
            outlets.append(stage_outlet(step, library))
        except InputError as error:
            raise placed_in(step.stage, case, error) from None
        if not outlets[-1].certified:
            break
    last = outlets[-1]
    inlet = inlet_of(case.feeds, library)
    return Outlet(
        title=case.title,
        unit=case.feeds[0].unit,
        is_flow=case.feeds[0].is_flow,
        conversion=conversion(inlet, last.records, last.amounts),
        stages=tuple(outlets),
    )
