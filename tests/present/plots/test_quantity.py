"""Quantities: words of a user to columns of a scan, in the units of a page."""

from __future__ import annotations

import tomllib
from dataclasses import replace
from typing import Any

import numpy as np
import pytest
from plot_cases import EXAMPLES, IN_T, case

import gibbsmin
from gibbsmin.errors import InputError
from gibbsmin.jobs.axis import Axis
from gibbsmin.present.plots.quantity import axis_name, prefixed, quantity, remarks


@pytest.fixture(scope="module")
def found() -> Any:
    return gibbsmin.scan(case(IN_T | {"count": 5}), uncertainty=True)


@pytest.fixture(scope="module")
def train() -> Any:
    axis = {"vary": "feed.gas.temperature", "values": ["410 degC", "420 degC", "430 degC"]}

    text = (EXAMPLES / "sulphur_dioxide_converter" / "case.toml").read_text()
    return gibbsmin.scan(gibbsmin.load_case(tomllib.loads(text) | {"axis": [axis]}))


@pytest.mark.parametrize(
    ("show", "name", "column", "factor"),
    [
        ("y CH4(g)", "CH4(g) in the gas, mol %", "y CH4(g)", 100.0),
        ("y CH4", "CH4(g) in the gas, mol %", "y CH4(g)", 100.0),
        ("fraction CH4", "CH4(g) in the gas, mol %", "y CH4(g)", 100.0),
        ("conversion CH4", "conversion of CH4(g), %", "conversion CH4(g)", 100.0),
        ("heat", "heat added, kJ", "heat, kJ", 1.0),
        ("heat, kJ", "heat added, kJ", "heat, kJ", 1.0),
        ("amount C(graphite)", "C(graphite), mol", "amount C(graphite), mol", 1.0),
        ("temperature", "temperature, K", "temperature, K", 1.0),
    ],
)
def test_a_result_is_found_by_its_words(
    found: Any, show: str, name: str, column: str, factor: float
) -> None:
    shown = quantity(found, show)
    assert shown.name == name
    assert shown.values == pytest.approx(factor * found.table[column])
    assert shown.band is not None
    label, comma, unit = column.partition(", ")
    assert shown.band == pytest.approx(factor * found.table[f"u({label}){comma}{unit}"])


def test_dry_is_of_the_gas_without_its_water(found: Any) -> None:
    shown = quantity(found, "dry fraction H2")
    assert shown.name == "H2(g) in the dry gas, mol %"
    dry = found.table["y H2(g)"] / (1.0 - found.table["y H2O(g)"])
    assert shown.values == pytest.approx(100.0 * dry)
    assert shown.band is None  # the correlation with the water is not in the table


def test_of_a_train_the_last_stage_is_meant_unless_another_is_named(train: Any) -> None:
    last = quantity(train, "conversion SO2")
    assert last.name == "bed 4: conversion of SO2(g), %"
    assert last.values == pytest.approx(100.0 * train.table["bed 4: conversion SO2(g)"])
    first = quantity(train, "conversion SO2", "bed 1")
    assert first.values == pytest.approx(100.0 * train.table["bed 1: conversion SO2(g)"])
    by_column = quantity(train, "bed 1: conversion SO2(g)")
    assert np.array_equal(by_column.values, first.values)


def test_what_is_not_told_is_refused_with_what_is_nearest(found: Any, train: Any) -> None:
    with pytest.raises(InputError) as error:
        quantity(found, "y CH5(g)")
    assert str(error.value) == (
        'show: found "y CH5(g)", which the scan does not tell; accepted is a column of it, such '
        'as "y CH4(g)", "y H2(g)", "y CO(g)", "y H2O(g)", "y CO2(g)".'
    )
    with pytest.raises(InputError) as error:
        quantity(found, "")
    assert str(error.value) == (
        "show: found nothing to show; accepted is a column of it, such as "
        '"gap", "temperature, K", "pressure, bar", "heat, kJ", "entropy generation, kJ/K", '
        '"y CH4(g)", "y H2O(g)", "y CO(g)".'
    )
    with pytest.raises(InputError) as error:
        quantity(found, "heat", "bed 1")
    assert str(error.value) == (
        'stage: found "bed 1", which is no stage of the scan; accepted is none to name.'
    )
    with pytest.raises(InputError) as error:
        quantity(train, "heat", "bed 9")
    assert str(error.value) == (
        'stage: found "bed 9", which is no stage of the scan; accepted is one of bed 1, cooler 1, '
        "bed 2, cooler 2, bed 3, cooler 3, bed 4."
    )


@pytest.mark.parametrize(
    ("name", "unit", "scale", "words"),
    [
        ("outlet.temperature", "degC", "", "outlet temperature, °C"),
        ("stage.bed 1.pressure_drop", "mbar", "", "bed 1: pressure drop, mbar"),
        ("feed.steam.amounts.H2O", "kmol/h", "", "steam: H2O, kmol/h"),
        ("H2O/C", "", "steam", "H2O/C, mol/mol"),
        ("outlet.approach.1", "K", "", "outlet approach 1, K"),
        ("outlet.volume", "m3", "", "outlet volume, m³"),
        ("outlet.bypass", "", "", "outlet bypass"),
    ],
)
def test_axes_are_named_in_words(name: str, unit: str, scale: str, words: str) -> None:
    assert axis_name(Axis(name, np.zeros(1), np.zeros(1), unit, scale)) == words


def test_heat_has_the_prefix_that_suits() -> None:
    assert prefixed(7.1e6, is_flow=True) == (1e6, "MW")
    assert prefixed(1.2e6, is_flow=True) == (1e3, "kW")
    assert prefixed(3.0e2, is_flow=False) == (1.0, "J")


def test_the_foot_tells_of_bands_and_of_missing_states(found: Any) -> None:
    shown = quantity(found, "heat")
    assert remarks(found, [shown]) == ["Bands: one standard uncertainty to either side."]
    shown = quantity(found, "dry fraction H2")
    sentence = "No band: the scan does not tell how sure this is."
    assert remarks(found, [shown]) == [sentence]
    table = found.table.assign(status=["certified", "unmet", "certified", "unmet", "certified"])
    assert remarks(replace(found, table=table), []) == ["2 of 5 states have no answer."]
