"""Scans over tables of conditions and over every kind of number; error bars and xarray."""

from __future__ import annotations

from copy import deepcopy
from pathlib import Path
from typing import Any

import numpy as np
import pandas as pd
import pytest

import gibbsmin
from gibbsmin.errors import InputError
from gibbsmin.jobs.conditions import conditions_from
from gibbsmin.present.conditions_file import read_conditions

CASE: dict[str, Any] = {
    "feed": {
        "gas": {
            "temperature": "520 degC",
            "pressure": "30 bar",
            "unit": "mol",
            "amounts": {"CH4": 1.0, "N2": 0.02},
        },
        "steam": {
            "temperature": "520 degC",
            "pressure": "30 bar",
            "unit": "mol",
            "amounts": {"H2O": 3.0},
        },
    },
    "stage": [
        {
            "name": "reformer",
            "temperature": "800 degC",
            "pressure": "25 bar",
            "approach": [{"reaction": "CH4 + H2O = CO + 3 H2", "approach": "10 K"}],
            "boundary_temperature": "1000 degC",
        },
        {
            "name": "shift",
            "heat": "0 kJ",
            "pressure_drop": "0.5 bar",
            "conversion": {"CH4": "0 %"},
            "bypass": "10 %",
            "remove": {"CO2": "20 %"},
        },
    ],
    "species": {"consider": ["CH4", "H2O", "CO", "CO2", "H2", "N2", "C(graphite)"]},
}

AXES: dict[str, tuple[Any, ...]] = {
    "stage.reformer.temperature": ("750 degC", "820 degC"),
    "stage.reformer.pressure": ("20 bar", "30 bar"),
    "stage.reformer.approach.1": ("5 K", "15 K"),
    "stage.reformer.boundary_temperature": ("900 degC", "1100 degC"),
    "stage.shift.heat": ("-5 kJ", "5 kJ"),
    "stage.shift.pressure_drop": ("0.2 bar", "1 bar"),
    "stage.shift.conversion.CH4": ("0 %", "2 %"),
    "stage.shift.bypass": ("5 %", "30 %"),
    "stage.shift.remove.CO2": ("0 %", "90 %"),
    "feed.steam.temperature": ("400 degC", "600 degC"),
    "feed.steam.pressure": ("28 bar", "40 bar"),
    "feed.gas.amounts.N2": ("0.01 mol", "0.5 mol"),
}

HELD: dict[str, Any] = {
    "feed": {
        **CASE["feed"],
        "air": {
            "temperature": "20 degC",
            "pressure": "30 bar",
            "unit": "mol",
            "amounts": {"O2": 0.6, "N2": 2.3},
        },
    },
    "stage": [
        {"name": "burner", "heat_loss": "1 %", "pressure": "25 bar"},
        {
            "name": "converter",
            "heat": "20 kJ",
            "pressure": "20 bar",
            "approach": [{"reaction": "CH4 + H2O = CO + 3 H2", "approach": "5 K"}],
            "offset": {"C(graphite)": "2 kJ/mol"},
        },
        {
            "name": "furnace",
            "temperature": "500 degC",
            "pressure": "10 bar",
            "held_fraction": {"CH4": "1 % dry"},
            "activity": {"C(graphite)": 0.5},
        },
        {
            "name": "char bed",
            "temperature": "500 degC",
            "pressure": "10 bar",
            "held_fraction": {"CH4": "5 % of C"},
        },
    ],
    "species": {"consider": [*CASE["species"]["consider"], "O2"]},
}

HELD_AXES: dict[str, tuple[Any, ...]] = {
    "stage.burner.heat_loss": ("0.5 %", "5 %"),
    "stage.converter.approach.1": ("0 K", "30 K", "10 K"),
    "stage.converter.offset.C(graphite)": ("0 kJ/mol", "-20 kJ/mol"),
    "stage.furnace.held_fraction.CH4": ("1 %", "3 %"),
    "stage.furnace.activity.C(graphite)": (1.0, 0.1),
    "stage.char bed.held_fraction.CH4": ("2 %", "6 %"),
    "feed.air.total": ("2.7 mol", "3.2 mol"),
}


def put(tables: dict[str, Any], name: str, value: Any) -> dict[str, Any]:
    """The tables with the number of an axis's name replaced."""
    tables = deepcopy(tables)
    parts = name.split(".")
    if parts[0] == "feed":
        table: Any = tables["feed"][parts[1]]
        keys = parts[2:]
    else:
        table = next(s for s in tables["stage"] if s["name"] == parts[1])
        keys = parts[2:]
    if keys[0] == "total":
        factor = float(value.split()[0]) / sum(table["amounts"].values())
        table["amounts"] = {k: n * factor for k, n in table["amounts"].items()}
        return tables
    if keys[0] == "held_fraction":
        value += " dry" if parts[1] == "furnace" else " of C"
    if keys[0] == "approach":
        table["approach"][int(keys[1]) - 1]["approach"] = value
        return tables
    for key in keys[:-1]:
        table = table[key]
    table[keys[-1]] = value
    return tables


KINDS = [(CASE, *axis) for axis in AXES.items()] + [(HELD, *axis) for axis in HELD_AXES.items()]


@pytest.mark.parametrize(("case", "name", "values"), KINDS, ids=[name for _, name, _ in KINDS])
def test_rows_of_every_kind_of_axis_equal_single_predictions(
    case: dict[str, Any], name: str, values: tuple[Any, ...]
) -> None:
    tables = deepcopy(case) | {"axis": [{"vary": name, "values": list(values)}]}
    table = gibbsmin.scan(gibbsmin.load_case(tables)).table
    assert len(table) == len(values)
    for row, value in enumerate(values):
        outlet = gibbsmin.predict(gibbsmin.load_case(put(case, name, value)))
        for stage in outlet.stages:
            before = f"{stage.name}: "
            for record, y in zip(stage.records, stage.mole_fractions, strict=True):
                if np.isfinite(y):
                    found = table[f"{before}y {record.name}"][row]
                    assert found == pytest.approx(y, rel=1e-10, abs=1e-14)
            assert table[f"{before}temperature, K"][row] == pytest.approx(
                stage.temperature, rel=1e-10
            )
            assert table[f"{before}heat, kJ"][row] == pytest.approx(
                stage.heat / 1e3, rel=1e-10, abs=1e-9
            )


def test_a_table_of_conditions_is_a_row_a_state(tmp_path: Path) -> None:
    conditions = pd.DataFrame(
        {
            "label": ["winter", "high summer"],
            "stage.reformer.temperature, degC": [780.0, 820.0],
            "H2O/CH4 by steam": [2.5, 3.5],
            "stage.shift.bypass": [0.1, 0.2],
        }
    )
    case = gibbsmin.load_case(CASE)
    found = gibbsmin.scan(case, conditions)
    assert found.table["label"].tolist() == ["winter", "high summer"]
    for row, (T, ratio, bypass) in enumerate([(780.0, 2.5, 0.1), (820.0, 3.5, 0.2)]):
        tables = put(CASE, "stage.reformer.temperature", f"{T} degC")
        tables = put(tables, "feed.steam.amounts.H2O", ratio)
        tables = put(tables, "stage.shift.bypass", bypass)
        stage = gibbsmin.predict(gibbsmin.load_case(tables)).final
        y = dict(zip((r.name for r in stage.records), stage.mole_fractions, strict=True))
        column = "shift, bypass joined: y H2(g)"
        assert found.table[column][row] == pytest.approx(y["H2(g)"], rel=1e-10)
    for name in ("conditions.csv", "conditions.xlsx", "conditions.parquet"):
        path = tmp_path / name
        writers = {"csv": conditions.to_csv, "xlsx": conditions.to_excel}
        if name.endswith("parquet"):
            conditions.to_parquet(path, index=False)
        else:
            writers[name.rpartition(".")[2]](path, index=False)
        again = gibbsmin.scan(case, read_conditions(path)).table
        pd.testing.assert_frame_equal(again, found.table)


@pytest.mark.parametrize(
    ("table", "sentence"),
    [
        (
            {"stage.reformer.colour": [1.0]},
            'cond.csv: column "stage.reformer.colour": found "stage.reformer.colour", which names '
            "no number of the case; accepted is one of stage.reformer.temperature, "
            "stage.reformer.pressure, stage.reformer.boundary_temperature, "
            "stage.reformer.bypass, stage.reformer.approach.1.",
        ),
        (
            {"stage.reformer.temperature, bar": [800.0]},
            'cond.csv: column "stage.reformer.temperature, bar", row 2: found "800.0 bar", which '
            'is a pressure; accepted is a temperature such as "850 degC" or "1123 K".',
        ),
        (
            {"stage.reformer.temperature, degC": [800.0, -300.0, 820.0]},
            'cond.csv: column "stage.reformer.temperature, degC", row 3: found "-300.0 degC", '
            "which is not above absolute zero; accepted is a temperature such as "
            '"850 degC" or "1123 K".',
        ),
        (
            {"stage.shift.bypass, %": [10.0, 120.0]},
            'cond.csv: column "stage.shift.bypass, %", row 3: found "120.0 %", which is not '
            'between 0 and 1; accepted is a share from 0 to 1, such as 0.8 or "80 %".',
        ),
        (
            {"label": ["a"], "shift of": ["night"], "outlet.temperature, degC": [1.0]},
            'cond.csv: column "shift of": found "shift of", which names no number of the case; '
            "accepted is a number of stage.reformer, stage.shift, feed.gas, feed.steam, such as "
            "stage.reformer.temperature.",
        ),
        (
            {"stage.reformer.temperature, degC": [800.0, None]},
            'cond.csv: column "stage.reformer.temperature, degC", row 3: found an empty cell; '
            "accepted is a number.",
        ),
        (
            {"stage.reformer.temperature, degC": [800.0, "hot", 820.0]},
            'cond.csv: column "stage.reformer.temperature, degC", row 3: found "hot"; accepted '
            "is a number.",
        ),
        (  # what a file gives where one cell of a column is a word
            {"stage.reformer.temperature, degC": ["800", "hot", "820"]},
            'cond.csv: column "stage.reformer.temperature, degC", row 3: found "hot"; accepted '
            "is a number.",
        ),
        (
            {"stage.reformer.temperature, degC": [800.0, True]},
            'cond.csv: column "stage.reformer.temperature, degC", row 3: found true; accepted '
            "is a number.",
        ),
        (
            {"H2O/CH4": [3.0]},
            'cond.csv: column "H2O/CH4": found a ratio without the stream that is scaled to meet '
            'it; accepted is "H2O/CH4 by steam".',
        ),
        (
            {"label": ["a"]},
            "cond.csv: found no column but the labels; accepted is at least one "
            'number, such as "outlet.temperature, degC".',
        ),
        (
            {"stage.reformer.temperature, degC": []},
            "cond.csv: found no rows; accepted is a table with a row a state.",
        ),
    ],
)
def test_a_faulty_table_is_one_sentence(table: dict[str, Any], sentence: str) -> None:
    with pytest.raises(InputError) as error:
        conditions_from(pd.DataFrame(table), gibbsmin.load_case(CASE), "cond.csv")
    assert str(error.value) == sentence


def test_a_column_that_names_no_stage_or_stream_is_refused() -> None:
    table = pd.DataFrame({"stage.oven.temperature, degC": [800.0]})
    with pytest.raises(InputError) as error:
        gibbsmin.scan(gibbsmin.load_case(CASE), table)
    assert str(error.value) == (
        'column "stage.oven.temperature, degC": found "stage.oven.temperature", which names no '
        "number of the case; accepted is a number of stage.reformer, stage.shift, feed.gas, "
        "feed.steam, such as stage.reformer.temperature."
    )


@pytest.mark.parametrize(
    ("name", "value", "sentence"),
    [
        (
            "stage.shift.conversion.CO",
            "1 %",
            'axis.1.vary: found "stage.shift.conversion.CO", which names no number of the case; '
            "accepted is one of stage.shift.heat, stage.shift.pressure_drop, "
            "stage.shift.boundary_temperature, stage.shift.bypass, "
            "stage.shift.conversion.CH4(g), stage.shift.remove.CO2(g).",
        ),
        (
            "stage.reformer.approach.2",
            "1 K",
            'axis.1.vary: found "stage.reformer.approach.2", which names no number of the case; '
            "accepted is one of stage.reformer.temperature, stage.reformer.pressure, "
            "stage.reformer.boundary_temperature, stage.reformer.bypass, "
            "stage.reformer.approach.1.",
        ),
        (
            "stage.reformer.held_fraction.CH4",
            "1 %",
            'axis.1.vary: found "stage.reformer.held_fraction.CH4", which names no number of the '
            "case; accepted is one of stage.reformer.temperature, stage.reformer.pressure, "
            "stage.reformer.boundary_temperature, stage.reformer.bypass, "
            "stage.reformer.approach.1.",
        ),
    ],
)
def test_a_number_that_the_stage_does_not_give_is_refused(
    name: str, value: str, sentence: str
) -> None:
    tables = deepcopy(CASE) | {"axis": [{"vary": name, "values": [value]}]}
    with pytest.raises(InputError) as error:
        gibbsmin.scan(gibbsmin.load_case(tables))
    assert str(error.value) == sentence


def test_a_grid_becomes_named_dimensions_with_units() -> None:
    tables = deepcopy(CASE) | {
        "axis": [
            {"vary": "stage.reformer.temperature", "values": ["750 degC", "800 degC", "850 degC"]},
            {"ratio": "H2O/CH4", "scale": "steam", "values": [2.0, 3.0]},
        ]
    }
    found = gibbsmin.scan(gibbsmin.load_case(tables))
    data = found.to_xarray()
    assert dict(data.sizes) == {"stage.reformer.temperature": 3, "H2O/CH4": 2}
    assert data["stage.reformer.temperature"].attrs["units"] == "degC"
    assert data["reformer: heat"].attrs["units"] == "kJ"
    picked = data["reformer: y H2(g)"].sel({"stage.reformer.temperature": 800.0, "H2O/CH4": 3.0})
    assert float(picked) == found.table["reformer: y H2(g)"][3]


def test_a_table_of_conditions_has_the_one_dimension_state() -> None:
    conditions = pd.DataFrame(
        {"label": ["low", "high"], "stage.reformer.temperature, degC": [780.0, 820.0]}
    )
    found = gibbsmin.scan(gibbsmin.load_case(CASE), conditions)
    data = found.to_xarray()
    assert dict(data.sizes) == {"state": 2}
    assert data["stage.reformer.temperature"].attrs == {"units": "degC"}
    assert data["shift, bypass joined: heat"].attrs == {"units": "kJ"}
    assert data["shift, bypass joined: y H2(g)"].attrs == {}
    assert data["label"].values.tolist() == ["low", "high"]


def test_a_scan_is_written_from_python_with_harmless_cells(tmp_path: Path) -> None:
    conditions = pd.DataFrame(
        {"label": ["=1+1", "high"], "stage.reformer.temperature, degC": [780.0, 820.0]}
    )
    found = gibbsmin.scan(gibbsmin.load_case(CASE), conditions)
    for ending, read in (
        ("csv", pd.read_csv),
        ("parquet", pd.read_parquet),
        ("xlsx", pd.read_excel),
    ):
        path = tmp_path / f"out.{ending}"
        gibbsmin.write_scan(found, path)
        again = read(path)
        assert list(again) == list(found.table)
        np.testing.assert_allclose(
            again["shift: y H2(g)"], found.table["shift: y H2(g)"], rtol=1e-14
        )
        label = "=1+1" if ending == "parquet" else "'=1+1"
        assert again["label"].tolist() == [label, "high"]


def test_error_bars_stand_beside_the_values_and_equal_those_of_single_states() -> None:
    tables = deepcopy(CASE) | {
        "axis": [{"vary": "stage.reformer.temperature", "values": ["750 degC", "850 degC"]}],
        "uncertainty": {"stage.reformer.temperature": "4 K", "feed.steam": "1 %"},
    }
    table = gibbsmin.scan(gibbsmin.load_case(tables), uncertainty=True).table
    for row, T in enumerate(("750 degC", "850 degC")):
        single = put(tables, "stage.reformer.temperature", T)
        del single["axis"]
        bars = gibbsmin.uncertainty(gibbsmin.load_case(single))
        for found in bars:
            for result, label, factor in (
                ("fraction H2(g)", "u(y H2(g))", 1.0),
                ("heat", "u(heat), kJ", 1e3),
                ("temperature", "u(temperature), K", 1.0),
                ("conversion CH4(g)", "u(conversion CH4(g))", 1.0),
            ):
                size = found.uncertainty(result)[0] / factor
                value = table[f"{found.stage}: {label}"][row]
                assert value == pytest.approx(size, rel=1e-8, abs=1e-12)


def test_the_phases_that_are_there_are_named() -> None:
    tables = deepcopy(CASE) | {
        "axis": [{"ratio": "H2O/CH4", "scale": "steam", "values": [0.2, 3.0]}],
    }
    del tables["stage"][0]["approach"]
    table = gibbsmin.scan(gibbsmin.load_case(tables)).table
    assert table["reformer: phases"].tolist() == ["C(graphite)", "gas"]
