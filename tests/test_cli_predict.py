"""gibbsmin predict as a user runs it: tables, JSON, files, mistakes."""

from __future__ import annotations

import csv
import json
from pathlib import Path

import openpyxl
import pytest
from typer.testing import CliRunner

from gibbsmin.cli import app

CASE = """
title = "Invented test case"
[feed.gas]
temperature = "520 degC"
pressure = "30 bar"
unit = "kmol/h"
amounts = { CH4 = 100, N2 = 2 }
[feed.steam]
temperature = "520 degC"
pressure = "30 bar"
unit = "kmol/h"
amounts = { H2O = 300 }
[outlet]
temperature = "850 degC"
pressure = "25 bar"
[species]
consider = ["CH4", "H2O", "CO", "CO2", "H2", "N2", "C(graphite)"]
"""


@pytest.fixture
def case(tmp_path: Path) -> Path:
    path = tmp_path / "case.toml"
    path.write_text(CASE, encoding="utf-8")
    return path


def run(*arguments: str | Path) -> tuple[int, str, str]:
    result = CliRunner().invoke(app, [str(argument) for argument in arguments])
    return result.exit_code, result.stdout, result.stderr


def document(case: Path) -> dict:
    code, out, err = run("predict", case, "--json")
    assert (code, err) == (0, "")
    return json.loads(out)


def test_json_has_the_promised_keys(case: Path) -> None:
    found = document(case)
    assert set(found) == {"title", "status", "stages", "total", "cautions"}
    assert found["status"] == "certified"
    (stage,) = found["stages"]
    assert set(stage) == {
        "name", "status", "method", "temperature_K", "pressure_bar", "certificate", "unit",
        "species", "removed", "conversion", "heat", "shaft_work", "entropy_generation", "lost_work",
        "element_chemical_potentials", "activities", "figures", "extents", "extent_unit",
        "yields", "real_gas", "warnings", "notes", "hazards",
        "audit",
    }  # fmt: skip
    assert set(stage["certificate"]) == {"gap", "balance", "stationarity"}
    assert set(stage["species"][0]) == {
        "name", "phase", "amount", "mole_fraction", "dry_mole_fraction"
    }  # fmt: skip
    assert stage["heat"]["unit"] == "kW"
    assert stage["entropy_generation"]["unit"] == "kW/K"
    assert stage["unit"] == "kmol/h"


def test_balance_closes_in_the_users_unit(case: Path) -> None:
    (stage,) = document(case)["stages"]
    amounts = {entry["name"]: entry["amount"] for entry in stage["species"]}
    carbon = amounts["CH4(g)"] + amounts["CO(g)"] + amounts["CO2(g)"] + amounts["C(graphite)"]
    oxygen = amounts["H2O(g)"] + amounts["CO(g)"] + 2 * amounts["CO2(g)"]
    assert carbon == pytest.approx(100, rel=1e-12)
    assert oxygen == pytest.approx(300, rel=1e-12)


def test_fractions_add_up_wet_and_dry(case: Path) -> None:
    (stage,) = document(case)["stages"]
    wet = [e["mole_fraction"] for e in stage["species"] if e["mole_fraction"] is not None]
    dry = [e["dry_mole_fraction"] for e in stage["species"] if e["dry_mole_fraction"] is not None]
    assert sum(wet) == pytest.approx(1, abs=1e-14)
    assert sum(dry) == pytest.approx(1, abs=1e-14)
    assert len(wet) == len(dry) + 1


def test_forgotten_ammonia_is_seen_and_left_out_ammonia_is_not_warned_of(case: Path) -> None:
    (stage,) = document(case)["stages"]
    (ammonia,) = [entry for entry in stage["audit"] if entry["name"] == "NH3(g)"]
    assert ammonia["would_reach"] > 1e-4
    missing, ideal = stage["warnings"]
    assert missing.startswith("NH3(g) is not considered")
    assert ideal.startswith("The gas is taken as ideal")

    left_out = CASE + 'leave_out = ["NH3"]\n'
    case.write_text(left_out, encoding="utf-8")
    (stage,) = document(case)["stages"]
    (ammonia,) = [entry for entry in stage["audit"] if entry["name"] == "NH3(g)"]
    assert ammonia["left_out"]
    assert stage["warnings"] == [ideal]


def test_table_says_what_an_engineer_reads(case: Path) -> None:
    code, out, err = run("predict", case)
    assert (code, err) == (0, "")
    for text in (
        "Invented test case",
        "850.00 °C (1123.15 K), 25.000 bar, ideal gas, certified",
        "heat added",
        "boundary at 1123.15 K",
        "a(C)",
        "Toxic: CO.",
        "Equilibrium is a limit, not a rate",
    ):
        assert text in out


@pytest.mark.parametrize("ending", ["json", "csv", "xlsx"])
def test_files_hold_the_outlet(case: Path, tmp_path: Path, ending: str) -> None:
    out = tmp_path / f"outlet.{ending}"
    code, _, err = run("predict", case, "--out", out)
    assert (code, err) == (0, "")
    expected = [entry["name"] for entry in document(case)["stages"][0]["species"]]
    if ending == "json":
        assert json.loads(out.read_text(encoding="utf-8")) == document(case)
    elif ending == "csv":
        with out.open(encoding="utf-8", newline="") as file:
            assert [row["species"] for row in csv.DictReader(file)] == expected
    else:
        book = openpyxl.load_workbook(out)
        assert book.sheetnames == [
            "composition",
            "figures",
            "reactions",
            "yields",
            "audit",
            "remarks",
        ]
        names = [row[1] for row in book["composition"].iter_rows(min_row=2, values_only=True)]
        assert names == expected
    assert sorted(path.name for path in tmp_path.iterdir()) == ["case.toml", out.name]


@pytest.mark.parametrize(
    ("old", "new", "sentence"),
    [
        (
            'consider = ["CH4", "H2O", "CO", "CO2", "H2", "N2", "C(graphite)"]',
            'consider = ["CH4", "H2O", "CO", "CO2", "H2"]',
            '{file}: species.consider: found the element N in the feed (from "N2(g)"), which no '
            'candidate can hold; accepted is a list with a record of N, for instance "N2(g)" or '
            '"N(g)".',
        ),
        (
            'consider = ["CH4", "H2O", "CO", "CO2", "H2", "N2", "C(graphite)"]',
            'consider = ["CO2", "H2O", "N2"]',
            "{file}: species.consider: found candidates that cannot hold the feed's elements in "
            "their proportions; accepted is a list that can, for instance one with CH4(g), N2(g), "
            "H2O(g).",
        ),
    ],
)
def test_candidates_that_cannot_hold_the_feed(
    case: Path, tmp_path: Path, old: str, new: str, sentence: str
) -> None:
    case.write_text(CASE.replace(old, new), encoding="utf-8")
    code, out, err = run("predict", case, "--out", tmp_path / "outlet.json")
    assert (code, out, err) == (2, "", sentence.format(file=case) + "\n")
    assert [path.name for path in tmp_path.iterdir()] == ["case.toml"]


def test_output_with_another_ending_is_refused_before_any_work(tmp_path: Path) -> None:
    out = tmp_path / "outlet.pdf"
    assert run("predict", tmp_path / "absent.toml", "--out", out) == (
        2,
        "",
        f'{out}: found the ending ".pdf"; accepted is a file that ends in .csv, .xlsx, .json.\n',
    )


def test_output_that_cannot_be_written(case: Path, tmp_path: Path) -> None:
    out = tmp_path / "absent" / "outlet.csv"
    assert run("predict", case, "--out", out) == (
        2,
        "",
        f"{out}: found that it cannot be written (no such file or directory); accepted is a file "
        "in a folder that exists and may be written.\n",
    )


def test_random_draws_stand_beside_first_order_error_bars(case: Path, tmp_path: Path) -> None:
    case.write_text(CASE + '[uncertainty]\noutlet.temperature = "5 K"\n', encoding="utf-8")
    out = tmp_path / "outlet.xlsx"
    arguments = ["predict", case, "--monte-carlo", "400", "--seed", "7"]
    code, text, err = run(*arguments, "--out", out)
    assert (code, err) == (0, "")
    spread = text[text.index("Spread over random draws: outlet") :]
    header = ["result", "value", "first order", "Monte Carlo", "2.5 %", "median", "97.5 %"]
    assert all(name in spread.splitlines()[1] for name in header)
    assert "C(graphite) is there in none of the draws." in spread
    assert (
        "400 draws from seed 7: every number that is not exact is drawn from a normal distribution "
        "of its standard uncertainty, with its stated correlations." in spread
    )
    code, text, err = run(*arguments, "--json")
    assert (code, err) == (0, "")
    found = json.loads(text)["stages"][0]["monte_carlo"]
    assert (found["draws"], found["seed"], found["solved"]) == (400, 7, 400)
    assert found["phase_probability"] == {"C(graphite)": 0.0}
    (temperature,) = (row for row in found["results"] if row["result"] == "temperature")
    assert temperature["standard_deviation"] == pytest.approx(5.0, rel=0.15)
    assert temperature["quantiles"]["0.5"] == pytest.approx(1123.15, abs=1.2)
    sheet = openpyxl.load_workbook(out)["monte carlo"]
    rows = {row[1]: row for row in sheet.iter_rows(values_only=True)}
    assert rows["temperature"][3] == pytest.approx(temperature["standard_deviation"])
    assert rows["probability of C(graphite)"][2] == 0.0


def test_quantiles_stand_beside_fractions_in_a_csv(case: Path, tmp_path: Path) -> None:
    out = tmp_path / "outlet.csv"
    code, _, err = run("predict", case, "--monte-carlo", "200", "--out", out)
    assert (code, err) == (0, "")
    with out.open(encoding="utf-8", newline="") as file:
        rows = {row["species"]: row for row in csv.DictReader(file)}
    low, middle, high = (
        float(rows["CO(g)"][f"mole_fraction_quantile_{level}"]) for level in (0.025, 0.5, 0.975)
    )
    assert low < middle < high
    assert middle == pytest.approx(float(rows["CO(g)"]["mole_fraction"]), rel=0.01)


@pytest.mark.parametrize(
    ("options", "sentence"),
    [
        (
            ["--monte-carlo", "12"],
            "monte-carlo: found 12 draws; accepted is a number from 100 to 200000.\n",
        ),
        (
            ["--monte-carlo", "0"],
            "monte-carlo: found 0 draws; accepted is a number from 100 to 200000.\n",
        ),
        (["--seed", "4"], "found --seed without draws; accepted is --monte-carlo N beside it.\n"),
    ],
)
def test_draws_that_are_refused_are_one_sentence(
    case: Path, options: list[str], sentence: str
) -> None:
    code, out, err = run("predict", case, *options)
    assert (code, out, err) == (2, "", sentence)
