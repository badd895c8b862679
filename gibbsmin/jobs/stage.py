"""One stage's outlet: a solved state and all that follows from it."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import replace

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.jobs.case_stage import StageCase
from gibbsmin.jobs.figures import figures_of
from gibbsmin.jobs.happenings import extents_of, yields_of
from gibbsmin.jobs.real_gas import (
    changed_gas_warning,
    ideal_gas_warning,
    real_gas_notes,
    real_gas_outlet,
    real_gas_warnings,
)
from gibbsmin.jobs.remarks import outlet_hazards, uncertified_warning, warnings
from gibbsmin.jobs.stage_remarks import method_notes, require_an_answer, service_notes
from gibbsmin.jobs.train import Step
from gibbsmin.minimise import Method, Status
from gibbsmin.reactor.activities import element_activities
from gibbsmin.reactor.audit import SolvedState, audit, element_potentials
from gibbsmin.reactor.conditions import Equilibria
from gibbsmin.reactor.conversion import conversions
from gibbsmin.reactor.energy import EnergyBalance
from gibbsmin.reactor.inlet import Inlet
from gibbsmin.results import EntropyGeneration, RealGasOutlet, StageOutlet, StateCertificate
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Species

_TRACE = 1e-6


def stage_outlet(
    step: Step, library: Library, ideal: Step | None = None, before: StageCase | None = None
) -> StageOutlet:
    """The first state of a solved stage, with all that follows from it.

    ``ideal`` is the same stage with an ideal gas, to compare a real one with; ``before`` the stage
    whose outlet enters.

    Raises
    ------
    InputError
        when no amounts of the candidates hold the feed's elements, or no temperature meets the
        stage's specification.
    """
    stage, states = step.stage, step.states
    model, found = states.model, states.equilibria
    status = tuple(Status)[found.solution.status[0]]
    require_an_answer(step, status)
    state = SolvedState(
        temperature=float(found.temperature[0]),
        pressure=float(found.pressure[0]),
        amounts=found.amounts[0],
        multipliers=found.solution.multipliers[0],
    )
    outlet = StageOutlet(
        name=stage.name,
        status=status,
        method=tuple(Method)[found.solution.method[0]],
        temperature=state.temperature,
        pressure=state.pressure,
        records=model.records,
        amounts=state.amounts,
        removed={
            record.name: amount * stage.removed[record.name]
            for record, amount in zip(model.records, state.amounts.tolist(), strict=True)
            if record.name in stage.removed
        },
        certificate=_certificate(found),
        element_potentials=element_potentials(model, state),
        conversion=conversion(states.inlet, model.records, state.amounts),
        heat=float(states.energy.heat[0]),
        shaft_work=float(states.energy.shaft_work[0]),
        entropy=_entropy_generation(stage, states.energy),
        notes=(
            *(remark for stream in step.streams for remark in stream.remarks),
            *service_notes(stage, model, library),
            *method_notes(model, state, found),
        ),
        hazards=outlet_hazards(model, state.amounts),
    )
    if status is not Status.CERTIFIED:
        return replace(outlet, warnings=(uncertified_warning(status),))
    return _with_findings(outlet, step, state, library, ideal, before)


def _with_findings(
    outlet: StageOutlet,
    step: Step,
    state: SolvedState,
    library: Library,
    ideal: Step | None,
    before: StageCase | None,
) -> StageOutlet:
    """What only a certified state tells."""
    stage, states = step.stage, step.states
    model = states.model
    activities = element_activities(model, state, library)
    left_out = stage.chemistry.selection.not_missed(model.feed_records, library)
    entries = audit(model, state, library, left_out)
    gas = real_gas_outlet(step, ideal)
    gas_warnings = _gas_warnings(step, gas, before)
    return replace(
        outlet,
        activities=activities,
        figures=figures_of(step, activities, library),
        extents=extents_of(states, stage.extents),
        yields=yields_of(states),
        audit=entries,
        warnings=warnings(model, step.streams, state, entries, gas_warnings, outlet.entropy.remark),
        notes=(*(() if gas is None else real_gas_notes(step, gas)), *outlet.notes),
        real_gas=gas,
    )


def _gas_warnings(step: Step, gas: RealGasOutlet | None, before: StageCase | None) -> Iterator[str]:
    if before is not None and (found := changed_gas_warning(before, step.stage)):
        yield found
    if gas is not None:
        yield from real_gas_warnings(step, gas)
    elif step.stage.chemistry.equation is None and (found := ideal_gas_warning(step.states)[1]):
        yield found


def _entropy_generation(stage: StageCase, energy: EnergyBalance) -> EntropyGeneration:
    remark = ""
    if energy.needs_compressor[0]:
        remark = (
            "the outlet's pressure is above a feed's: a compressor is needed, "
            "so no entropy generation is given"
        )
    elif energy.impossible[0]:
        remark = "impossible as specified: the entropy generation is negative"
    value = float(energy.entropy_generation[0])
    return EntropyGeneration(
        value=value,
        lost_work=stage.surroundings_temperature * value,
        boundary_temperature=float(energy.boundary_temperature[0]),
        surroundings_temperature=stage.surroundings_temperature,
        remark=remark,
    )


def _certificate(found: Equilibria) -> StateCertificate:
    certificate = found.solution.certificate
    return StateCertificate(
        gap=float(certificate.gap[0]),
        balance=float(certificate.balance[0]),
        stationarity=float(certificate.stationarity[0]),
    )


def conversion(inlet: Inlet, records: Sequence[Species], outlet: FloatArray) -> Mapping[str, float]:
    """Share of each substance of the feed that is used up; its forms count as one substance.

    Traces below a millionth of the feed, such as a former stage's radicals, are left away.
    """
    floor = _TRACE * inlet.amounts[0].sum()
    entering = {
        fed.name: sum(
            amount
            for record, amount in zip(inlet.records, inlet.amounts[0].tolist(), strict=True)
            if record.formula == fed.formula
        )
        for fed in inlet.records
    }
    shares = conversions(inlet, records, outlet[np.newaxis])
    return {name: float(share[0]) for name, share in shares.items() if entering[name] > floor}
