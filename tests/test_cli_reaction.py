"""``gibbsmin reaction`` on a small library: values, path, refusals."""

from __future__ import annotations

import json

import pytest
from thermo_builders import make_species, small_library
from typer.testing import CliRunner, Result

from gibbsmin.cli import app
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Piece


@pytest.fixture(autouse=True)
def library(monkeypatch: pytest.MonkeyPatch) -> Library:
    own = (
        make_species("H2(g)", dfH298=0.0, u_dfH298=0.0, S298=130.7, pieces=(Piece(200, 6000, 29),)),
        make_species("O2(g)", dfH298=0.0, u_dfH298=0.0, S298=205.2, pieces=(Piece(200, 6000, 32),)),
        make_species("H2O(g)", pieces=(Piece(200, 6000, 36),), source_enthalpy="tables"),
        make_species("H2O(l)", dfH298=-285830.0, S298=69.95, pieces=(Piece(273.15, 600, 75),)),
    )
    names = {record.name for record in own}
    others = tuple(record for record in small_library().records if record.name not in names)
    library = Library((*own, *others), small_library().sources)
    monkeypatch.setattr("gibbsmin.thermo.library.load_library", lambda: library)
    return library


def run(*arguments: str) -> Result:
    return CliRunner().invoke(app, ["reaction", *arguments])


# The figures were confirmed by hand: each Cp is constant.
EXPECTED = """\
2 H2 + O2 = 2 H2O
Values per mole of reaction as written, P° = 1 bar.

       T        T        ΔrH         ΔrS        ΔrG
       K       °C     kJ/mol   J/(mol K)     kJ/mol   log10 K   stable forms
  298.15    25.00   −571.660    −326.700   −474.254   83.0858   H2O(l)
  500.00   226.85   −487.285     −98.238   −438.166   45.7740   H2O(g)

Path by way of 298.15 K
       T                     reactants      reaction   products
       K                   to 298.15 K   at 298.15 K       to T        sum
  298.15   ΔH, kJ/mol            0.000      −571.660      0.000   −571.660
           ΔS, J/(mol K)         0.000      −326.700      0.000   −326.700
  500.00   ΔH, kJ/mol          −18.166      −571.660    102.541   −487.285
           ΔS, J/(mol K)       −46.531      −326.700    274.993    −98.238

Phase changes on the way
  H2O(l) to H2O(g), evaporation to the ideal gas at 1 bar: \
at 372.99 K, takes up 41.085 kJ/mol on heating

Tabulated values at 298.15 K
                      ΔfH      standard           S       standard
    ν   record     kJ/mol   uncertainty   J/(mol K)    uncertainty   source of ΔfH
   −2   H2(g)       0.000             0     130.700           0.01
   −1   O2(g)       0.000             0     205.200           0.01
    2   H2O(l)   −285.830          0.04      69.950           0.01
  sum            −571.660                  −326.700

"""


def test_view() -> None:
    result = run("2 H2 + O2 = 2 H2O", "-t", "298.15, 500 K")
    assert result.exit_code == 0
    assert result.stdout == EXPECTED


def test_json() -> None:
    result = run("2 H2 + O2 = 2 H2O", "--temperature", "500 K", "--json")
    assert result.exit_code == 0
    document = json.loads(result.stdout)
    assert list(document) == ["reaction", "rows", "reference", "warnings"]
    assert document["reaction"] == "2 H2 + O2 = 2 H2O"
    assert document["warnings"] == []
    (row,) = document["rows"]
    assert list(row) == [
        "temperature_K",
        "enthalpy_kJ_per_mol",
        "entropy_J_per_mol_K",
        "gibbs_energy_kJ_per_mol",
        "log10_K",
        "path",
    ]
    path = row["path"]
    for quantity in ("enthalpy_kJ_per_mol", "entropy_J_per_mol_K"):
        parts = ("reactants_to_reference", "reaction_at_reference", "products_from_reference")
        total = sum(path[part][quantity] for part in parts)
        assert total == pytest.approx(row[quantity], abs=1e-9)
    assert path["forms"] == {"H2": "H2(g)", "O2": "O2(g)", "H2O": "H2O(g)"}
    (change,) = path["phase_changes"]
    assert (change["from"], change["to"], change["coefficient"]) == ("H2O(l)", "H2O(g)", 2.0)
    assert document["reference"]["enthalpy_kJ_per_mol"] == pytest.approx(2 * -285.83)
    assert document["reference"]["entropy_J_per_mol_K"] == pytest.approx(
        2 * 69.95 - 2 * 130.7 - 205.2
    )


def test_named_forms_change_the_answer() -> None:
    result = run("2 H2 + O2 = 2 H2O(g)", "-t", "298.15 K", "--json")
    (row,) = json.loads(result.stdout)["rows"]
    assert row["enthalpy_kJ_per_mol"] == pytest.approx(2 * -241.826)
    assert row["path"]["phase_changes"] == []


def test_without_temperatures_usual_ones_are_shown() -> None:
    rows = json.loads(run("2 H2 + O2 = 2 H2O", "--json").stdout)["rows"]
    assert [row["temperature_K"] for row in rows] == [298.15, 400, 500, 600, 800, 1000, 1200, 1500]


def test_warnings_are_shown() -> None:
    result = run("H2O(l) = H2O(g)", "-t", "700 K")
    assert result.stdout.endswith(
        "Warnings\n"
        "  H2O(l) is tabulated from 273.15 K to 600 K; "
        "at 700 K its heat capacity is continued as a constant.\n\n"
    )


@pytest.mark.parametrize(
    ("text", "message"),
    [
        (
            "CH4 + H2O = CO2 + 4 H2",
            'found "CH4 + H2O = CO2 + 4 H2", which is not balanced: '
            "H 6 on the left and 8 on the right, O 1 on the left and 2 on the right; "
            'accepted is a balanced reaction, here "CH4 + 2 H2O = CO2 + 4 H2".',
        ),
        (
            "CH4 + 2 H2O",
            'found "CH4 + 2 H2O", which has no sign between two sides; '
            'accepted is a reaction such as "CH4 + 2 H2O = CO2 + 4 H2".',
        ),
        (
            "CH5 + 2 H2O = CO2 + H2",
            'found "CH5", which names no species; accepted is a library record, '
            "the nearest are CH4(g), CH3(g), CH2(g).",
        ),
        (
            "H2O(cr) = H2O(g)",
            'found "H2O(cr)", a form that the library does not hold; accepted is H2O(g) or H2O(l).',
        ),
    ],
)
def test_refused(text: str, message: str) -> None:
    result = run(text)
    assert (result.exit_code, result.stdout, result.stderr) == (2, "", f"{message}\n")


def test_a_bare_temperature_is_asked_about() -> None:
    result = run("2 H2 + O2 = 2 H2O", "-t", "850")
    assert (result.exit_code, result.stderr) == (
        2,
        'found "850", a number without a unit; '
        'accepted is a temperature such as "850 degC" or "1123 K".\n',
    )
