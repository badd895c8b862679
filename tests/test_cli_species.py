"""``gibbsmin species`` on a small library: what it finds, shows and refuses."""

from __future__ import annotations

import json

import pytest
from thermo_builders import make_species, small_library
from typer.testing import CliRunner, Result

from gibbsmin.cli import app
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Piece

IRON = make_species(
    "Fe(cr)",
    common_name="iron",
    cas="7439-89-6",
    dfH298=0.0,
    u_dfH298=0.0,
    S298=27.32,
    u_S298=float("nan"),
    molar_mass=0.055845,
    molar_volume=7.09e-6,
    pieces=(
        Piece(298.15, 1184.0, 20.0, 10.0, -1.5, 0.25, -0.125),
        Piece(1184.0, 1665.0, 24.0, 8.0, 0, 0, 0, 900.0, "alpha–gamma"),
        Piece(1665.0, 1800.0, 25.0, 8.0, 0, 0, 0, 0.0, "Curie point"),
    ),
    fit_error=1.25e-5,
    remark="Invented [for the test].",
)


@pytest.fixture(autouse=True)
def library(monkeypatch: pytest.MonkeyPatch) -> Library:
    plain = small_library()
    sourced = {f"source_{what}": "tables" for what in ("enthalpy", "entropy", "heat_capacity")}
    records = [
        make_species(record.name, **{**_fields(record), **sourced})
        for record in (*plain.records, IRON)
    ]
    library = Library(tuple(records), plain.sources)
    monkeypatch.setattr("gibbsmin.thermo.library.load_library", lambda: library)
    return library


def _fields(record: object) -> dict[str, object]:
    return {name: getattr(record, name) for name in record.__slots__ if name != "name"}  # type: ignore[attr-defined]


def run(*arguments: str) -> Result:
    return CliRunner().invoke(app, ["species", *arguments])


def test_one_record_in_full() -> None:
    result = run("Fe(cr)", "--temperature", "298.15, 1000 K", "-t", "1500 degC")
    assert result.exit_code == 0
    assert result.stdout == EXPECTED


# The figures were confirmed by numerical integration of Cp.
EXPECTED = """\
Fe(cr), iron
  formula                                  Fe
  phase                                    solid
  CAS                                      7439-89-6
  molar mass                               55.845 g/mol
  molar volume                             7.09 cm³/mol
  enthalpy of formation at 298.15 K        0.000 kJ/mol, exact by definition
  absolute entropy at 298.15 K and 1 bar   27.320 J/(mol K), no uncertainty given, counted as ± 1.5
  range                                    298.15 K to 1800 K
  largest fit error |ΔG/RT|                1.3e-05

Properties at 1 bar
        T         T          Cp           S   H − H(298.15 K)   H with ΔfH 298 K   G = H − T S
        K        °C   J/(mol K)   J/(mol K)            kJ/mol             kJ/mol        kJ/mol
   298.15     25.00      21.449      27.320             0.000              0.000        −8.145
  1000.00    726.85      28.625      57.299            17.874             17.874       −39.425
  1773.15   1500.00      39.185      77.481            45.390             45.390       −91.996

Heat capacity: Cp = A + B t + C t² + D t³ + E/t² in J/(mol K), t = T/(1000 K)
  from K   to K    A    B      C      D        E
  298.15   1184   20   10   −1.5   0.25   −0.125
    1184   1665   24    8      0      0        0
    1665   1800   25    8      0      0        0

Transitions
  alpha–gamma at 1184 K, takes up 0.900 kJ/mol
  Curie point at 1665 K, takes up no heat; the heat capacity changes

Sources
  enthalpy, entropy, heat capacity   tables: A. Author, Tables, 1998. [published values]

Remark
  Invented [for the test].

"""


def test_several_records_as_a_list() -> None:
    result = run("water")
    assert result.exit_code == 0
    assert result.stdout == (
        "2 records\n"
        "\n"
        "                               ΔfH 298 K      standard     S 298 K           range\n"
        "  record   common name   CAS      kJ/mol   uncertainty   J/(mol K)               K"
        "   status\n"
        "  H2O(g)   water                −241.826          0.04     188.834   298.15 – 3000\n"
        "  H2O(l)   water                −241.826          0.04     188.834   298.15 – 3000\n"
        "\n"
        'To see one in full, name it: gibbsmin species "H2O(g)"\n'
    )


@pytest.mark.parametrize(
    ("arguments", "names"),
    [
        (["FeO"], ["FeO(cr)", "FeO(l)"]),
        (["--elements", "Si, O"], ["SiO2(quartz)", "SiO2(cristobalite)", "SiO2(l)", "e-(g)"]),
        (["--name", "dimethyl"], ["CH3OCH3(g)"]),
        (["--cas", "64-17-5"], ["C2H5OH(g)", "C2H5OH(l)"]),
        (["C2H6O", "--name", "ethanol"], ["C2H5OH(g)", "C2H5OH(l)"]),
    ],
)
def test_finding(arguments: list[str], names: list[str]) -> None:
    result = run(*arguments, "--json")
    assert result.exit_code == 0
    assert [record["name"] for record in json.loads(result.stdout)["species"]] == names


def test_json_of_a_record() -> None:
    (record,) = json.loads(run("Fe(cr)", "-t", "1900 K", "--json").stdout)["species"]
    assert (record["formula"], record["state"], record["phase"]) == ("Fe", "cr", "solid")
    assert (record["dfH298_kJ_per_mol"], record["u_dfH298_kJ_per_mol"]) == (0.0, 0.0)
    assert (record["S298_J_per_mol_K"], record["u_S298_J_per_mol_K"]) == (27.32, None)
    assert (record["T_low_K"], record["T_high_K"]) == (298.15, 1800.0)
    assert record["pieces"][1] == {
        "T_low_K": 1184.0,
        "T_high_K": 1665.0,
        "A": 24.0,
        "B": 8.0,
        "C": 0,
        "D": 0,
        "E": 0,
        "transition": "alpha–gamma",
        "transition_kJ_per_mol": 0.9,
    }
    assert record["sources"]["enthalpy"] == {
        "key": "tables",
        "citation": "A. Author, Tables, 1998.",
        "status": "published values",
    }
    (values,) = record["properties"]
    assert values["temperature_K"] == 1900.0
    assert values["heat_capacity_J_per_mol_K"] == pytest.approx(25 + 8 * 1.8)
    assert values["gibbs_energy_kJ_per_mol"] == pytest.approx(
        values["enthalpy_kJ_per_mol"] - 1.9 * values["entropy_J_per_mol_K"]
    )
    assert record["warnings"] == [
        "Fe(cr) is tabulated from 298.15 K to 1800 K; "
        "at 1900 K its heat capacity is continued as a constant."
    ]


def test_a_value_beyond_the_range_comes_with_a_warning() -> None:
    result = run("Fe(cr)", "-t", "200 K")
    assert result.exit_code == 0
    assert (
        "Warnings\n"
        "  Fe(cr) is tabulated from 298.15 K to 1800 K; "
        "at 200 K its heat capacity is continued as a constant.\n"
    ) in result.stdout


def test_without_temperatures_those_within_the_range_are_shown() -> None:
    (record,) = json.loads(run("Fe(cr)", "--json").stdout)["species"]
    assert [row["temperature_K"] for row in record["properties"]] == [
        298.15, 400, 500, 600, 800, 1000, 1200, 1500,
    ]  # fmt: skip


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        (
            [],
            "found nothing to look for; "
            'accepted is a formula, a name or a CAS number, or --elements "C,H,O".',
        ),
        (
            ["CH5"],
            'found "CH5", which names no species; accepted is a library record, '
            "the nearest are CH4(g), CH3(g), CH2(g).",
        ),
        (
            ["CO2(l)"],
            'found "CO2(l)", a form that the library does not hold; accepted is CO2(g).',
        ),
        (
            ["--name", "methan0l"],
            'found "methan0l", which names no species; accepted is a library record, '
            "the nearest are C2H5OH(g), CH4(g), CH3(g).",
        ),
        (
            ["--cas", "74-82-9"],
            'found "74-82-9", a CAS number that no record bears; '
            "accepted is the number, name or formula of a library record.",
        ),
        (
            ["--elements", "C,Xx"],
            'found "Xx", which is no element; accepted are element symbols such as C, H, O.',
        ),
        (
            ["water", "--elements", "C"],
            "found no record that meets all the conditions; accepted are fewer conditions.",
        ),
        (
            ["H2O(l)", "-t", "25 bar"],
            'found "25 bar", which is a pressure; '
            'accepted is a temperature such as "850 degC" or "1123 K".',
        ),
        (
            ["H2O(l)", "-t", "0 K"],
            'found "0 K", which is not above absolute zero; '
            'accepted is a temperature such as "850 degC" or "1123 K".',
        ),
    ],
)
def test_refused(arguments: list[str], message: str) -> None:
    result = run(*arguments)
    assert (result.exit_code, result.stdout, result.stderr) == (2, "", f"{message}\n")


def test_json_tells_the_uncertainty_that_is_counted_and_why() -> None:
    (document,) = json.loads(run("Fe(cr)", "--json").stdout)["species"]
    assert document["u_S298_J_per_mol_K"] is None
    counted = document["uncertainty_counted"]
    assert counted["enthalpy_kJ_per_mol"] == 0.0
    assert counted["enthalpy_origin"] == "exact by definition of the reference state"
    assert counted["entropy_J_per_mol_K"] == 1.5
    assert counted["entropy_origin"].startswith("judgement: a value of one evaluation")
