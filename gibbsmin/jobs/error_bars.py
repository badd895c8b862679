"""Error bars alone, in many states: what scans and onsets tell beside their values.

The unsure numbers are laid out as independent changes of one standard uncertainty each (a matrix
of correlations by its factor), so that a variance is a plain sum of squares.  Many states of ideal
gases go through the compiled kernel of :mod:`gibbsmin.reactor.deviations`, which keeps no
sensitivities; few states, and real gases, through :mod:`gibbsmin.jobs.sensitivity`.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass, replace
from typing import Any

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.inputs import InputChanges, input_changes
from gibbsmin.jobs.sensitivity import Sensitivities, Trail, near_onset, sensitivities
from gibbsmin.jobs.train import Step
from gibbsmin.jobs.uncertainty import correlation_of, factor_of, uncertain_inputs
from gibbsmin.reactor.deviations import stage_deviations
from gibbsmin.reactor.kernel.form import deviation_form
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Phase

_SECONDS_PER_ENTRY = 2.5e-7  # measured: one state costs this times species × inputs without it

_MOST_ENTRIES = 1_000_000
"""Above this, sensitivities take up more memory than compiling is worth."""


@dataclass(frozen=True)
class ErrorBars:
    """Standard uncertainties of one stage's results in B states.

    Attributes
    ----------
    stage : its name
    uncertainties : (B,) by result as :class:`gibbsmin.jobs.sensitivity.Sensitivities` names it,
        in SI; NaN where a state has none
    near_onset : (B,) whether two of them may make any phase appear or vanish
    """

    stage: str
    uncertainties: dict[str, FloatArray]
    near_onset: BoolArray


def error_bars(case: Case, steps: Sequence[Step], library: Library) -> list[ErrorBars]:
    """First-order error bars of a train that is solved already, step by step.

    Told are temperature, pressure, heat, entropy generation, fractions of the gas, amounts and
    driving forces of solids and liquids, and conversions.

    Raises
    ------
    InputError
        for correlations that contradict each other.
    """
    inputs = uncertain_inputs(case, steps)
    correlation = correlation_of(case, inputs)
    states = len(steps[0].states.equilibria.temperature)
    entries = states * len(inputs) * sum(len(step.states.model.records) for step in steps)
    ideal = all(step.stage.chemistry.equation is None for step in steps)
    seconds = np.inf if entries > _MOST_ENTRIES else entries * _SECONDS_PER_ENTRY
    solve = deviation_form.after(seconds) if ideal else None
    if solve is None:
        changes = input_changes(case, inputs)
        return [
            _of_sensitivities(found)
            for found in sensitivities(steps, changes, correlation, library, dry=False)
        ]
    sure = [
        replace(each, step=np.asarray(each.step) * each.uncertainty, uncertainty=1.0)
        for each in inputs
    ]
    changes = input_changes(case, sure).combined(factor_of(correlation))
    return list(compiled_error_bars(solve, steps, changes, library))


def compiled_error_bars(
    solve: Callable[..., Any], steps: Sequence[Step], changes: InputChanges, library: Library
) -> Iterator[ErrorBars]:
    """The same by the kernel's entry, for changes that are independent of each other."""
    trail = Trail(changes)
    for place, step in enumerate(steps):
        asked, inlet = trail.entering(step, library)
        found = stage_deviations(
            solve,
            step.states,
            step.stage.specification,
            step.stage.boundary_temperature,
            asked,
            inlet,
            changes.records,
            library,
            passes=place + 1 < len(steps),
        )
        passed = found.passed
        if place + 1 < len(steps):
            trail.leave(step, passed.temperature, passed.pressure, passed.amounts)
        records = step.states.model.records
        condensed = [k for k, record in enumerate(records) if record.phase is not Phase.GAS]
        sizes = {
            "temperature": found.temperature,
            "pressure": found.pressure,
            "heat": found.heat,
            "entropy generation": found.entropy_generation,
        }
        for record, size in zip(records, found.records, strict=True):
            kind = "fraction" if record.phase is Phase.GAS else "amount"
            sizes[f"{kind} {record.name}"] = size
        for k, size in zip(condensed, found.forces, strict=True):
            sizes[f"driving force {records[k].name}"] = size
        for record, size in zip(step.states.inlet.records, found.conversions, strict=True):
            sizes[f"conversion {record.name}"] = size
        equilibria = step.states.equilibria
        near = near_onset(
            equilibria.amounts[:, condensed],
            equilibria.solution.certificate.driving_forces[:, condensed],
            found.records[condensed].T,
            found.forces.T,
        )
        yield ErrorBars(step.stage.name, sizes, np.asarray(near.any(axis=1)))


def _of_sensitivities(found: Sensitivities) -> ErrorBars:
    sizes = dict(zip(found.results, found.uncertainties.T, strict=True))
    return ErrorBars(found.stage, sizes, np.asarray(found.near_onset.any(axis=1)))
