"""One stage: from its feeds to a certified state and all that follows from it."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.errors import BalanceError
from gibbsmin.jobs.case import StageCase
from gibbsmin.jobs.remarks import cautions, warnings
from gibbsmin.minimise import Method, Solution, Status, minimise
from gibbsmin.reactor.audit import SolvedState, audit, element_activities
from gibbsmin.reactor.chemistry import Chemistry
from gibbsmin.reactor.energy import (
    EntropyGeneration,
    entropy_generation,
    mixture_enthalpy,
    mixture_entropy,
)
from gibbsmin.reactor.model import StageModel, stage_model
from gibbsmin.reactor.streams import Stream
from gibbsmin.results import StageOutlet, StateCertificate
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.species import Phase


def predict_stage(stage: StageCase, feeds: Sequence[Stream], library: Library) -> StageOutlet:
    """Solve a stage fed by these streams.

    Raises
    ------
    BalanceError
        when no amounts of the candidates hold the feed's elements.
    """
    names = list(dict.fromkeys(name for feed in feeds for name in feed.amounts))
    records = [library[name] for name in names]
    inlets = np.array([[feed.amounts.get(name, 0.0) for name in names] for feed in feeds])
    model = stage_model(Chemistry(selection=stage.selection), records, library)
    solution = minimise(
        model.programme(
            np.array([stage.temperature]), np.array([stage.pressure]), inlets.sum(axis=0)[None]
        )
    )
    status = tuple(Status)[solution.status[0]]
    if status is Status.INFEASIBLE:
        raise BalanceError(
            "found candidates that cannot hold the feed's elements in their proportions",
            f"accepted is a list that can, for instance one with {', '.join(names)}",
            key="species.consider",
        )
    state = SolvedState(
        stage.temperature, stage.pressure, solution.amounts[0], solution.multipliers[0]
    )
    certified = status is Status.CERTIFIED
    heat, entropy = _energy_balance(stage, feeds, inlets, model, state)
    entries = audit(model, state, library, stage.selection.leave_out) if certified else ()
    return StageOutlet(
        name=stage.name,
        status=status,
        method=tuple(Method)[solution.method[0]],
        temperature=stage.temperature,
        pressure=stage.pressure,
        records=model.records,
        amounts=state.amounts,
        certificate=_certificate(solution),
        element_potentials=_element_potentials(model, state),
        conversion=_conversion(model, inlets.sum(axis=0), state.amounts),
        heat=heat,
        entropy=entropy,
        activities=element_activities(model, state, library) if certified else (),
        audit=entries,
        warnings=warnings(model, feeds, state, entries, entropy.remark, status),
        cautions=cautions(model, state.amounts),
    )


def _energy_balance(
    stage: StageCase,
    feeds: Sequence[Stream],
    inlets: FloatArray,
    model: StageModel,
    state: SolvedState,
) -> tuple[float, EntropyGeneration]:
    """Heat added (J or W) and the entropy it leaves unaccounted for."""
    table = PropertyTable.of(model.feed_records)
    feed_gas = np.array([record.phase is Phase.GAS for record in model.feed_records], dtype=bool)
    T_in = np.array([feed.temperature for feed in feeds])
    P_in = np.array([feed.pressure for feed in feeds])
    T, P = state.temperature, state.pressure

    H_in = mixture_enthalpy(table, T_in, inlets).sum()
    S_in = mixture_entropy(table, feed_gas, T_in, P_in, inlets).sum()
    H_out = mixture_enthalpy(model.properties, T, state.amounts)
    S_out = mixture_entropy(model.properties, model.gas, T, P, state.amounts)
    heat = float(H_out - H_in)
    carries_gas = inlets[:, feed_gas].sum(axis=1) > 0.0
    boundary = stage.boundary_temperature
    return heat, entropy_generation(
        outlet=float(S_out),
        inlet=float(S_in),
        heat=heat,
        boundary_temperature=stage.temperature if boundary is None else boundary,
        surroundings_temperature=stage.surroundings_temperature,
        needs_compressor=bool(np.any(carries_gas & (P_in < P))),
    )


def _certificate(solution: Solution) -> StateCertificate:
    certificate = solution.certificate
    return StateCertificate(
        gap=float(certificate.gap[0]),
        balance=float(certificate.balance[0]),
        stationarity=float(certificate.stationarity[0]),
    )


def _element_potentials(model: StageModel, state: SolvedState) -> Mapping[str, float]:
    """λ of the element and charge rows; holds are no elements."""
    potentials = state.multipliers[: len(model.balance.elements)]
    return dict(zip(model.balance.elements, potentials.tolist(), strict=True))


def _conversion(model: StageModel, feed: FloatArray, outlet: FloatArray) -> Mapping[str, float]:
    """Share of each substance of the feed that is used up; its forms count as one substance."""
    entering: dict[str, float] = {}
    leaving: dict[str, float] = {}
    for record, amount in zip(model.feed_records, feed.tolist(), strict=True):
        entering[record.formula] = entering.get(record.formula, 0.0) + amount
    for record, amount in zip(model.records, outlet.tolist(), strict=True):
        leaving[record.formula] = leaving.get(record.formula, 0.0) + amount
    missing = float("nan") if np.isnan(outlet).any() else 0.0
    return {
        record.name: 1.0 - leaving.get(record.formula, missing) / entering[record.formula]
        for record in model.feed_records
        if entering[record.formula] > 0.0
    }
