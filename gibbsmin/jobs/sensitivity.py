"""What each result of a train answers to a step of each input, and the uncertainty that follows.

To first order var(r) = Σ_kl r_k u_k C_kl u_l r_l, with r_k the change of r by one step of input k,
u its standard uncertainty in steps and C the inputs' correlation, which is 0 between different
inputs unless the case states it: published tables give no covariances, although enthalpies of one
network of reactions do depend on each other.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray
from gibbsmin.jobs.inputs import Input, InputChanges
from gibbsmin.jobs.train import Step
from gibbsmin.reactor.stage_changes import SpecificationChanges, StageChanges, stage_changes
from gibbsmin.reactor.stream_changes import (
    InletChanges,
    StreamChanges,
    stream_changes,
    with_records,
)
from gibbsmin.reactor.streams import Values
from gibbsmin.results import WATER
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Phase


@dataclass(frozen=True)
class Sensitivities:
    """First-order answers of one stage's results in B states.

    Attributes
    ----------
    stage : its name
    results : R names, such as "temperature", "heat", "amount CO(g)", "fraction CO(g)", "dry
        fraction CO(g)", "conversion CH4(g)", "driving force C(graphite)"
    inputs : K numbers that the results rest on
    matrix : (B, R, K) change of each result, in SI, by one step of each input; NaN where a state
        has no derivatives
    correlation : (K, K) of the inputs
    phases : C solids and liquids of the stage
    phase_amounts, driving_forces : (B, C) of these, mol, and a·λ − g̃ in RT
    """

    stage: str
    results: tuple[str, ...]
    inputs: tuple[Input, ...]
    matrix: FloatArray
    correlation: FloatArray
    phases: tuple[str, ...]
    phase_amounts: FloatArray
    driving_forces: FloatArray

    @property
    def deviations(self) -> FloatArray:
        """(B, R, K) change of each result by one standard uncertainty of each input."""
        sizes = [np.broadcast_to(each.uncertainty, (len(self.matrix),)) for each in self.inputs]
        return np.asarray(self.matrix * np.stack(sizes, axis=-1)[:, np.newaxis])

    @cached_property
    def uncertainties(self) -> FloatArray:
        """(B, R) standard uncertainty of each result, in SI."""
        variance = self.contributions.sum(axis=2)
        return np.asarray(np.sqrt(np.maximum(variance, 0.0)))

    @property
    def contributions(self) -> FloatArray:
        """(B, R, K) what each input adds to the variance, its correlations shared out evenly."""
        deviations = self.deviations
        if np.array_equal(self.correlation, np.eye(len(self.inputs))):
            return np.asarray(deviations**2)
        return np.asarray(deviations * (deviations @ self.correlation))

    def uncertainty(self, result: str) -> FloatArray:
        """(B,) standard uncertainty of one result."""
        return np.asarray(self.uncertainties[:, self.results.index(result)])

    @property
    def near_onset(self) -> BoolArray:
        """(B, C) whether two standard uncertainties may make a phase appear or vanish."""
        amounts, forces = (
            np.stack([self.uncertainty(f"{kind} {name}") for name in self.phases], axis=-1)
            if self.phases
            else np.zeros(self.phase_amounts.shape)
            for kind in ("amount", "driving force")
        )
        return near_onset(self.phase_amounts, self.driving_forces, amounts, forces)


def near_onset(
    amounts: FloatArray, forces: FloatArray, of_amounts: FloatArray, of_forces: FloatArray
) -> BoolArray:
    """Whether two standard uncertainties of amount or driving force may make a phase come or go."""
    absent = amounts == 0.0
    with np.errstate(invalid="ignore"):
        return np.asarray(np.where(absent, -forces < 2.0 * of_forces, amounts < 2.0 * of_amounts))


class Trail:
    """Carries the inputs' changes along a train, from each step into the next."""

    def __init__(self, changes: InputChanges) -> None:
        self._changes = changes
        self._entering: list[StreamChanges] = []
        self._passing: list[StreamChanges] = []
        self._pressure: FloatArray = np.zeros(len(changes.inputs))

    def entering(self, step: Step, library: Library) -> tuple[SpecificationChanges, InletChanges]:
        """What changes of a step's specification, and of its streams but for their records."""
        changes = self._changes
        if step.joins:
            # What went around is what entered the stage that the bypass belongs to.
            self._entering = [*self._passing, *self._entering]
            nothing = np.zeros(changes.records.count)
            asked = SpecificationChanges(nothing, nothing, self._pressure, nothing, nothing)
        else:
            named = step.streams[len(self._passing) :]
            own = (changes.streams[stream.name] for stream in named)
            self._entering = [*self._passing, *own]
            asked = changes.stages[step.stage.key]
        shared = [_scaled(e, share) for e, share in zip(self._entering, step.shares, strict=True)]
        equation = step.stage.chemistry.equation
        inlet = stream_changes(
            step.streams, shared, changes.records.count, step.states.inlet, library, equation
        )
        return asked, inlet

    def leave(
        self, step: Step, temperature: FloatArray, pressure: FloatArray, amounts: FloatArray
    ) -> None:
        """Take up a solved step's changes (B, K), (B, K) and (B, S, K) for the next."""
        removed = step.stage.removed
        # What is removed goes with a fixed share.
        passed = {
            record.name: amounts[:, column]
            * (1.0 - np.reshape(removed.get(record.name, 0.0), (-1, 1)))
            for column, record in enumerate(step.states.model.records)
        }
        self._passing = [StreamChanges(temperature, pressure, passed)]
        self._pressure = pressure


def sensitivities(
    steps: Sequence[Step],
    changes: InputChanges,
    correlation: FloatArray,
    library: Library,
    *,
    dry: bool = True,
) -> Iterator[Sensitivities]:
    """Follow the train through once more, with what one step of each input changes.

    ``dry`` leaves fractions of the dry gas away where it is false.
    """
    trail = Trail(changes)
    for step in steps:
        asked, inlet = trail.entering(step, library)
        inlet = with_records(inlet, changes.records, step.states.inlet)
        found = stage_changes(
            step.states,
            step.stage.specification,
            step.stage.boundary_temperature,
            asked,
            inlet,
            changes.records,
            library,
        )
        trail.leave(step, found.temperature, found.pressure, found.amounts)
        rows = dict(_results(step, found, inlet.amounts, dry))
        model, equilibria = step.states.model, step.states.equilibria
        yield Sensitivities(
            step.stage.name,
            tuple(rows),
            changes.inputs,
            np.stack(list(rows.values()), axis=1),
            correlation,
            tuple(record.name for record in model.records if record.phase is not Phase.GAS),
            equilibria.amounts[:, ~model.gas],
            equilibria.solution.certificate.driving_forces[:, ~model.gas],
        )


def _scaled(change: StreamChanges, share: Values) -> StreamChanges:
    if np.ndim(share) == 0 and share == 1.0:
        return change
    shares = np.reshape(share, (-1, 1))
    return replace(change, amounts={name: shares * dn for name, dn in change.amounts.items()})


def _results(
    step: Step, found: StageChanges, entering: FloatArray, dry: bool
) -> Iterator[tuple[str, FloatArray]]:
    """Each result's change, (B, K)."""
    states = step.states
    records, n = states.model.records, states.equilibria.amounts
    yield "temperature", found.temperature
    yield "pressure", found.pressure
    yield "heat", found.heat
    yield "shaft work", found.shaft_work
    yield "entropy generation", found.entropy_generation
    yield "lost work", step.stage.surroundings_temperature * found.entropy_generation
    for column, record in enumerate(records):
        yield f"amount {record.name}", found.amounts[:, column]
    for label, without in (("fraction", ""), *([("dry fraction", WATER)] if dry else ())):
        counted = np.array([r.phase is Phase.GAS and r.name != without for r in records])
        total = n[:, counted].sum(axis=1)[:, np.newaxis]
        change = found.amounts[:, counted].sum(axis=1)
        with np.errstate(invalid="ignore", divide="ignore"):
            for column in np.flatnonzero(counted).tolist():
                y = n[:, column, np.newaxis] / total
                name = records[column].name
                yield f"{label} {name}", (found.amounts[:, column] - y * change) / total
    for column, record in enumerate(records):
        if record.phase is not Phase.GAS:
            yield f"driving force {record.name}", found.forces[:, column]
    yield from _conversions(step, found, entering)


def _conversions(
    step: Step, found: StageChanges, entering: FloatArray
) -> Iterator[tuple[str, FloatArray]]:
    """d(1 − out/in) = (out/in² d in − d out/in), all forms of a substance counted together."""
    states = step.states
    inlet, records, n = states.inlet, states.model.records, states.equilibria.amounts
    for fed in inlet.records:
        into = [r.formula == fed.formula for r in inlet.records]
        out = [r.formula == fed.formula for r in records]
        amount = inlet.amounts[:, into].sum(axis=1)[:, np.newaxis]
        left = n[:, out].sum(axis=1)[:, np.newaxis] / amount
        change = left * entering[:, into].sum(axis=1) - found.amounts[:, out].sum(axis=1)
        yield f"conversion {fed.name}", change / amount
