"""Monte Carlo: a case solved again and again with its unsure numbers drawn at random.

Where a phase may appear or vanish, results are no longer straight functions of the numbers that
they rest on, and first-order error bars do not hold.  Here every unsure number is drawn from a
normal distribution of its standard uncertainty, together with what it is correlated with; all
draws are one batch, each certified as a single state is, and their spread is the answer.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, fields, replace
from itertools import islice
from typing import Any, Final

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.errors import InputError
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.inputs import InputChanges, input_changes
from gibbsmin.jobs.step_results import results_of
from gibbsmin.jobs.train import Step, answered, run_train
from gibbsmin.jobs.uncertainty import correlation_of, factor_of, uncertain_inputs
from gibbsmin.minimise import Status, settle_form
from gibbsmin.reactor.stage_changes import SpecificationChanges
from gibbsmin.reactor.stream_changes import RecordChanges
from gibbsmin.reactor.streams import Stream
from gibbsmin.thermo.species import Phase

QUANTILES: Final = (0.025, 0.5, 0.975)

FEWEST, MOST = 100, 200_000
"""Draws that are accepted."""

_BLOCK = 10_000
"""Draws of a stage solved together."""


@dataclass(frozen=True)
class Spread:
    """How the results of one step of the train are spread over the draws.

    Attributes
    ----------
    stage : its name
    results : R names, as :func:`gibbsmin.jobs.step_results.results_of` gives them
    solved : draws with a certified answer; the others count for nothing
    means, deviations : (R,) mean and standard deviation, in SI
    quantiles : (3, R), the values below which 2.5, 50 and 97.5 % of the draws lie
    phases : C solids and liquids
    probabilities : (C,) share of the draws in which each is there
    """

    stage: str
    results: tuple[str, ...]
    solved: int
    means: FloatArray
    deviations: FloatArray
    quantiles: FloatArray
    phases: tuple[str, ...]
    probabilities: FloatArray

    def deviation(self, result: str) -> float:
        """Standard deviation of one result, in SI."""
        return float(self.deviations[self.results.index(result)])

    def quantile(self, result: str, place: int) -> float:
        """One of the quantiles of one result, in SI; NaN for what is no result."""
        if result not in self.results:
            return float("nan")
        return float(self.quantiles[place, self.results.index(result)])


@dataclass(frozen=True)
class MonteCarlo:
    """The spread of a case's results.

    Attributes
    ----------
    draws, seed : how many, and from which start of the random numbers
    stages : one entry a step that a prediction tells, a joined bypass too
    cut_off : how many amounts were drawn below zero, and taken as zero
    """

    draws: int
    seed: int
    stages: tuple[Spread, ...]
    cut_off: int


def monte_carlo(case: Case, draws: int = 10_000, seed: int = 1) -> MonteCarlo:
    """Draw the case's unsure numbers and solve it each time.

    Drawn are the inputs of :func:`gibbsmin.jobs.uncertainty.uncertainty`, normally distributed.
    The same seed gives the same draws.

    Raises
    ------
    InputError
        for a number of draws or a seed that is not accepted, and as
        :func:`gibbsmin.jobs.uncertainty.uncertainty`.
    """
    if not FEWEST <= draws <= MOST:
        raise InputError(
            f"found {draws} draws",
            f"accepted is a number from {FEWEST} to {MOST}",
            key="monte-carlo",
        )
    if seed < 0:
        raise InputError(
            f"found {seed}", "accepted is a whole number that is not negative", key="seed"
        )
    told = list(answered(run_train(case, case.library)))
    inputs = uncertain_inputs(case, told)
    changes = input_changes(case, inputs)
    sizes = np.array([float(np.ravel(each.uncertainty)[0]) for each in inputs])
    spread_out = factor_of(correlation_of(case, inputs)) * sizes[:, np.newaxis]
    random = np.random.default_rng(seed)
    settle_form()
    cut_off, parts = 0, []
    block = max(1, _BLOCK // len(case.stages))
    for first in range(0, draws, block):
        normal = random.standard_normal((min(block, draws - first), len(inputs)))
        steps = normal @ spread_out.T
        drawn, below_zero = _drawn(case, changes, steps)
        cut_off += below_zero
        library = case.library.deviating(_deviations(changes.records, steps))
        parts.append([_collected(step) for step in islice(run_train(drawn, library), len(told))])
    stages = tuple(_spread(blocks) for blocks in zip(*parts, strict=True))
    return MonteCarlo(draws, seed, stages, cut_off)


def _drawn(case: Case, changes: InputChanges, steps: FloatArray) -> tuple[Case, int]:
    """The case in B states whose inputs are off by so many steps (B, K); amounts cut off at 0."""
    below_zero = 0

    def moved(stream: Stream) -> Stream:
        nonlocal below_zero
        change = changes.streams[stream.name]
        amounts = {}
        for name, amount in stream.amounts.items():
            drawn = amount + steps @ change.amounts[name][0]
            below_zero += int(np.count_nonzero(drawn < 0.0))
            amounts[name] = np.maximum(drawn, 0.0)
        return replace(
            stream,
            temperature=stream.temperature + steps @ change.temperature[0],
            pressure=stream.pressure + steps @ change.pressure[0],
            amounts=amounts,
        )

    feeds = tuple(moved(stream) for stream in case.feeds)
    stages = []
    for stage in case.stages:
        asked, given = changes.stages[stage.key], stage.specification
        new: dict[str, Any] = {
            field.name: getattr(given, field.name) + steps @ getattr(asked, field.name)
            for field in fields(SpecificationChanges)
            if getattr(given, field.name) is not None
        }
        stages.append(replace(stage, specification=replace(given, **new)))
    return replace(case, feeds=feeds, stages=tuple(stages)), below_zero


def _deviations(
    records: RecordChanges, steps: FloatArray
) -> dict[str, tuple[FloatArray, FloatArray]]:
    """By how much enthalpies and entropies are off, (B,) each, by record."""
    nothing = np.zeros(steps.shape[1])
    return {
        name: (
            np.asarray(steps @ records.enthalpy.get(name, nothing)),
            np.asarray(steps @ records.entropy.get(name, nothing)),
        )
        for name in {**records.enthalpy, **records.entropy}
    }


@dataclass(frozen=True)
class _Collected:
    """One block of draws of a step: which are solved, and their results and phases by name."""

    stage: str
    solved: Any
    results: dict[str, FloatArray]
    present: dict[str, Any]


def _collected(step: Step) -> _Collected:
    found, records = step.states.equilibria, step.states.model.records
    return _Collected(
        step.stage.name,
        found.solution.status == Status.CERTIFIED,
        results_of(step),
        {
            record.name: found.amounts[:, column] > 0.0
            for column, record in enumerate(records)
            if record.phase is not Phase.GAS
        },
    )


def _spread(blocks: Sequence[_Collected]) -> Spread:
    """All draws of one step together; what cannot be there in a block has none of it."""
    solved = np.concatenate([block.solved for block in blocks])

    def whole(kind: str, name: str, nothing: float) -> FloatArray:
        values = [
            getattr(block, kind).get(name, np.full(block.solved.size, nothing)) for block in blocks
        ]
        return np.asarray(np.concatenate(values)[solved])

    names = tuple(_names(block.results for block in blocks))
    phases = tuple(_names(block.present for block in blocks))
    columns = [
        whole("results", name, np.nan if name.startswith("conversion") else 0.0) for name in names
    ]
    if not solved.any():
        nothing = np.full(len(names), np.nan)
        unknown = np.full(len(phases), np.nan)
        return Spread(
            blocks[0].stage, names, 0, nothing, nothing, np.array([nothing] * 3), phases, unknown
        )
    return Spread(
        stage=blocks[0].stage,
        results=names,
        solved=int(np.count_nonzero(solved)),
        means=np.array([column.mean() for column in columns]),
        deviations=np.array([column.std(ddof=1) for column in columns]),
        quantiles=np.quantile(np.stack(columns, axis=1), QUANTILES, axis=0),
        phases=phases,
        probabilities=np.array([whole("present", name, 0.0).mean() for name in phases]),
    )


def _names(blocks: Iterator[dict[str, Any]]) -> list[str]:
    """Every name of any block, once."""
    return list(dict.fromkeys(name for block in blocks for name in block))
