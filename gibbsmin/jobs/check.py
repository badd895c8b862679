"""Check: plant samples against equilibrium."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import replace
from typing import TYPE_CHECKING

from gibbsmin.errors import InputError
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.case_stage import StageCase
from gibbsmin.jobs.feed_parts import item_key
from gibbsmin.jobs.sample import PlantSample, SampleRules
from gibbsmin.jobs.sample_plan import (
    Reactor,
    batch_plan,
    batch_readings,
    elements_fed,
    reactor_of,
)
from gibbsmin.jobs.sample_remarks import assumptions_of, hazards_in, notes_of, sources_of
from gibbsmin.jobs.sample_sense import require_elements, require_sense
from gibbsmin.jobs.sample_table import samples_from
from gibbsmin.jobs.train import run_train
from gibbsmin.reactor.extents import independent_reactions
from gibbsmin.reactor.streams import Stream
from gibbsmin.sample.assessment import Label, findings_of
from gibbsmin.sample.batch import run_batch
from gibbsmin.sample.findings import Checks, SampleCheck, SampleFault
from gibbsmin.sample.plan import Plan
from gibbsmin.sample.reactions import JudgedReaction, judged_reaction
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Phase

if TYPE_CHECKING:
    import pandas as pd

_BLOCK = 4096
"""Samples that are worked on at a time, so that memory stays bounded."""

_SHAPE = (
    "dry",
    "normalised",
    "inlet_dry",
    "inlet_normalised",
)


def check(case: Case, samples: pd.DataFrame | None = None, file: str = "") -> Checks:
    """Check plant samples: are they believable, and how far are they from equilibrium?

    Parameters
    ----------
    case
        The reactor: its feeds, its candidates, and in ``[sample]`` how samples are taken.
    samples
        A row a sample, as :mod:`gibbsmin.jobs.sample_table` describes; without it the case's own
        sample is checked.
    file
        Name of the table's file, for error messages.

    Raises
    ------
    InputError
        for a case without a sample, a column that means nothing, and reactions or candidates that
        do not fit.  A row that cannot be used is told in ``faults`` and leaves the others alone.
    """
    library, rules = case.library, case.sample_rules
    stage, streams = _stage(case, rules, library)
    reactor = reactor_of(case, stage, streams, rules)
    faults: list[SampleFault] = []
    if samples is not None:
        taken, faults = samples_from(samples, case, rules, file)
    elif case.sample is not None:
        taken = [case.sample]
    else:
        raise InputError(
            "found no sample",
            "accepted is a [sample] table with an analysis, or a table of samples",
            key="sample",
            file=case.file,
        )
    try:
        found, more = _checked(reactor, taken, library, file or case.file)
    except InputError as error:
        raise error.at(file=case.file) from None
    return Checks(
        title=case.title,
        stage=stage.name,
        samples=tuple(found),
        faults=tuple(sorted([*faults, *more], key=lambda fault: fault.row)),
        hazards=hazards_in(found, library),
        assumptions=assumptions_of(reactor, taken),
        sources=sources_of(found, library),
    )


def _stage(
    case: Case, rules: SampleRules, library: Library
) -> tuple[StageCase, tuple[Stream, ...]]:
    """The stage that the samples leave and what enters it, as predicted from the stages before."""
    names = [stage.name for stage in case.stages]
    place = names.index(rules.stage) if rules.stage else len(names) - 1
    stage = case.stages[place]
    if place == 0:
        return stage, tuple(stream for stream in case.feeds if stream.name in stage.feeds)
    before = replace(case, stages=case.stages[: place + 1])
    step = next(step for step in run_train(before, library) if step.stage.key == stage.key)
    return stage, step.streams


def _checked(
    reactor: Reactor, samples: Sequence[PlantSample], library: Library, file: str
) -> tuple[list[SampleCheck], list[SampleFault]]:
    """Findings in the order of the samples, and those with foreign elements."""
    fed = elements_fed(reactor, library)
    usable, faults = [], []
    for sample in samples:
        try:
            require_sense(sample, reactor.rules.dried, library)
            require_elements(sample, fed, library)
            usable.append(sample)
        except InputError as error:
            place = f"row {sample.row}" if sample.row else "sample.analysis"
            error.key = f"{place}, {error.key}" if error.key else place
            if not sample.row:
                raise error.at(file=file) from None
            faults.append(SampleFault(sample.label, sample.row, str(error.at(file=file))))
    groups: dict[tuple[object, ...], list[PlantSample]] = {}
    for sample in usable:
        shape = (*(getattr(sample, name) for name in _SHAPE), bool(sample.inlet))
        groups.setdefault(shape, []).append(sample)
    found = [
        finding for group in groups.values() for finding in _group(reactor, group, fed, library)
    ]
    order = {id(label): place for place, label in enumerate(usable)}
    placed = sorted(
        zip((s for group in groups.values() for s in group), found, strict=True),
        key=lambda pair: order[id(pair[0])],
    )
    return [finding for _, finding in placed], faults


def _group(
    reactor: Reactor, samples: Sequence[PlantSample], fed: set[str], library: Library
) -> Iterable[SampleCheck]:
    """Samples that were taken alike, a block at a time."""
    plan = batch_plan(reactor, samples, fed, library)
    reactions = _reactions(reactor, plan, library)
    for first in range(0, len(samples), _BLOCK):
        some = samples[first : first + _BLOCK]
        readings, below, u_pressure = batch_readings(reactor, plan, some)
        batch = run_batch(plan, readings, below, u_pressure, reactions, library)
        labels = [Label(sample.label, sample.row, notes_of(sample)) for sample in some]
        yield from findings_of(batch, labels, reactor.rules.thresholds)


def _reactions(reactor: Reactor, plan: Plan, library: Library) -> list[JudgedReaction]:
    """The user's reactions, or an independent set whose keys are the feed's records first.

    Raises
    ------
    InputError
        for a reaction with a gas that the sample does not hold.
    """
    there = {record.name for record in plan.species}
    asked = reactor.rules.reactions
    for index, reaction in enumerate(asked):
        for name in reaction.coefficients:
            if library[name].phase is Phase.GAS and name not in there:
                raise InputError(
                    f'found "{name}", which the sample does not tell',
                    f"accepted are {', '.join(sorted(there))}, or a solid or liquid",
                    key=f"{item_key('sample.reaction', index)}.reaction",
                )
    if asked:
        return [judged_reaction(r.text, r.coefficients, library, r.constant) for r in asked]
    fed = {record.name for record in plan.model.feed_records}
    inert = reactor.stage.chemistry.selection.inert_among(plan.model.feed_records, library)
    records = [record for record in plan.species if record.name not in inert]
    found = independent_reactions(records, fed)
    return [
        judged_reaction(str(r), {name: float(nu) for name, nu in r.terms.items()}, library)
        for r in sorted(found, key=lambda reaction: reaction.key not in fed)
    ]
