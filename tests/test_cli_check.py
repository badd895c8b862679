"""gibbsmin check as a user runs it: one sample, many, files, mistakes."""

from __future__ import annotations

import csv
import json
from pathlib import Path

import openpyxl
import pandas as pd
import pytest
from typer.testing import CliRunner

from gibbsmin.cli import app
from gibbsmin.results import CAUTIONS

CASE = """
title = "Invented reformer"
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
consider = ["CH4", "H2O", "CO", "CO2", "H2", "N2"]
[sample]
label = "Monday, 8 h"
temperature = "862 degC"
pressure = "25 bar"
analysis = { H2 = "72.6 %", CO = "13.2 %", CO2 = "8.4 %", CH4 = "5.2 %", N2 = "0.5 %" }
"""
SAMPLES = """label,"temperature, degC","pressure, bar","H2, %","CO, %","CO2, %","CH4, %","N2, %",\
"SO2, ppm"
a,850,25,72.6,13.2,8.4,5.2,0.5,
=b,850,25,72.6,13.2,8.4,35.2,0.5,
c,880,25,72.6,13.2,8.4,5.2,0.5,
d,,25,72.6,13.2,8.4,5.2,0.5,
"""


@pytest.fixture
def case(tmp_path: Path) -> Path:
    path = tmp_path / "case.toml"
    path.write_text(CASE, encoding="utf-8")
    (tmp_path / "samples.csv").write_text(SAMPLES, encoding="utf-8")
    return path


def run(*arguments: str | Path) -> tuple[int, str, str]:
    result = CliRunner().invoke(app, ["check", *(str(argument) for argument in arguments)])
    return result.exit_code, result.stdout, result.stderr


def test_one_sample_reads_from_the_verdict_down(case: Path) -> None:
    code, out, err = run(case)
    assert (code, err) == (0, "")
    lines = out.splitlines()
    assert lines[0] == "Invented reformer"
    assert lines[1] == "Monday, 8 h: 862.00 °C (1135.15 K), 25.000 bar"
    assert lines[3].startswith("Short of equilibrium: CH4(g) + H2O(g) = CO(g) + 3 H2(g); T − T_eq")
    places = [
        lines.index(title)
        for title in (
            "What is fact", "What is likely", "What to look at next", "Measurements", "Reactions",
            "Gas, beside equilibrium at the measured conditions",
            "Solids and liquids that the gas could form", "Assumptions", "Hazards of the gas",
            "Cautions",
        )
    ]  # fmt: skip
    assert places == sorted(places)
    assert "cannot be judged" in out
    assert "2 CO = C + CO2" in out


def test_json_holds_what_was_found_and_no_nan(case: Path) -> None:
    code, out, _ = run(case, "--json")
    assert code == 0
    document = json.loads(out, parse_constant=pytest.fail)
    assert set(document) == {
        "title", "stage", "samples", "not_used", "hazards", "assumptions", "sources", "cautions"
    }  # fmt: skip
    (sample,) = document["samples"]
    assert sample["label"] == "Monday, 8 h"
    assert sample["verdict"] == "short of equilibrium"
    assert sample["closure"]["degrees_of_freedom"] == 3
    flow = next(m for m in sample["measurements"] if m["name"] == "flow of gas")
    assert flow["adjustment"] is None
    assert not flow["can_be_judged"]
    reforming, shift = sample["reactions"]
    assert reforming["side"] == "short of equilibrium"
    assert reforming["ln_Q"]["value"] - reforming["ln_K"]["value"] == pytest.approx(
        reforming["ln_Q_over_K"]["value"]
    )
    assert reforming["affinity_J_per_mol"]["value"] > 0
    assert shift["reaction"] == "CO(g) + H2O(g) = CO2(g) + H2(g)"
    assert sample["excess_gibbs_energy_J_per_mol"] > 0
    assert any("JANAF" in source for source in document["sources"])
    assert document["hazards"] == ["Toxic: CO.", "Flammable: H2, CO, CH4."]
    assert document["cautions"] == list(CAUTIONS)


def test_many_samples_give_a_line_each_and_name_what_is_not_used(case: Path) -> None:
    code, out, err = run(case, "--samples", case.parent / "samples.csv")
    assert (code, err) == (1, "")
    assert "sample not credible" not in out
    assert "=b: " in out
    assert "row 3: found readings that add up to 129.9 %; accepted is at most 110 %." in out
    assert "row 5: found no temperature" in out
    (line,) = [line for line in out.splitlines() if line.startswith("  c ")]
    assert "Short of equilibrium" in line


@pytest.mark.parametrize("ending", [".csv", ".xlsx", ".parquet", ".json"])
def test_files_have_a_row_for_every_sample(case: Path, ending: str) -> None:
    out = case.parent / f"checked{ending}"
    code, _, _ = run(case, "--samples", case.parent / "samples.csv", "--out", out)
    assert code == 1
    if ending == ".json":
        document = json.loads(out.read_text(encoding="utf-8"))
        assert [sample["label"] for sample in document["samples"]] == ["a", "c"]
        assert [fault["row"] for fault in document["not_used"]] == [3, 5]
        return
    if ending == ".csv":
        with out.open(encoding="utf-8", newline="") as file:
            rows = list(csv.DictReader(file))
        labels, verdicts = ([row[key] for row in rows] for key in ("label", "verdict"))
        assert labels[1] == "'=b"  # a spreadsheet would run it as a formula
    elif ending == ".xlsx":
        book = openpyxl.load_workbook(out)
        assert book.sheetnames == ["samples", "remarks"]
        header, *cells = book["samples"].iter_rows(values_only=True)
        labels = [row[header.index("label")] for row in cells]
        verdicts = [row[header.index("verdict")] for row in cells]
        assert labels[1] == "'=b"
    else:
        table = pd.read_parquet(out)
        labels, verdicts = table["label"].tolist(), table["verdict"].tolist()
        approach = table["T - T_eq, K: CH4(g) + H2O(g) = CO(g) + 3 H2(g)"]
        assert approach[2] - approach[0] == pytest.approx(30.0, abs=1e-9)
        assert approach.isna().tolist() == [False, True, False, True]
    assert [label.strip("'=") for label in labels] == ["a", "b", "c", "d"]
    assert verdicts[1] == verdicts[3] == "not used"


def test_samples_come_from_workbooks_and_parquet_too(case: Path) -> None:
    samples = case.parent / "samples.csv"
    samples.write_text(SAMPLES.replace("=b", "b"), encoding="utf-8")  # no formula
    table = pd.read_csv(samples)
    books = {".xlsx": table.to_excel, ".parquet": table.to_parquet}
    outputs = []
    for ending, write in books.items():
        path = case.parent / f"samples{ending}"
        write(path, index=False)
        code, out, _ = run(case, "--samples", path)
        assert code == 1
        outputs.append(out.replace(ending, ".csv"))
    _, expected, _ = run(case, "--samples", samples)
    assert outputs == [expected, expected]


def test_mistakes_end_with_one_sentence(case: Path) -> None:
    code, out, err = run(case, "--samples", case.parent / "nowhere.csv")
    assert (code, out) == (2, "")
    assert err.endswith("nowhere.csv: found no such file; accepted is a table that exists.\n")
    code, out, err = run(case, "--out", case.parent / "out.pdf")
    assert (code, out) == (2, "")
    assert err.endswith(
        'out.pdf: found the ending ".pdf"; accepted is a file that ends in .json, .csv, .xlsx, '
        ".parquet.\n"
    )
    case.write_text(CASE.replace('temperature = "862', 'temprature = "862'), encoding="utf-8")
    code, out, err = run(case)
    assert (code, out) == (2, "")
    assert 'sample.temprature: found an unknown key (nearest: "temperature")' in err
