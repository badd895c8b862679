"""Scans: rows equal single predictions, ratios are met, failing states leave the others alone."""

from __future__ import annotations

from copy import deepcopy
from pathlib import Path
from typing import Any

import numpy as np
import pandas as pd
import pytest
from typer.testing import CliRunner

import gibbsmin
from gibbsmin.cli import app
from gibbsmin.errors import InputError

CASE: dict[str, Any] = {
    "feed": {
        "gas": {
            "temperature": "520 degC",
            "pressure": "30 bar",
            "unit": "kmol/h",
            "amounts": {"CH4": 100, "N2": 2},
        },
        "steam": {
            "temperature": "520 degC",
            "pressure": "30 bar",
            "unit": "kmol/h",
            "amounts": {"H2O": 300},
        },
    },
    "outlet": {"temperature": "850 degC", "pressure": "25 bar"},
    "species": {"consider": ["CH4", "H2O", "CO", "CO2", "H2", "N2", "C(graphite)"]},
}
TEMPERATURES = {"vary": "outlet.temperature", "first": "600 degC", "last": "900 degC", "count": 4}
STEAM = {"ratio": "H2O/C", "scale": "steam", "values": [0.8, 1.5, 3.0]}


def with_axes(*axes: dict[str, Any], **changes: Any) -> dict[str, Any]:
    return {**deepcopy(CASE), **changes, "axis": list(axes)}


def scan(tables: dict[str, Any]) -> pd.DataFrame:
    return gibbsmin.scan(gibbsmin.load_case(tables)).table


def test_rows_are_the_grid_and_equal_single_predictions() -> None:
    table = scan(with_axes(STEAM, TEMPERATURES))
    assert table["H2O/C"].tolist() == [r for r in (0.8, 1.5, 3.0) for _ in range(4)]
    assert table["outlet.temperature, degC"].tolist() == [600.0, 700.0, 800.0, 900.0] * 3
    for row in (0, 5, 11):
        single = deepcopy(CASE)
        single["feed"]["steam"]["amounts"]["H2O"] = 100 * table["H2O/C"][row]
        single["outlet"]["temperature"] = f"{table['outlet.temperature, degC'][row]} degC"
        stage = gibbsmin.predict(gibbsmin.load_case(single)).final
        for record, y, n in zip(stage.records, stage.mole_fractions, stage.amounts, strict=True):
            gas = record.phase.value == "gas"
            column = f"y {record.name}" if gas else f"amount {record.name}, mol/s"
            assert table[column][row] == pytest.approx(y if gas else n, rel=1e-10, abs=1e-14)
        assert table["heat, kW"][row] == pytest.approx(stage.heat / 1e3, rel=1e-10)
        assert table["entropy generation, kW/K"][row] == pytest.approx(
            stage.entropy.value / 1e3, rel=1e-10
        )
        for name, conversion in stage.conversion.items():
            found = table[f"conversion {name}"][row]
            assert found == pytest.approx(conversion, rel=1e-10, abs=1e-12)


def test_carbon_comes_with_little_steam_and_goes_with_much() -> None:
    table = scan(with_axes({**STEAM, "values": [0.5, 3.0]}))
    assert table["amount C(graphite), mol/s"][0] > 0.0
    assert table["amount C(graphite), mol/s"][1] == 0.0


def test_blocks_are_the_whole_in_pieces() -> None:
    case = gibbsmin.load_case(with_axes(STEAM, TEMPERATURES))
    pieces = list(gibbsmin.scan_blocks(case, block=5))
    assert [len(piece) for piece in pieces] == [5, 5, 2]
    whole = gibbsmin.scan(case).table
    together = pd.concat(pieces, ignore_index=True)
    numbers = whole.select_dtypes("number").columns
    # the warm start of a block depends on its neighbours; the answers do not
    np.testing.assert_allclose(together[numbers], whole[numbers], rtol=1e-10, atol=1e-12)


def test_a_logarithmic_axis_and_an_amount() -> None:
    pressures = {
        "vary": "outlet.pressure", "first": "1 bar", "last": "100 bar", "count": 3,
        "spacing": "logarithmic",
    }  # fmt: skip
    nitrogen = {"vary": "feed.gas.amounts.N2", "values": [0, 4]}
    table = scan(with_axes(pressures, nitrogen))
    assert table["outlet.pressure, bar"].tolist() == [1.0, 1.0, 10.0, 10.0, 100.0, 100.0]
    assert table["feed.gas.amounts.N2, kmol/h"].tolist() == [0.0, 4.0] * 3
    assert (table["y N2(g)"].to_numpy()[::2] == 0.0).all()
    assert (table["y N2(g)"].to_numpy()[1::2] > 0.0).all()


def test_a_state_that_fails_is_a_row_of_its_own() -> None:
    heats = {"vary": "outlet.heat", "values": ["5 MW", "-500 MW", "6 MW"]}
    table = scan(with_axes(heats, outlet={"heat": "0 kW", "pressure": "25 bar"}))
    assert table["status"].tolist() == ["certified", "unmet", "certified"]
    assert table["temperature, K"].isna().tolist() == [False, True, False]
    assert table["heat, kW"].isna().tolist() == [False, True, False]
    assert table["reason"].tolist() == ["", "No temperature meets what is specified.", ""]


def test_a_state_whose_input_is_refused_is_a_row_with_the_sentence() -> None:
    drops = {"vary": "outlet.pressure_drop", "values": ["1 bar", "31 bar", "2 bar", "40 bar"]}
    tables = with_axes(drops, outlet={"temperature": "850 degC", "pressure_drop": "1 bar"})
    table = scan(tables)
    assert table["status"].tolist() == ["certified", "refused", "certified", "refused"]
    assert table["pressure, bar"].isna().tolist() == [False, True, False, True]
    assert table["phases"].tolist() == ["gas", "", "gas", ""]
    assert table["reason"].tolist()[1::2] == [
        "outlet.pressure_drop: found a drop of 31 bar from 30 bar; accepted is a drop that leaves "
        "a pressure above zero.",
        "outlet.pressure_drop: found a drop of 40 bar from 30 bar; accepted is a drop that leaves "
        "a pressure above zero.",
    ]
    del tables["axis"]
    tables["outlet"]["pressure_drop"] = "2 bar"
    stage = gibbsmin.predict(gibbsmin.load_case(tables)).final
    assert table["y H2(g)"][2] == pytest.approx(stage.mole_fractions[4], rel=1e-10)


def test_every_block_has_the_same_columns_whatever_forms_in_it() -> None:
    stages = [
        {"name": "bed", "temperature": "800 degC", "pressure": "28 bar"},
        {"name": "cooler", "temperature": "300 degC", "pressure": "27 bar", "reactions": "none"},
    ]
    steam = {"vary": "feed.steam.amounts.H2O", "values": [20, 300, 400, 30]}
    tables = with_axes(steam)
    del tables["outlet"]
    case = gibbsmin.load_case({**tables, "stage": stages})
    blocks = list(gibbsmin.scan_blocks(case, block=2))
    whole = gibbsmin.scan(case).table
    assert [list(block) for block in blocks] == [list(whole)] * 2
    assert (whole["cooler: amount C(graphite), mol/s"] > 0.0).tolist() == [True, False, False, True]
    assert whole["cooler: phases"].tolist() == ["C(graphite)", "gas", "gas", "C(graphite)"]
    for row, amount in enumerate([20, 300, 400, 30]):
        single = {**deepcopy(CASE), "stage": stages}
        del single["outlet"]
        single["feed"]["steam"]["amounts"]["H2O"] = amount
        stage = gibbsmin.predict(gibbsmin.load_case(single)).final
        assert ("C(graphite)" in [r.name for r in stage.records]) == (row in (0, 3))
        assert whole["cooler: heat, kW"][row] == pytest.approx(stage.heat / 1e3, rel=1e-10)


def test_a_scan_whose_every_state_is_refused_ends_at_once() -> None:
    drops = {"vary": "outlet.pressure_drop", "values": ["31 bar", "40 bar"]}
    with pytest.raises(InputError) as error:
        scan(with_axes(drops, outlet={"temperature": "850 degC", "pressure_drop": "1 bar"}))
    assert str(error.value) == (
        "outlet.pressure_drop: found a drop of 31 bar from 30 bar; accepted is a drop that leaves "
        "a pressure above zero."
    )


def test_a_train_has_each_stages_columns() -> None:
    stages = [
        {"name": "bed", "heat": "0 kW", "pressure": "28 bar"},
        {"name": "cooler", "temperature": "300 degC", "pressure": "27 bar", "reactions": "none"},
    ]
    tables = with_axes({"vary": "feed.steam.temperature", "values": ["400 degC", "600 degC"]})
    del tables["outlet"]
    table = scan({**tables, "stage": stages})
    assert table["bed: temperature, K"].is_monotonic_increasing
    np.testing.assert_allclose(table["cooler: y CH4(g)"], table["bed: y CH4(g)"], rtol=1e-12)


@pytest.mark.parametrize("ending", ["csv", "parquet", "xlsx"])
def test_files_hold_the_table(tmp_path: Path, ending: str) -> None:
    case = tmp_path / "case.toml"
    case.write_text(TOML, encoding="utf-8")
    out = tmp_path / f"table.{ending}"
    result = CliRunner().invoke(app, ["scan", str(case), "--out", str(out)])
    assert (result.exit_code, result.stderr) == (0, "")
    assert result.stdout == f"3 states written to {out}.\n"
    read = {"csv": pd.read_csv, "parquet": pd.read_parquet, "xlsx": pd.read_excel}[ending]
    expected = gibbsmin.scan(gibbsmin.load_case(case)).table
    found = read(out)
    found["reason"] = ["" if cell != cell else cell for cell in found["reason"]]  # empty cells
    pd.testing.assert_frame_equal(
        found, expected, check_dtype=False, rtol=1e-12, check_categorical=False
    )
    assert sorted(path.name for path in tmp_path.iterdir()) == ["case.toml", out.name]


TOML = """
[feed.gas]
temperature = "300 K"
pressure = "1 bar"
unit = "mol"
amounts = { N2O4 = 1 }
[outlet]
temperature = "300 K"
pressure = "1 bar"
[species]
consider = ["N2O4", "NO2"]
[[axis]]
vary = "outlet.temperature"
values = ["300 K", "320 K", "340 K"]
"""


@pytest.mark.parametrize(
    ("axis", "sentence"),
    [
        (
            {**TEMPERATURES, "vary": "outlet.temprature"},
            'axis.1.vary: found "outlet.temprature", which names no number of the case; accepted '
            "is one of outlet.temperature, outlet.pressure, outlet.boundary_temperature, "
            "outlet.bypass.",
        ),
        (
            {**TEMPERATURES, "vary": "stage.bed.temperature"},
            'axis.1.vary: found "stage.bed.temperature", which names no number of the case; '
            "accepted is a number of outlet, feed.gas, feed.steam, such as outlet.temperature.",
        ),
        (
            {**TEMPERATURES, "first": "600 bar"},
            'axis.1.first: found "600 bar", which is a pressure; accepted is a temperature such '
            'as "850 degC" or "1123 K".',
        ),
        (
            {**TEMPERATURES, "last": "1200 K"},
            'axis.1.last: found values in "degC" and in another unit; accepted is one unit in '
            "an axis.",
        ),
        (
            {"vary": "outlet.temperature", "values": ["600 degC", "1200 K"]},
            'axis.1.values: found values in "degC" and in another unit; accepted is one unit in '
            "an axis.",
        ),
        (
            {**TEMPERATURES, "first": "-10 degC", "spacing": "logarithmic"},
            "axis.1: found an end that is not above zero; accepted are ends above zero for a "
            "logarithmic axis.",
        ),
        (
            {**TEMPERATURES, "vary": "feed.gas.colour"},
            'axis.1.vary: found "feed.gas.colour", which names no number of the case; accepted is '
            "one of feed.gas.temperature, feed.gas.pressure, feed.gas.total, "
            "feed.gas.amounts.SPECIES.",
        ),
        (
            {"vary": "outlet.heat", "values": ["5 MW"]},
            'axis.1.vary: found "outlet.heat", which names no number of the case; accepted is one '
            "of outlet.temperature, outlet.pressure, outlet.boundary_temperature, outlet.bypass.",
        ),
        (
            {"vary": "feed.gas.total", "values": ["5 mol"]},
            'axis.1.values: found an amount in "mol", while the feeds are in "kmol/h"; accepted '
            "is a flow, as the feeds are.",
        ),
        (
            {**STEAM, "ratio": "H2O/S"},
            'axis.H2O/S: found a ratio "H2O/S" whose denominator is zero: no stream brings "S"; '
            "accepted is a ratio to what is fed.",
        ),
        (
            {**STEAM, "ratio": "CH4/N2"},
            'axis.CH4/N2: found a ratio "CH4/N2" that no amount of "steam" can meet; accepted is '
            "a ratio that the other streams leave open, and a stream that moves it.",
        ),
        (
            {**STEAM, "scale": "oil"},
            'axis.H2O/C: found "oil" to be scaled, which is no stream; accepted is one of gas, '
            "steam.",
        ),
        (
            {"vary": "outlet.temperature", "first": "600 degC"},
            "axis.1.values: found first; accepted is values, or first, last and count.",
        ),
        ({"values": [1]}, "axis.1.vary: found neither; accepted is vary or ratio."),
        (
            {**TEMPERATURES, "count": 1},
            "axis.1.count: found 1; accepted is a whole number from 2 to 10000000.",
        ),
        (
            {**TEMPERATURES, "count": 10**9},
            "axis.1.count: found 1000000000; accepted is a whole number from 2 to 10000000.",
        ),
        (
            {"vary": "outlet.temperature", "values": []},
            "axis.1.values: found an empty list; accepted is a list such as "
            '["600 degC", "700 degC"].',
        ),
    ],
)
def test_faults_of_axes_read_as_one_sentence(axis: dict[str, Any], sentence: str) -> None:
    with pytest.raises(InputError) as caught:
        scan(with_axes(axis))
    assert str(caught.value) == sentence


def test_a_case_without_an_axis() -> None:
    with pytest.raises(InputError) as caught:
        scan(deepcopy(CASE))
    assert str(caught.value) == "axis: found no axis; accepted is at least one [[axis]] table."
