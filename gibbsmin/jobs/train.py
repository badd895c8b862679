"""Stages in order: each takes the outlet of the one before it, in all states of a batch."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass, replace

import numpy as np

from gibbsmin.errors import InputError
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.case_stage import StageCase
from gibbsmin.reactor.chemistry import Chemistry
from gibbsmin.reactor.specification import Specification
from gibbsmin.reactor.stage import StageStates, solve_stage
from gibbsmin.reactor.streams import Stream, Values
from gibbsmin.thermo.library import Library

_AT_TOP = "species."


@dataclass(frozen=True)
class Step:
    """One stage solved.

    Attributes
    ----------
    stage : what it was asked
    streams : what entered
    shares : the share of each stream that took this way
    states : its states
    joins : the stage whose bypass it joins to its outlet; empty for a stage of the case
    """

    stage: StageCase
    streams: tuple[Stream, ...]
    shares: tuple[Values, ...]
    states: StageStates
    joins: str = ""


def run_train(case: Case, library: Library) -> Iterator[Step]:
    """Solve the stages one after another; a bypass joins as a step of its own that only mixes.

    Raises
    ------
    InputError
        when the candidates cannot hold the feed, or holds, approaches or pressures do not fit;
        the sentence names file and key.
    """
    by_name = {stream.name: stream for stream in case.feeds}
    step: Step | None = None
    for stage in case.stages:
        passing = [] if step is None else [_leaving(step)]
        streams = [*passing, *(by_name[name] for name in stage.feeds)]
        for step in _steps(stage, streams, case, library):
            yield step


def answered(steps: Iterable[Step]) -> Iterator[Step]:
    """The steps of a single state, up to the first without a certified answer: there it ends."""
    for step in steps:
        yield step
        if not step.states.equilibria.solution.certified[0]:
            return


def has_bypass(stage: StageCase) -> bool:
    """Whether some of what enters goes around; shares that vary count even where they are 0."""
    return np.ndim(stage.bypass) > 0 or stage.bypass != 0.0


def placed_in(stage: StageCase, case: Case, error: InputError) -> InputError:
    """The error at its key: within the stage, unless the case's own species table is meant."""
    if not error.key.startswith(_AT_TOP) or stage.own_species:
        error.key = f"{stage.key}.{error.key}".rstrip(".")
    return error.at(file=case.file)


def _steps(
    stage: StageCase, streams: Sequence[Stream], case: Case, library: Library
) -> Iterator[Step]:
    if not has_bypass(stage):
        yield _solved(stage, streams, [1.0] * len(streams), case, library)
        return
    around, through = stage.bypass, 1.0 - stage.bypass
    reacted = _solved(replace(stage, removed={}), streams, [through] * len(streams), case, library)
    yield reacted
    mixing = StageCase(
        name=f"{stage.name}, bypass joined",
        key=stage.key,
        feeds=(),
        chemistry=Chemistry(reactions="none", equation=stage.chemistry.equation),
        specification=Specification(heat=0.0, pressure=reacted.states.equilibria.pressure),
        boundary_temperature=None,
        surroundings_temperature=stage.surroundings_temperature,
        bypass=0.0,
        removed=stage.removed,
    )
    shares = [1.0, *[around] * len(streams)]
    joined = _solved(mixing, [_leaving(reacted), *streams], shares, case, library)
    yield replace(joined, joins=stage.name)


def _solved(
    stage: StageCase,
    streams: Sequence[Stream],
    shares: Sequence[Values],
    case: Case,
    library: Library,
) -> Step:
    streams = [_share(stream, share) for stream, share in zip(streams, shares, strict=True)]
    try:
        states = solve_stage(
            stage.chemistry, stage.specification, stage.boundary_temperature, streams, library
        )
    except InputError as error:
        raise placed_in(stage, case, error) from None
    return Step(stage, tuple(streams), tuple(shares), states)


def _leaving(step: Step) -> Stream:
    """What goes on from a stage: its outlet without what is taken out of it."""
    found, removed = step.states.equilibria, step.stage.removed
    amounts: dict[str, Values] = {}
    for column, record in enumerate(step.states.model.records):
        going_on = found.amounts[:, column] * (1.0 - removed.get(record.name, 0.0))
        # Where no state has an answer all are kept, so that the next stage has none either.
        if np.any(going_on > 0.0) or np.isnan(going_on).all():
            amounts[record.name] = going_on
    first = step.streams[0]
    return Stream(
        name=step.stage.name,
        temperature=found.temperature,
        pressure=found.pressure,
        amounts=amounts,
        unit=first.unit,
        is_flow=first.is_flow,
    )


def _share(stream: Stream, share: Values) -> Stream:
    if np.ndim(share) == 0 and share == 1.0:
        return stream
    return replace(
        stream, amounts={name: share * amount for name, amount in stream.amounts.items()}
    )
