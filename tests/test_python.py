"""The library's front door: what the command line does is there by name, and says the same."""

from __future__ import annotations

import inspect
import json
from pathlib import Path

import pandas as pd
import pytest
from typer.testing import CliRunner

import gibbsmin
from gibbsmin.cli import app

EXAMPLES = Path(__file__).parents[1] / "examples"
REFORMER = EXAMPLES / "reformer" / "case.toml"


def printed(*arguments: str) -> str:
    result = CliRunner().invoke(app, list(arguments))
    assert result.exit_code == 0, result.output
    return result.output


@pytest.mark.parametrize("name", gibbsmin.__all__)
def test_each_name_is_there_and_says_what_it_is(name: str) -> None:
    assert name in dir(gibbsmin)
    assert name in gibbsmin._HOMES
    assert len(inspect.getdoc(getattr(gibbsmin, name)) or "") >= 30


def test_no_name_is_offered_that_is_not_listed() -> None:
    assert set(gibbsmin._HOMES) == set(gibbsmin.__all__)
    with pytest.raises(AttributeError, match="no attribute 'predit'"):
        _ = gibbsmin.predit


def test_an_outlet_is_the_same_in_every_form(tmp_path: Path) -> None:
    """Terminal, JSON, table and workbook tell one number; the terminal five digits of it."""
    outlet = gibbsmin.predict(gibbsmin.load_case(REFORMER))
    document = gibbsmin.outlet_document(outlet)
    assert json.loads(printed("predict", str(REFORMER), "--json")) == document
    for ending in ("json", "csv", "xlsx"):
        gibbsmin.write_outlet(outlet, str(tmp_path / f"outlet.{ending}"))
    assert json.loads((tmp_path / "outlet.json").read_text(encoding="utf-8")) == document
    tables = [
        pd.read_csv(tmp_path / "outlet.csv"),
        pd.read_excel(tmp_path / "outlet.xlsx", sheet_name="composition"),
    ]
    lines = printed("predict", str(REFORMER)).splitlines()
    for entry in document["stages"][0]["species"]:
        for table in tables:
            (row,) = (row for _, row in table.iterrows() if row["species"] == entry["name"])
            assert row["amount, kmol/h"] == pytest.approx(entry["amount"], rel=1e-14)
        if entry["amount"] > 1.0:
            line = next(line for line in lines if line.split()[:1] == [entry["name"]])
            assert float(line.split()[1]) == pytest.approx(entry["amount"], rel=5e-5)
    (heat,) = (line.split() for line in lines if line.startswith("  heat added"))
    assert float(heat[2]) * 1e6 == pytest.approx(outlet.heat, rel=5e-5)
    assert heat[3] == "MW"


def test_a_reaction_is_that_of_the_command() -> None:
    study = gibbsmin.reaction("CO + H2O = CO2 + H2", [600.0, 900.0])
    told = json.loads(printed("reaction", "CO + H2O = CO2 + H2", "-t", "600, 900 K", "--json"))
    assert [row.log10_K for row in study.rows] == [row["log10_K"] for row in told["rows"]]


def test_checks_are_written_and_tabled(tmp_path: Path) -> None:
    history = EXAMPLES / "reformer_history"
    samples = pd.read_csv(history / "samples.csv").head(2)
    checks = gibbsmin.check(gibbsmin.load_case(history / "case.toml"), samples)
    assert len(gibbsmin.check_table(checks)) == 2
    gibbsmin.write_checks(checks, str(tmp_path / "checks.csv"))
    gibbsmin.write_report(checks, str(tmp_path / "report.html"))
    assert len(pd.read_csv(tmp_path / "checks.csv")) == 2
    assert (tmp_path / "report.html").read_text(encoding="utf-8").startswith("<!DOCTYPE html>")
    assert len(gibbsmin.check_document(checks)["samples"]) == 2
