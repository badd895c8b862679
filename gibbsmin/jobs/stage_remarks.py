"""What a stage's answer needs said: that there is none, or how it came about."""

from __future__ import annotations

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.errors import BalanceError, InputError
from gibbsmin.jobs.case_stage import StageCase
from gibbsmin.jobs.remarks import own_records_notes
from gibbsmin.jobs.train import Step
from gibbsmin.minimise import Status
from gibbsmin.reactor.audit import SolvedState
from gibbsmin.reactor.conditions import Equilibria
from gibbsmin.reactor.model import HIGHEST_TEMPERATURE, LOWEST_TEMPERATURE, StageModel
from gibbsmin.thermo.library import Library


def require_an_answer(step: Step, status: Status) -> None:
    """Refuse a single state that has none, or several.

    Raises
    ------
    InputError
        where no temperature, or more than one, meets the specification.
    BalanceError
        where no amounts of the candidates hold the feed's elements.
    """
    specification, states = step.stage.specification, step.states
    if status in (Status.UNMET, Status.AMBIGUOUS):
        wanted, key = "the feed's entropy to be kept", "entropy"
        if specification.heat_loss is not None:
            wanted, key = f"a heat loss of {100 * specification.heat_loss:g} %", "heat_loss"
        elif not specification.entropy_of_feed:
            heat = 0.0 if specification.heat is None else float(specification.heat)
            unit = "kW" if step.streams[0].is_flow else "kJ"
            wanted, key = f"a heat of {heat / 1e3:g} {unit}", "heat"
        if status is Status.AMBIGUOUS:
            low, high = states.equilibria.answers[:, 0].tolist()
            met = f"which {low:.2f} K and {high:.2f} K both meet under the approach"
        else:
            where = " where the approach has a meaning" if states.model.shift.keys else ""
            met = (
                f"which no temperature between {LOWEST_TEMPERATURE:g} K and "
                f"{HIGHEST_TEMPERATURE:g} K meets{where}"
            )
        raise InputError(
            f"found {wanted}, {met}",
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


def service_notes(stage: StageCase, model: StageModel, library: Library) -> tuple[str, ...]:
    """What the trade proposes for the service, so that the user may overrule it."""
    service = stage.service
    if service is None:
        return ()
    selection = stage.chemistry.selection
    considered = selection.consider if selection.consider != "all" else ("all",)
    parts = [f"considered are {', '.join(considered)}"]
    if selection.inert_where_fed:
        parts.append(f"inert where fed {', '.join(selection.inert_where_fed)}")
    if gangue := selection.gangue(model.feed_records, library):
        parts.append(f"unchanged for want of a candidate {', '.join(gangue)}")
    if service.key_reactions:
        parts.append(f"key reactions {'; '.join(service.key_reactions)}")
    if service.carbon_routes:
        parts.append(f"carbon routes {'; '.join(service.carbon_routes)}")
    sources = ", ".join(dict.fromkeys(service.sources.values()))
    return (f"Service {service.name} ({sources}): {', '.join(parts)}.",)


def method_notes(model: StageModel, state: SolvedState, found: Equilibria) -> tuple[str, ...]:
    """What the user asked for and how it was done: own records, plateaus, approaches."""
    notes: list[str] = []
    taking_part = dict.fromkeys([*model.feed_records, *model.records])
    notes += own_records_notes(taking_part)
    share = float(found.upper_share[0])
    if not np.isnan(share):
        notes.append(
            f"Heat is taken up at constant temperature: {100 * share:.2f} % of the change at "
            f"{state.temperature:.2f} K is done."
        )
    for row, text in enumerate(model.shift.texts):
        shifted = float(model.shift.shifted_temperature(row, state.temperature))
        key = model.records[model.shift.keys[row]].name
        absent = _absent_solids(model, state, model.shift.stoichiometry[row])
        notes.append(
            f'"{text}" is set to equilibrium at {shifted:.2f} K, an approach of '
            f"{model.shift.differences[row]:g} K; its key is {key}."
            + (f" {absent} is absent, so it only bounds the outlet." if absent else "")
        )
    notes += [_fraction_note(model, state, row) for row in model.fraction_rows]
    return tuple(notes)


def _fraction_note(model: StageModel, state: SolvedState, row: int) -> str:
    """How far a held fraction y of the gas moves other reactions.

    Its multiplier μ adds −y μ to the potential of every gas that it counts.
    """
    moved = abs(float(np.min(model.balance.matrix[row]) * state.multipliers[row]))
    name = model.balance.rows[row].removesuffix(" at a fraction")
    return (
        f"The held fraction of {name} weighs on the gas's other reactions: one that changes its "
        f"moles by 1 is {100 * np.expm1(moved):.2g} % off its constant. A held share of an "
        'element, such as "2 % of C", leaves them at equilibrium.'
    )


def _absent_solids(model: StageModel, state: SolvedState, stoichiometry: FloatArray) -> str:
    """The solids and liquids of a reaction that are not in the outlet, by name."""
    absent = (stoichiometry != 0.0) & ~model.gas & (state.amounts == 0.0)
    return " and ".join(model.records[i].name for i in np.flatnonzero(absent).tolist())
