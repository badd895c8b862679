"""One stage's outlet: a solved state and all that follows from it."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.errors import BalanceError, InputError
from gibbsmin.jobs.case_stage import StageCase
from gibbsmin.jobs.figures import figures_of
from gibbsmin.jobs.happenings import extents_of, yields_of
from gibbsmin.jobs.remarks import outlet_hazards, warnings
from gibbsmin.jobs.train import Step
from gibbsmin.minimise import Method, Status
from gibbsmin.reactor.audit import SolvedState, audit, element_activities, element_potentials
from gibbsmin.reactor.conditions import Equilibria
from gibbsmin.reactor.energy import EnergyBalance
from gibbsmin.reactor.inlet import Inlet
from gibbsmin.reactor.model import HIGHEST_TEMPERATURE, LOWEST_TEMPERATURE, StageModel
from gibbsmin.reactor.stage import StageStates
from gibbsmin.results import EntropyGeneration, StageOutlet, StateCertificate
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Species

_TRACE = 1e-6


def stage_outlet(step: Step, library: Library) -> StageOutlet:
    """The first state of a solved stage, with all that follows from it.

    Raises
    ------
    InputError
        when no amounts of the candidates hold the feed's elements, or no temperature meets the
        stage's specification.
    """
    stage, states = step.stage, step.states
    model, found = states.model, states.equilibria
    status = tuple(Status)[found.solution.status[0]]
    _require_an_answer(stage, states, status)
    state = SolvedState(
        temperature=float(found.temperature[0]),
        pressure=float(found.pressure[0]),
        amounts=found.amounts[0],
        multipliers=found.solution.multipliers[0],
    )
    certified = status is Status.CERTIFIED
    entropy = _entropy_generation(stage, states.energy)
    activities = element_activities(model, state, library) if certified else ()
    left_out = stage.chemistry.selection.leave_out
    entries = audit(model, state, library, left_out) if certified else ()
    removed = {
        record.name: amount * stage.removed[record.name]
        for record, amount in zip(model.records, state.amounts.tolist(), strict=True)
        if record.name in stage.removed
    }
    return StageOutlet(
        name=stage.name,
        status=status,
        method=tuple(Method)[found.solution.method[0]],
        temperature=state.temperature,
        pressure=state.pressure,
        records=model.records,
        amounts=state.amounts,
        removed=removed,
        certificate=_certificate(found),
        element_potentials=element_potentials(model, state),
        conversion=conversion(states.inlet, model.records, state.amounts),
        heat=float(states.energy.heat[0]),
        shaft_work=float(states.energy.shaft_work[0]),
        entropy=entropy,
        activities=activities,
        figures=figures_of(step, activities, library) if certified else (),
        extents=extents_of(states, stage.extents) if certified else (),
        yields=yields_of(states) if certified else (),
        audit=entries,
        warnings=warnings(model, step.streams, state, entries, entropy.remark, status),
        notes=(
            *(remark for stream in step.streams for remark in stream.remarks),
            *_service_notes(stage),
            *_notes(model, state, found),
        ),
        hazards=outlet_hazards(model, state.amounts),
    )


def _require_an_answer(stage: StageCase, states: StageStates, status: Status) -> None:
    """Refuse a single state that has none: no temperature, or candidates that cannot hold it."""
    specification = stage.specification
    if status in (Status.UNMET, Status.AMBIGUOUS):
        wanted, key = "the feed's entropy to be kept", "entropy"
        if specification.heat_loss is not None:
            wanted, key = f"a heat loss of {100 * specification.heat_loss:g} %", "heat_loss"
        elif not specification.entropy_of_feed:
            heat = 0.0 if specification.heat is None else float(specification.heat)
            wanted, key = f"a heat of {heat / 1e3:g} kJ (per second in a flow)", "heat"
        if status is Status.AMBIGUOUS:
            low, high = states.equilibria.answers[:, 0].tolist()
            found = f"which {low:.2f} K and {high:.2f} K both meet under the approach"
        else:
            where = " where the approach has a meaning" if states.model.shift.keys else ""
            found = (
                f"which no temperature between {LOWEST_TEMPERATURE:g} K and "
                f"{HIGHEST_TEMPERATURE:g} K meets{where}"
            )
        raise InputError(
            f"found {wanted}, {found}",
            f"accepted is another {key}, or a temperature in its place",
            key=key,
        )
    if status is Status.INFEASIBLE:
        names = ", ".join(record.name for record in states.inlet.records)
        raise BalanceError(
            "found candidates that cannot hold the feed's elements in their proportions",
            f"accepted is a list that can, for instance one with {names}",
            key="species.consider",
        )


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
    entering: dict[str, float] = {}
    leaving: dict[str, float] = {}
    for record, amount in zip(inlet.records, inlet.amounts[0].tolist(), strict=True):
        entering[record.formula] = entering.get(record.formula, 0.0) + amount
    for record, amount in zip(records, outlet.tolist(), strict=True):
        leaving[record.formula] = leaving.get(record.formula, 0.0) + amount
    missing = float("nan") if np.isnan(outlet).any() else 0.0
    return {
        record.name: 1.0 - leaving.get(record.formula, missing) / entering[record.formula]
        for record in inlet.records
        if entering[record.formula] > _TRACE * inlet.amounts[0].sum()
    }


def _service_notes(stage: StageCase) -> tuple[str, ...]:
    """What the trade proposes for the service, so that the user may overrule it."""
    service = stage.service
    if service is None:
        return ()
    selection = stage.chemistry.selection
    considered = selection.consider if selection.consider != "all" else ("all",)
    parts = [f"considered are {', '.join(considered)}"]
    if selection.inert_where_fed:
        parts.append(f"inert where fed {', '.join(selection.inert_where_fed)}")
    if service.key_reactions:
        parts.append(f"key reactions {'; '.join(service.key_reactions)}")
    if service.carbon_routes:
        parts.append(f"carbon routes {'; '.join(service.carbon_routes)}")
    sources = ", ".join(dict.fromkeys(service.sources.values()))
    return (f"Service {service.name} ({sources}): {', '.join(parts)}.",)


def _notes(model: StageModel, state: SolvedState, found: Equilibria) -> tuple[str, ...]:
    """What the user asked for and how it was done: plateaus, approaches and their keys."""
    notes = []
    share = float(found.upper_share[0])
    if not np.isnan(share):
        notes.append(
            f"Heat is taken up at constant temperature: {100 * share:.2f} % of the change at "
            f"{state.temperature:.2f} K is done."
        )
    for row, text in enumerate(model.shift.texts):
        shifted = float(model.shift.shifted_temperature(row, state.temperature))
        key = model.records[model.shift.keys[row]].name
        notes.append(
            f'"{text}" is set to equilibrium at {shifted:.2f} K, an approach of '
            f"{model.shift.differences[row]:g} K; its key is {key}."
        )
    return tuple(notes)
