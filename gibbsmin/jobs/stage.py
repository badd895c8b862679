"""One stage: from its streams to a certified state and all that follows from it."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.errors import BalanceError, InputError
from gibbsmin.jobs.case_stage import StageCase
from gibbsmin.jobs.figures import figures_of
from gibbsmin.jobs.remarks import outlet_hazards, warnings
from gibbsmin.minimise import Method, Status
from gibbsmin.reactor.audit import SolvedState, audit, element_activities, element_potentials
from gibbsmin.reactor.chemistry import Chemistry
from gibbsmin.reactor.conditions import HIGHEST_TEMPERATURE, LOWEST_TEMPERATURE, Equilibria
from gibbsmin.reactor.energy import EnergyBalance
from gibbsmin.reactor.inlet import Inlet
from gibbsmin.reactor.model import StageModel
from gibbsmin.reactor.specification import Specification
from gibbsmin.reactor.stage import StageStates, solve_stage
from gibbsmin.reactor.streams import Stream
from gibbsmin.results import EntropyGeneration, StageOutlet, StateCertificate
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Species

_TRACE = 1e-6


def predict_stage(
    stage: StageCase, streams: Sequence[Stream], library: Library
) -> tuple[StageOutlet, ...]:
    """Solve a stage fed by these streams; a bypass joins as a stage of its own that only mixes.

    Raises
    ------
    InputError
        when no amounts of the candidates hold the feed's elements, when the stage's holds or
        approaches do not fit, or when no temperature meets its specification.
    """
    if not stage.bypass:
        return (_react(stage, streams, library),)
    around = [_share(stream, stage.bypass) for stream in streams]
    through = [_share(stream, 1.0 - stage.bypass) for stream in streams]
    reacted = _react(replace(stage, removed={}), through, library)
    mixing = StageCase(
        name=f"{stage.name}, bypass joined",
        key=stage.key,
        feeds=(),
        chemistry=Chemistry(reactions="none"),
        specification=Specification(heat=0.0, pressure=reacted.pressure),
        boundary_temperature=None,
        surroundings_temperature=stage.surroundings_temperature,
        bypass=0.0,
        removed=stage.removed,
    )
    return (reacted, _react(mixing, [leaving_stream(reacted, streams[0]), *around], library))


def leaving_stream(outlet: StageOutlet, fed: Stream) -> Stream:
    """What goes on from a stage: its outlet without what is taken out of it."""
    going_on = {
        record.name: amount - outlet.removed.get(record.name, 0.0)
        for record, amount in zip(outlet.records, outlet.amounts.tolist(), strict=True)
    }
    return Stream(
        name=outlet.name,
        temperature=outlet.temperature,
        pressure=outlet.pressure,
        amounts={name: amount for name, amount in going_on.items() if amount > 0.0},
        unit=fed.unit,
        is_flow=fed.is_flow,
    )


def _react(stage: StageCase, streams: Sequence[Stream], library: Library) -> StageOutlet:
    states = solve_stage(
        stage.chemistry, stage.specification, stage.boundary_temperature, streams, library
    )
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
        activities=element_activities(model, state, library) if certified else (),
        figures=figures_of(states) if certified else (),
        audit=entries,
        warnings=warnings(model, streams, state, entries, entropy.remark, status),
        notes=_notes(model, state, found),
        hazards=outlet_hazards(model, state.amounts),
    )


def _require_an_answer(stage: StageCase, states: StageStates, status: Status) -> None:
    """Refuse a single state that has none: no temperature, or candidates that cannot hold it."""
    specification = stage.specification
    if np.isnan(states.equilibria.temperature[0]):
        wanted, key = "the feed's entropy to be kept", "entropy"
        if not specification.entropy_of_feed:
            heat = 0.0 if specification.heat is None else float(specification.heat)
            wanted, key = f"a heat of {heat / 1e3:g} kJ (per second in a flow)", "heat"
        raise InputError(
            f"found {wanted}, which no temperature between {LOWEST_TEMPERATURE:g} K and "
            f"{HIGHEST_TEMPERATURE:g} K meets",
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


def _share(stream: Stream, share: float) -> Stream:
    return replace(
        stream, amounts={name: share * amount for name, amount in stream.amounts.items()}
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
