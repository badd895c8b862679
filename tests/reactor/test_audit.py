"""What a solved state says about records that are not in it."""

from __future__ import annotations

import numpy as np
import pytest

from gibbsmin.minimise import minimise
from gibbsmin.reactor.activities import element_activities
from gibbsmin.reactor.audit import SolvedState, audit, element_potentials
from gibbsmin.reactor.candidates import Selection
from gibbsmin.reactor.chemistry import Chemistry
from gibbsmin.reactor.model import StageModel, stage_model
from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.properties import PropertyTable

LIBRARY = load_library()
CONSIDERED = ("CH4(g)", "H2O(g)", "CO(g)", "CO2(g)", "H2(g)", "N2(g)")


def solved(
    *considered: str, inert: tuple[str, ...] = (), T: float = 1000.0
) -> tuple[StageModel, SolvedState]:
    feed = [LIBRARY[name] for name in ("CH4(g)", "H2O(g)", "N2(g)")]
    model = stage_model(Chemistry(Selection(considered, inert=inert)), feed, LIBRARY)
    solution = minimise(
        model.programme(np.array([T]), np.array([1e5]), np.array([[1.0, 2.0, 1.0]]))
    )
    return model, SolvedState(T, 1e5, solution.amounts[0], solution.multipliers[0])


def test_what_would_reach_is_what_forms_once_it_is_considered() -> None:
    model, state = solved(*CONSIDERED)
    (ammonia,) = [e for e in audit(model, state, LIBRARY, ()) if e.record.name == "NH3(g)"]
    wider, with_ammonia = solved(*CONSIDERED, "NH3(g)")
    column = [record.name for record in wider.records].index("NH3(g)")
    formed = with_ammonia.amounts[column] / with_ammonia.amounts.sum()
    assert ammonia.would_reach == pytest.approx(formed, rel=1e-3)  # it is a trace


def test_carbon_activity_is_that_of_the_boudouard_reaction() -> None:
    model, state = solved(*CONSIDERED)
    (carbon,) = [e for e in audit(model, state, LIBRARY, ()) if e.record.name == "C(graphite)"]
    table = PropertyTable.of([LIBRARY[n] for n in ("CO(g)", "CO2(g)", "C(graphite)")])
    log_K = -table.gibbs_energy(1000.0) @ np.array([-2.0, 1.0, 1.0]) / (8.31446261815324 * 1000.0)
    names = [record.name for record in model.records]
    y = state.amounts / state.amounts.sum()
    expected = np.exp(log_K) * y[names.index("CO(g)")] ** 2 / y[names.index("CO2(g)")]
    assert carbon.activity == pytest.approx(expected, rel=1e-10)
    activities = {a.label: a.value for a in element_activities(model, state, LIBRARY)}
    assert activities["a(C)"] == pytest.approx(expected, rel=1e-10)
    assert activities["p(N2)"] == pytest.approx(y[names.index("N2(g)")], rel=1e-10)


def test_the_most_weighty_come_first_and_what_is_left_out_does_not_warn() -> None:
    model, state = solved(*CONSIDERED)
    entries = audit(model, state, LIBRARY, ("C(graphite)",))
    weights = [entry.weight for entry in entries]
    assert weights == sorted(weights, reverse=True)
    assert [e.warns for e in entries if e.record.name == "C(graphite)"] == [False]


def test_what_the_outlet_does_not_determine_is_not_said() -> None:
    # Nitrogen is held as such, so that nothing is known of atomic nitrogen's potential.
    model, state = solved(*CONSIDERED, inert=("N2(g)",))
    potentials = element_potentials(model, state)
    assert np.isnan(potentials["N"])
    assert np.isfinite([potentials[symbol] for symbol in "CHO"]).all()
    activities = {a.label: a.value for a in element_activities(model, state, LIBRARY)}
    assert activities["p(N2)"] == pytest.approx(state.amounts[5] / state.amounts.sum())


def test_steam_alone_determines_no_element() -> None:
    water = [LIBRARY["H2O(g)"]]
    model = stage_model(Chemistry(Selection(("H2O(g)",))), water, LIBRARY)
    solution = minimise(model.programme(np.array([500.0]), np.array([1e5]), np.array([[1.0]])))
    state = SolvedState(500.0, 1e5, solution.amounts[0], solution.multipliers[0])
    assert np.isnan(list(element_potentials(model, state).values())).all()
    judged = {entry.record.name: entry.activity for entry in audit(model, state, LIBRARY, ())}
    assert set(judged) == {"H2O(l)", "H2O(cr)"}
    assert 0.0 < judged["H2O(l)"] < 0.1  # steam at 1 bar and 500 K is far from condensing


def test_where_nothing_reacts_a_trace_is_judged_by_itself_alone() -> None:
    """Cold synthesis gas would make ammonia in plenty; a cooler makes none."""
    feed = [LIBRARY[name] for name in ("H2(g)", "N2(g)", "H2O(g)", "NH3(g)")]
    model = stage_model(Chemistry(reactions="none", condense=("H2O",)), feed, LIBRARY)
    amounts = np.array([[3.0, 1.0, 0.5, 1e-7]])
    solution = minimise(model.programme(np.array([313.15]), np.array([1e5]), amounts))
    state = SolvedState(313.15, 1e5, solution.amounts[0], solution.multipliers[0])
    entries = {entry.record.name: entry for entry in audit(model, state, LIBRARY, ())}
    fraction = 1e-7 / state.amounts[model.gas].sum()
    # 15.5 bar of vapour pressure at 40 °C (common knowledge); the record is within a third of it
    assert entries["NH3(l)"].activity == pytest.approx(fraction / 15.5, rel=0.35)
    assert [route.text for route in entries["NH3(l)"].routes] == ["NH3 = NH3"]
    assert not any(entry.warns for entry in entries.values())
