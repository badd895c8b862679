"""One stage: from its streams to a certified state and all that follows from it."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.errors import BalanceError
from gibbsmin.jobs.case_stage import StageCase
from gibbsmin.jobs.remarks import outlet_hazards, warnings
from gibbsmin.minimise import Method, Status
from gibbsmin.reactor.audit import SolvedState, audit, element_activities
from gibbsmin.reactor.chemistry import Chemistry
from gibbsmin.reactor.conditions import Equilibria
from gibbsmin.reactor.energy import (
    EntropyGeneration,
    entropy_generation,
    mixture_enthalpy,
    mixture_entropy,
)
from gibbsmin.reactor.inlet import Inlet, inlet_of
from gibbsmin.reactor.model import StageModel, stage_model
from gibbsmin.reactor.specification import Specification, solve
from gibbsmin.reactor.streams import Stream
from gibbsmin.results import StageOutlet, StateCertificate
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
    inlet = inlet_of(streams, library)
    model = stage_model(stage.chemistry, inlet.records, library)
    found = solve(model, stage.specification, inlet)
    status = tuple(Status)[found.solution.status[0]]
    if status is Status.INFEASIBLE:
        names = ", ".join(record.name for record in inlet.records)
        raise BalanceError(
            "found candidates that cannot hold the feed's elements in their proportions",
            f"accepted is a list that can, for instance one with {names}",
            key="species.consider",
        )
    state = SolvedState(
        temperature=float(found.temperature[0]),
        pressure=float(found.pressure[0]),
        amounts=found.amounts[0],
        multipliers=found.solution.multipliers[0],
    )
    certified = status is Status.CERTIFIED
    heat, work, entropy = _energy_balance(stage, inlet, model, state)
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
        element_potentials=_element_potentials(model, state),
        conversion=conversion(inlet, model.records, state.amounts),
        heat=heat,
        shaft_work=work,
        entropy=entropy,
        activities=element_activities(model, state, library) if certified else (),
        audit=entries,
        warnings=warnings(model, streams, state, entries, entropy.remark, status),
        notes=_notes(model, state, found),
        hazards=outlet_hazards(model, state.amounts),
    )


def _share(stream: Stream, share: float) -> Stream:
    return replace(
        stream, amounts={name: share * amount for name, amount in stream.amounts.items()}
    )


def _energy_balance(
    stage: StageCase, inlet: Inlet, model: StageModel, state: SolvedState
) -> tuple[float, float, EntropyGeneration]:
    """Heat and shaft work into the stage (J or W), and the entropy they leave unaccounted for.

    A reversible stage takes up its enthalpy change as shaft work, a closed vessel its change of
    internal energy as heat.
    """
    T, P = state.temperature, state.pressure
    change = float(mixture_enthalpy(model.properties, T, state.amounts)) - inlet.enthalpy
    heat, work = change, 0.0
    needs_compressor = bool(inlet.carries_gas and inlet.lowest_pressure < P)
    if stage.specification.entropy_of_feed:
        heat, work = 0.0, change
        needs_compressor = False
    elif stage.specification.volume is not None:
        room = float(state.amounts[model.gas].sum()) * GAS_CONSTANT * T
        heat = change + inlet.enthalpy - room - inlet.internal_energy
        needs_compressor = stage.specification.volume < inlet.volume
    if stage.specification.heat is not None:
        heat = stage.specification.heat
    boundary = stage.boundary_temperature
    return (
        heat,
        work,
        entropy_generation(
            outlet=float(mixture_entropy(model.properties, model.gas, T, P, state.amounts)),
            inlet=inlet.entropy,
            heat=heat,
            boundary_temperature=T if boundary is None else boundary,
            surroundings_temperature=stage.surroundings_temperature,
            needs_compressor=needs_compressor,
        ),
    )


def _certificate(found: Equilibria) -> StateCertificate:
    certificate = found.solution.certificate
    return StateCertificate(
        gap=float(certificate.gap[0]),
        balance=float(certificate.balance[0]),
        stationarity=float(certificate.stationarity[0]),
    )


def _element_potentials(model: StageModel, state: SolvedState) -> Mapping[str, float]:
    """λ of the element and charge rows; holds are no elements."""
    potentials = state.multipliers[: len(model.balance.elements)]
    return dict(zip(model.balance.elements, potentials.tolist(), strict=True))


def conversion(inlet: Inlet, records: Sequence[Species], outlet: FloatArray) -> Mapping[str, float]:
    """Share of each substance of the feed that is used up; its forms count as one substance.

    Traces below a millionth of the feed, such as a former stage's radicals, are left away.
    """
    entering: dict[str, float] = {}
    leaving: dict[str, float] = {}
    for record, amount in zip(inlet.records, inlet.amounts.tolist(), strict=True):
        entering[record.formula] = entering.get(record.formula, 0.0) + amount
    for record, amount in zip(records, outlet.tolist(), strict=True):
        leaving[record.formula] = leaving.get(record.formula, 0.0) + amount
    missing = float("nan") if np.isnan(outlet).any() else 0.0
    return {
        record.name: 1.0 - leaving.get(record.formula, missing) / entering[record.formula]
        for record in inlet.records
        if entering[record.formula] > _TRACE * inlet.amounts.sum()
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
