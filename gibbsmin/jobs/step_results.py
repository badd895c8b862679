"""A solved stage's results by name, in every state of a batch."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.jobs.train import Step
from gibbsmin.reactor.conversion import conversions
from gibbsmin.results import WATER
from gibbsmin.thermo.species import Phase


def results_of(step: Step, *, dry: bool = True) -> dict[str, FloatArray]:
    """Values (B,) in SI, such as "temperature", "heat", "fraction CO(g)", "conversion CH4(g)".

    NaN where there is no answer, and for fractions where there is no gas.  ``dry`` leaves fractions
    of the dry gas away where it is false.
    """
    return dict(_results(step, dry))


def _results(step: Step, dry: bool) -> Iterator[tuple[str, FloatArray]]:
    states = step.states
    found, energy, records = states.equilibria, states.energy, states.model.records
    yield "temperature", found.temperature
    yield "pressure", found.pressure
    yield "heat", energy.heat
    yield "shaft work", energy.shaft_work
    yield "entropy generation", energy.entropy_generation
    yield "lost work", step.stage.surroundings_temperature * energy.entropy_generation
    for column, record in enumerate(records):
        yield f"amount {record.name}", found.amounts[:, column]
    for label, without in (("fraction", ""), *([("dry fraction", WATER)] if dry else ())):
        counted = np.array([r.phase is Phase.GAS and r.name != without for r in records])
        total = found.amounts @ counted.astype(float)
        total = np.where(total > 0.0, total, np.nan)
        for column in np.flatnonzero(counted).tolist():
            yield f"{label} {records[column].name}", found.amounts[:, column] / total
    for name, share in conversions(states.inlet, records, found.amounts).items():
        yield f"conversion {name}", share
