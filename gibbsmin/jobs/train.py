"""Stages in order: each takes the outlet of the one before it, in all states of a batch."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
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
    """One stage solved: what it was asked, what entered, and its states."""

    stage: StageCase
    streams: tuple[Stream, ...]
    states: StageStates


def run_train(case: Case, library: Library) -> Iterator[Step]:
    """Solve the stages one after another; a bypass joins as a step of its own that only mixes.

    Raises
    ------
    InputError
        when the candidates cannot hold the feed, or holds, approaches or pressures do not fit;
        the sentence names file and key.
    """
    by_name = {stream.name: stream for stream in case.feeds}
    passing: list[Stream] = []
    for stage in case.stages:
        streams = [*passing, *(by_name[name] for name in stage.feeds)]
        for step in _steps(stage, streams, case, library):
            yield step
            passing = [_leaving(step)]


def placed_in(stage: StageCase, case: Case, error: InputError) -> InputError:
    """The error at its key: within the stage, unless the case's own species table is meant."""
    if not error.key.startswith(_AT_TOP) or stage.own_species:
        error.key = f"{stage.key}.{error.key}".rstrip(".")
    return error.at(file=case.file)


def _steps(
    stage: StageCase, streams: Sequence[Stream], case: Case, library: Library
) -> Iterator[Step]:
    if not stage.bypass:
        yield _solved(stage, streams, case, library)
        return
    around = [_share(stream, stage.bypass) for stream in streams]
    through = [_share(stream, 1.0 - stage.bypass) for stream in streams]
    reacted = _solved(replace(stage, removed={}), through, case, library)
    yield reacted
    mixing = StageCase(
        name=f"{stage.name}, bypass joined",
        key=stage.key,
        feeds=(),
        chemistry=Chemistry(reactions="none"),
        specification=Specification(heat=0.0, pressure=reacted.states.equilibria.pressure),
        boundary_temperature=None,
        surroundings_temperature=stage.surroundings_temperature,
        bypass=0.0,
        removed=stage.removed,
    )
    yield _solved(mixing, [_leaving(reacted), *around], case, library)


def _solved(stage: StageCase, streams: Sequence[Stream], case: Case, library: Library) -> Step:
    try:
        states = solve_stage(
            stage.chemistry, stage.specification, stage.boundary_temperature, streams, library
        )
    except InputError as error:
        raise placed_in(stage, case, error) from None
    return Step(stage, tuple(streams), states)


def _leaving(step: Step) -> Stream:
    """What goes on from a stage: its outlet without what is taken out of it."""
    found, removed = step.states.equilibria, step.stage.removed
    amounts: dict[str, Values] = {}
    for column, record in enumerate(step.states.model.records):
        going_on = found.amounts[:, column] * (1.0 - removed.get(record.name, 0.0))
        if np.any(going_on > 0.0):
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


def _share(stream: Stream, share: float) -> Stream:
    return replace(
        stream, amounts={name: share * amount for name, amount in stream.amounts.items()}
    )
