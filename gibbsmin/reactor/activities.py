"""Activities of the elements in an outlet: p(O2), a(C), p(N2) and p(S2)."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from gibbsmin.constants import STANDARD_PRESSURE
from gibbsmin.reactor.audit import SolvedState, log_activities, routes_at
from gibbsmin.reactor.model import StageModel
from gibbsmin.reactor.routes import Route
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Phase, Species

_ACTIVITY_RECORDS = {"O": "O2(g)", "C": "C(graphite)", "N": "N2(g)", "S": "S2(g)"}

ROUTES_AGREE = 1e-6
"""Difference of ln a below which routes agree."""

ROUTES_SHOWN = 3
"""Of the plainest routes, where they disagree."""


@dataclass(frozen=True)
class ElementActivity:
    """Activity of an element in the outlet against a reference record.

    For a gas the value is its partial pressure in bar, p(O2), in a real gas its fugacity, f(O2);
    for a solid its activity, a(C).
    """

    element: str
    label: str
    record: str
    value: float
    unit: str


def element_activities(
    model: StageModel, state: SolvedState, library: Library
) -> tuple[ElementActivity, ...]:
    """p(O2), a(C), p(N2) and p(S2), of those elements that the feed brings.

    They are given where the outlet determines them.  Where routes disagree, a(C) is given by each
    of the plainest: methane cracking, the Boudouard reaction, carbon monoxide with hydrogen.
    """
    symbols = [symbol for symbol in _ACTIVITY_RECORDS if symbol in model.balance.elements]
    if not symbols:
        return ()
    records = [library[_ACTIVITY_RECORDS[symbol]] for symbol in symbols]
    with np.errstate(over="ignore"):
        # Gases against 1 bar, so that they tell a pressure; solids as they would form here.
        values = np.exp(
            np.where(
                [record.phase is Phase.GAS for record in records],
                log_activities(model, state, records, STANDARD_PRESSURE),
                log_activities(model, state, records, state.pressure),
            )
        )
    gas_total = state.amounts[model.gas].sum()
    logs = model.mixture.log_fugacity(state.temperature, state.pressure, state.amounts)
    held = np.any(model.balance.matrix[len(model.balance.elements) :] != 0.0, axis=0)
    for i, record in enumerate(records):
        if record not in model.records or record.phase is not Phase.GAS or gas_total == 0.0:
            continue
        column = model.records.index(record)
        # A reference gas that is held apart from the others, or in a gas of which a fraction is
        # held, shows its own pressure.
        if np.isnan(values[i]) or held[column]:
            share = state.amounts[column] / gas_total
            values[i] = share * state.pressure / STANDARD_PRESSURE * np.exp(logs[column])
    found: list[ElementActivity] = []
    for symbol, record, value in zip(symbols, records, values.tolist(), strict=True):
        gas = record.phase is Phase.GAS
        kind = "a" if not gas else "p" if model.mixture.real is None else "f"
        label = f"{kind}({record.formula})"
        unit = "bar" if gas else ""
        ways = () if gas else _disagreeing_routes(model, state, record)
        found += [
            ElementActivity(symbol, f"{label} by {way.text}", record.name, way.activity, unit)
            for way in ways
        ] or [ElementActivity(symbol, label, record.name, value, unit)]
    return tuple(found)


def _disagreeing_routes(model: StageModel, state: SolvedState, record: Species) -> Sequence[Route]:
    """The plainest routes from the gas to a solid, where they do not agree; else none.

    The solid itself, held as char is, says nothing of what the gas would do.
    """
    if not (model.restrained and model.reacts):
        return ()
    gas = replace(state, amounts=np.where(model.gas, state.amounts, 0.0))
    (ways,) = routes_at(model, gas, [record], state.pressure)
    if not ways or ways[0].log_activity - ways[-1].log_activity < ROUTES_AGREE:
        return ()
    return sorted(ways, key=lambda way: way.awkwardness)[:ROUTES_SHOWN]
