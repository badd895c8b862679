"""Targets: each answer, put back into a prediction, meets the value."""

from __future__ import annotations

from copy import deepcopy
from typing import Any

import numpy as np
import pytest

import gibbsmin
from gibbsmin.errors import InputError
from gibbsmin.jobs.target import Target
from gibbsmin.results import StageOutlet

CASE: dict[str, Any] = {
    "feed": {
        "gas": {
            "temperature": "500 degC",
            "pressure": "20 bar",
            "unit": "mol",
            "amounts": {"CH4": 1.0},
        },
        "steam": {
            "temperature": "500 degC",
            "pressure": "20 bar",
            "unit": "mol",
            "amounts": {"H2O": 3.0},
        },
    },
    "species": {"consider": ["CH4", "H2O", "CO", "CO2", "H2", "C(graphite)"]},
    "outlet": {"temperature": "800 degC", "pressure": "20 bar"},
}
IN_T = {"vary": "outlet.temperature", "first": "500 degC", "last": "1000 degC", "count": 11}


def find(result: str, value: Any, axis: dict[str, Any] = IN_T, **top: Any) -> Target:
    tables = deepcopy(CASE) | {"axis": [axis], "target": {"result": result, "value": value}} | top
    return gibbsmin.target(gibbsmin.load_case(tables))


@pytest.mark.parametrize(
    ("result", "value", "wanted"),
    [
        ("dry fraction CH4", "5 %", 0.05),
        ("fraction H2", 0.4, 0.4),
        ("conversion CH4", "60 %", 0.6),
        ("heat", "150 kJ", 150e3),
        ("amount CO", "0.3 mol", 0.3),
        ("amount CO", "8.403 g", 8.403 / 28.010),  # molar mass of CO: IUPAC atomic weights
        ("activity C(graphite)", 0.2, 0.2),
    ],
)
def test_an_answer_meets_its_target_in_a_prediction(result: str, value: Any, wanted: float) -> None:
    found = find(result, value)
    assert found.shown.size >= 1
    assert found.certified.all()
    assert not found.lost_row.size
    for shown in found.shown.tolist():
        outlet = {"temperature": f"{shown!r} degC", "pressure": "20 bar"}
        final = gibbsmin.predict(gibbsmin.load_case(deepcopy(CASE) | {"outlet": outlet})).final
        assert reached(final, result) == pytest.approx(wanted, rel=1e-8)


def test_lost_work_and_entropy_generation_are_targets_of_one_place() -> None:
    """Lost work is the temperature of the surroundings, 298.15 K, times the entropy generated."""
    (entropy,) = find("entropy generation", "0.05 kJ/K").shown.tolist()
    outlet = {"temperature": f"{entropy!r} degC", "pressure": "20 bar"}
    final = gibbsmin.predict(gibbsmin.load_case(deepcopy(CASE) | {"outlet": outlet})).final
    assert final.entropy.value == pytest.approx(50.0, rel=1e-8)
    assert find("lost work", f"{0.05 * 298.15} kJ").shown == pytest.approx([entropy], rel=1e-10)


@pytest.mark.parametrize(
    ("column", "result", "value"),
    [
        ("y H2(g)", "fraction H2", "40 %"),
        ("heat, kJ", "heat", "150 kJ"),
        ("amount C(graphite), mol", "amount C(graphite)", "0 mol"),
        ("entropy generation, kJ/K", "entropy generation", "0.05 kJ/K"),
    ],
)
def test_a_scan_s_columns_name_results_too(column: str, result: str, value: str) -> None:
    assert column in gibbsmin.scan(gibbsmin.load_case(deepcopy(CASE) | {"axis": [IN_T]})).table
    by_column, by_result = find(column, value), find(result, value)
    assert by_column.shown.tolist() == by_result.shown.tolist()
    assert by_column.wanted == by_result.wanted


def reached(final: StageOutlet, result: str) -> float:
    """A result of a predicted stage."""
    kind, _, species = result.rpartition(" ")
    names = [record.name for record in final.records]
    if kind == "activity":
        return next(a.value for a in final.activities if a.label == "a(C)")
    if kind == "conversion":
        return final.conversion[f"{species}(g)"]
    if kind == "":
        return final.heat
    arrays = {
        "dry fraction": final.dry_mole_fractions,
        "fraction": final.mole_fractions,
        "amount": final.amounts,
    }
    return float(arrays[kind][names.index(f"{species}(g)")])


def test_a_target_met_twice_has_two_answers_and_one_out_of_reach_none() -> None:
    twice = find("activity C(graphite)", 0.3)
    assert twice.shown.size == 2
    assert twice.rising.tolist() == [True, False]
    none = find("conversion CH4", "99.99999 %")
    assert none.shown.size == 0
    assert none.lowest[0] < none.highest[0] < 0.9999999


def test_an_adiabatic_temperature_is_met_by_preheat() -> None:
    axis = {"vary": "feed.gas.temperature", "first": "300 degC", "last": "900 degC", "count": 7}
    tables = {"outlet": {"heat": "0 kJ", "pressure": "20 bar"}}
    found = find("temperature", "420 degC", axis, **tables)
    assert found.shown.size == 1
    assert found.reached == pytest.approx([693.15], rel=1e-10)


def test_a_gauge_pressure_stands_on_the_site_s() -> None:
    axis = {"vary": "outlet.pressure", "first": "10 barg", "last": "30 barg", "count": 5}
    found = find("pressure", "20 barg", axis, site_pressure="0.8 bar")
    assert found.wanted == pytest.approx(20.8e5, rel=1e-12)
    assert found.shown == pytest.approx([20.0], rel=1e-10)


def test_a_value_that_the_result_jumps_over_is_told() -> None:
    """Steam gives off 40 kJ/mol where it condenses: no temperature gives half of it."""
    water = {"temperature": "25 degC", "pressure": "1 bar", "unit": "mol", "amounts": {"H2O": 1.0}}
    found = find(
        "heat",
        "-20 kJ",
        IN_T | {"first": "50 degC", "last": "150 degC"},
        feed={"water": water},
        species={"consider": ["H2O", "H2O(l)"]},
        outlet={"temperature": "80 degC", "pressure": "1 bar"},
    )
    assert found.shown.size == 0
    assert found.lost_row.tolist() == [0]
    boiling = gibbsmin.onset(
        gibbsmin.load_case(
            {
                "feed": {"water": water},
                "species": {"consider": ["H2O", "H2O(l)"]},
                "outlet": {"temperature": "80 degC", "pressure": "1 bar"},
                "axis": [IN_T | {"first": "50 degC", "last": "150 degC"}],
                "onset": {"phase": "H2O(l)"},
            }
        )
    )
    assert found.lost[:, 0] == pytest.approx(boiling.shown.tolist() * 2, abs=1e-6)
    assert found.lowest[0] < found.wanted < found.highest[0]


def test_a_second_axis_gives_a_curve_of_answers() -> None:
    second = {"vary": "outlet.pressure", "values": ["10 bar", "20 bar", "30 bar"]}
    tables = deepcopy(CASE) | {
        "axis": [IN_T, second],
        "target": {"result": "dry fraction CH4", "value": "5 %"},
    }
    curve = gibbsmin.target(gibbsmin.load_case(tables))
    assert curve.row.tolist() == [0, 1, 2]
    assert np.all(np.diff(curve.shown) > 0.0)
    assert curve.shown[1] == pytest.approx(find("dry fraction CH4", "5 %").shown[0], rel=1e-10)


@pytest.mark.parametrize(
    ("result", "value", "sentence"),
    [
        (
            "slip",
            "5 %",
            'target.result: found "slip", which is no result; accepted is temperature, pressure, '
            "heat, shaft work, entropy generation, lost work, or one of fraction, dry fraction, "
            'conversion, amount, activity with a species, such as "dry fraction CH4".',
        ),
        (
            "dry fraction CH4",
            "5 bar",
            'target.value: found "5 bar", which is no share; accepted is a share from 0 to 1, such '
            'as 0.8 or "80 %".',
        ),
        (
            "heat",
            "5 bar",
            'target.value: found "5 bar", which is a pressure; accepted is a heat such as '
            '"1.5 MW", "2 Gcal/h" or "30 kJ".',
        ),
        (
            "entropy generation",
            "150 kJ",
            'target.value: found "150 kJ"; accepted is an entropy such as "12 kJ/K" or an entropy '
            'flow such as "3 kW/K".',
        ),
        (
            "entropy generation",
            "0.15 kJ/mol",
            'target.value: found "0.15 kJ/mol", which is no heat per kelvin; accepted is an '
            'entropy such as "12 kJ/K" or an entropy flow such as "3 kW/K".',
        ),
        (
            "entropy generation",
            "5 bar/K",
            'target.value: found "5 bar/K"; accepted is an entropy such as "12 kJ/K" or an entropy '
            'flow such as "3 kW/K".',
        ),
        (
            "entropy generation",
            "0.15 kW/K",
            'target.value: found an entropy in "kW", while the feeds are in "mol"; accepted is a '
            "quantity, as the feeds are.",
        ),
        (
            "heat",
            "150 kW",
            'target.value: found a heat in "kW", while the feeds are in "mol"; accepted is a '
            "quantity, as the feeds are.",
        ),
        (
            "amount CO",
            "3 kg/h",
            'target.value: found an amount in "kg/h", while the feeds are in "mol"; accepted is a '
            "quantity, as the feeds are.",
        ),
        (
            "activity C(graphite)",
            "0.2",
            'target.value: found "0.2"; accepted is a number above zero, such as 0.5.',
        ),
        (
            "fraction NH3",
            "1 %",
            'target.result: found "NH3(g)", which is no candidate of outlet; accepted is one of '
            "CH4(g), H2O(g), CO(g), CO2(g), H2(g), C(graphite).",
        ),
        (
            "dry fraction H2O",
            "1 %",
            'target.result: found "H2O(g)", which is no part of that gas; accepted is a gas, such '
            "as CH4(g).",
        ),
        (
            "conversion CO",
            "1 %",
            'target.result: found "CO(g)", which does not enter outlet; accepted is one of '
            "CH4(g), H2O(g).",
        ),
    ],
)
def test_what_is_no_target_is_refused(result: str, value: Any, sentence: str) -> None:
    with pytest.raises(InputError) as error:
        find(result, value)
    assert str(error.value) == sentence
