"""Searches along an axis, and error bars of a prediction, as a user sees them."""

from __future__ import annotations

import json
import re
from pathlib import Path

import pandas as pd
import pytest
from typer.testing import CliRunner

from gibbsmin.cli import app

CASE = """
title = "Carbon in a reformer"

[feed.gas]
temperature = "500 degC"
pressure = "1 bar"
unit = "mol"
amounts = { CH4 = 1 }

[feed.steam]
temperature = "500 degC"
pressure = "1 bar"
unit = "mol"
amounts = { H2O = 1.1 }

[outlet]
temperature = "600 degC"
pressure = "1 bar"

[species]
consider = ["CH4", "H2O", "CO", "CO2", "H2", "C(graphite)"]

[[axis]]
vary = "outlet.temperature"
first = "300 degC"
last = "1100 degC"
count = 41
"""
ONSET = CASE + '\n[onset]\nphase = "C(graphite)"\n'
TARGET = CASE + '\n[target]\nresult = "dry fraction CH4"\nvalue = "4 %"\n'


def run(path: Path, *options: str, code: int = 0) -> str:
    result = CliRunner().invoke(app, [*options[:1], str(path), *options[1:]])
    assert result.exit_code == code, result.output
    return result.output


@pytest.fixture
def onset_case(tmp_path: Path) -> Path:
    path = tmp_path / "case.toml"
    path.write_text(ONSET)
    return path


@pytest.fixture
def target_case(tmp_path: Path) -> Path:
    path = tmp_path / "target.toml"
    path.write_text(TARGET)
    return path


def test_an_onset_reads_as_lines_with_what_is_known_of_others(onset_case: Path) -> None:
    lines = run(onset_case, "onset").splitlines()
    assert lines[:2] == ["Carbon in a reformer", "Onset of C(graphite) in outlet"]
    first, second = (line.split() for line in lines[4:6])
    assert first[1] == "forms"
    assert second[1] == "vanishes"
    assert "certified," in first
    assert "  Complete to the grid used: 41 values of outlet.temperature." in lines


def test_json_and_tables_hold_the_same_crossings(onset_case: Path, tmp_path: Path) -> None:
    document = json.loads(run(onset_case, "onset", "--json"))
    values = [crossing["value"] for crossing in document["crossings"]]
    out = tmp_path / "onset.csv"
    run(onset_case, "onset", "--out", str(out))
    table = pd.read_csv(out)
    assert table["outlet.temperature, degC"].tolist() == pytest.approx(values, rel=1e-12)
    assert table["forms_as_it_rises"].tolist() == [True, False]
    assert table["certified"].all()
    book = tmp_path / "onset.xlsx"
    run(onset_case, "onset", "--out", str(book))
    assert pd.read_excel(book, sheet_name="crossings").shape == table.shape
    column_file = tmp_path / "onset.parquet"
    run(onset_case, "onset", "--out", str(column_file))
    pd.testing.assert_frame_equal(pd.read_parquet(column_file), table)


def test_a_file_of_another_kind_is_refused_before_any_work(onset_case: Path) -> None:
    result = CliRunner().invoke(app, ["onset", str(onset_case), "--out", "onset.txt"])
    assert result.exit_code == 2
    assert result.stderr == (
        'onset.txt: found the ending ".txt"; accepted is a file that ends in .csv, .xlsx, .json, '
        ".parquet.\n"
    )


def test_a_target_is_found_by_the_same_command(target_case: Path, tmp_path: Path) -> None:
    document = json.loads(run(target_case, "onset", "--json"))
    (answer,) = document["answers"]
    assert answer["reached_SI"] == pytest.approx(0.04, rel=1e-10)
    assert "Target: dry fraction CH4 of outlet" in run(target_case, "onset")
    out = tmp_path / "target.xlsx"
    run(target_case, "onset", "--out", str(out))
    assert len(pd.read_excel(out, sheet_name="answers")) == 1


def test_error_bars_of_a_target_are_refused(target_case: Path) -> None:
    result = CliRunner().invoke(app, ["onset", str(target_case), "--uncertainty"])
    assert result.exit_code == 2
    assert result.stderr == (
        "found --uncertainty beside a target; accepted is it with an [onset] table.\n"
    )


def test_a_target_out_of_reach_tells_the_range(tmp_path: Path) -> None:
    path = tmp_path / "case.toml"
    path.write_text(TARGET.replace('"4 %"', '"99 %"'))
    output = run(path, "onset")
    (sentence,) = re.findall(
        r"  no answer: on the axis the result runs from ([\d.]+) % to ([\d.]+) %, and 99.000 % is "
        r"wanted\.",
        output,
    )
    lowest, highest = map(float, sentence)
    assert 0.0 < lowest < highest < 99.0


def test_a_value_that_is_jumped_over_is_said_so_and_not_called_an_answer(tmp_path: Path) -> None:
    path = tmp_path / "case.toml"
    steam = CASE.replace('["CH4", "H2O", "CO", "CO2", "H2", "C(graphite)"]', '["H2O", "H2O(l)"]')
    steam = steam.replace("CH4 = 1", "H2O = 1").replace('"300 degC"', '"50 degC"')
    path.write_text(steam + '\n[target]\nresult = "heat"\nvalue = "-60 kJ"\n')
    output = " ".join(run(path, "onset").split())
    assert "the result passes the value without meeting it: it jumps there" in output
    assert "no answer" not in output
    document = json.loads(run(path, "onset", "--json"))
    assert document["answers"] == []
    (lost,) = document["lost_between"]
    assert 90.0 < lost["lowest"] <= lost["highest"] < 110.0


def test_a_phase_that_never_forms_is_said_to_be_absent(tmp_path: Path) -> None:
    path = tmp_path / "case.toml"
    path.write_text(ONSET.replace("H2O = 1.1", "H2O = 9"))
    assert "C(graphite) is absent all along the axis." in run(path, "onset")


def test_neither_table_is_one_sentence(tmp_path: Path) -> None:
    path = tmp_path / "case.toml"
    path.write_text(CASE)
    output = run(path, "onset", code=2)
    assert output.strip() == (
        f"{path}: onset: found no [onset] table; accepted is one, such as [onset] with phase = "
        '"C(graphite)".'
    )


def test_a_prediction_with_error_bars_tells_what_makes_them(tmp_path: Path) -> None:
    path = tmp_path / "case.toml"
    path.write_text(CASE + '\n[uncertainty]\noutlet.temperature = "5 K"\n')
    output = run(path, "predict", "--uncertainty")
    (line,) = (x for x in output.splitlines() if x.lstrip().startswith("temperature "))
    assert line.split() == [
        "temperature",
        "873.15",
        "K",
        "±",
        "5.0",
        "outlet.temperature",
        "100",
        "%",
    ]
    assert "What a step of each number changes" in output
    assert "Numbers of the case without a stated uncertainty are taken as exact; " in output
    plain = run(path, "predict")
    assert "±" not in plain


def test_error_bars_stand_beside_the_values_in_json_and_tables(tmp_path: Path) -> None:
    path = tmp_path / "case.toml"
    path.write_text(CASE + '\n[uncertainty]\noutlet.temperature = "5 K"\n')
    (stage,) = json.loads(run(path, "predict", "--uncertainty", "--json"))["stages"]
    assert stage["temperature_K_uncertainty"] == pytest.approx(5.0)
    by_name = {species["name"]: species for species in stage["species"]}
    assert 0.0 < by_name["H2(g)"]["dry_mole_fraction_uncertainty"] < 0.05
    assert stage["heat"]["uncertainty"] > 0.0
    assert {row["input"] for row in stage["sensitivities"]} >= {"outlet.temperature"}
    origins = {each["name"]: each["origin"] for each in stage["inputs"]}
    assert origins["outlet.temperature"] == "stated"
    out = tmp_path / "outlet.csv"
    run(path, "predict", "--uncertainty", "--out", str(out))
    table = pd.read_csv(out).set_index("species")
    assert table.loc["H2(g)", "dry_mole_fraction_uncertainty"] == pytest.approx(
        by_name["H2(g)"]["dry_mole_fraction_uncertainty"]
    )
    book = tmp_path / "outlet.xlsx"
    run(path, "predict", "--uncertainty", "--out", str(book))
    sheet = pd.read_excel(book, sheet_name="uncertainty").set_index("result")
    assert sheet.loc["temperature", "largest_input"] == "outlet.temperature"
