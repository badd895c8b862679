"""Predict: the outlets of a case's stages at equilibrium."""

from __future__ import annotations

from gibbsmin.errors import InputError
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.case_stage import StageCase
from gibbsmin.jobs.stage import conversion, leaving_stream, predict_stage
from gibbsmin.reactor.inlet import inlet_of
from gibbsmin.reactor.streams import Stream
from gibbsmin.results import Outlet, StageOutlet
from gibbsmin.thermo.library import load_library

_AT_TOP = "species."


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
    library = load_library()
    by_name = {stream.name: stream for stream in case.feeds}
    outlets: list[StageOutlet] = []
    passing: list[Stream] = []
    for stage in case.stages:
        streams = [*passing, *(by_name[name] for name in stage.feeds)]
        try:
            outlets += predict_stage(stage, streams, library)
        except InputError as error:
            raise _placed(error, stage, case) from None
        if not outlets[-1].certified:
            break
        passing = [leaving_stream(outlets[-1], case.feeds[0])]
    last = outlets[-1]
    inlet = inlet_of(case.feeds, library)
    return Outlet(
        title=case.title,
        unit=case.feeds[0].unit,
        is_flow=case.feeds[0].is_flow,
        conversion=conversion(inlet, last.records, last.amounts),
        stages=tuple(outlets),
    )


def _placed(error: InputError, stage: StageCase, case: Case) -> InputError:
    """The error at its key: within the stage, unless the case's own species table is meant."""
    if not error.key.startswith(_AT_TOP) or stage.own_species:
        error.key = f"{stage.key}.{error.key}".rstrip(".")
    return error.at(file=case.file)
