"""Predict: the outlet of a case's stages at equilibrium."""

from __future__ import annotations

from gibbsmin.errors import InputError
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.stage import predict_stage
from gibbsmin.results import Outlet
from gibbsmin.thermo.library import load_library


def predict(case: Case) -> Outlet:
    """The certified outlet of a case at equilibrium.

    A state that cannot be certified comes back with that status and NaN in every figure.

    Raises
    ------
    InputError
        when the candidates cannot hold the feed; the sentence names file and key.
    """
    library = load_library()
    (stage,) = case.stages
    try:
        outlet = predict_stage(stage, case.feeds, library)
    except InputError as error:
        raise error.at(file=case.file) from None
    return Outlet(
        title=case.title,
        unit=case.feeds[0].unit,
        is_flow=case.feeds[0].is_flow,
        stages=(outlet,),
    )
