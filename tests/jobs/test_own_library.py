"""Library files of the user's own: every way to give a record, and every way to mistype one."""

from __future__ import annotations

import json
from pathlib import Path

import numpy as np
import pandas as pd
import pytest
from published_values import rows
from typer.testing import CliRunner

import gibbsmin
from gibbsmin.cli import app
from gibbsmin.errors import InputError
from gibbsmin.jobs.own_library import OwnRecords, read_library_file
from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.record_checks import check_record

NITROGEN = """
[[record]]
name = "N2(g)"
source = "Huber and Herzberg 1979 (recalled)"
enthalpy = "0 kJ/mol"
[record.spectrum]
symmetry_number = 2
rotational_constants = [1.99824]
vibrations = [2358.57]
anharmonicity = 14.324
coupling = 0.017318
distortion = 5.76e-6
"""

SHOMATE = """
[[record]]
name = "XeO4(g)"
source = "invented"
enthalpy = "153.5 kcal/mol"
entropy = "70.2 cal/(mol K)"
enthalpy_uncertainty = "2 kJ/mol"
molar_mass = 195.29
[[record.heat_capacity]]
first = "298 K"
last = "800 K"
unit = "cal/(mol K)"
A = 14.0
B = 20.0
C = -8.0
"""

TABLE = """
[[record]]
name = "LiB3O5(cr)"
source = "invented"
enthalpy = "-2660 kJ/mol"
entropy = "120 J/(mol K)"
[record.table]
unit = "J/(mol K)"
temperature = ["298.15 K", "400 K", "500 K", "600 K", "700 K", "800 K"]
heat_capacity = [131.0, 158.0, 177.0, 191.0, 202.0, 211.0]
"""


def read(tmp_path: Path, text: str, name: str = "mine.toml") -> OwnRecords:
    path = tmp_path / name
    path.write_text(text)
    return read_library_file(path, load_library())


def test_a_spectrum_gives_entropy_and_heat_capacity(tmp_path: Path) -> None:
    own = read(tmp_path, NITROGEN)
    (record,) = own.records
    ours = load_library()["N2(g)"]
    assert pytest.approx(ours.S298, abs=0.02) == record.S298
    T = np.array([300.0, 1000.0, 3000.0])
    table = PropertyTable.of([record, ours])
    Cp = table.heat_capacity(T)
    assert Cp[:, 0] == pytest.approx(Cp[:, 1], rel=1e-3)
    assert (
        own.evaluated["N2(g)"]
        .findings[0]
        .startswith(
            "Functions from the spectrum (levels of a vibrating rotor), 50 to 6000 K, |ΔG/RT| ≤ "
        )
    )
    checks = list(check_record(record, load_library()))
    assert checks[0] == "Against the library: ΔfH +0.000 kJ/mol, S +0.001 J/(mol K)."


def test_coefficients_in_calories_become_joules(tmp_path: Path) -> None:
    (record,) = read(tmp_path, SHOMATE).records
    assert record.dfH298 == pytest.approx(153.5 * 4184.0)
    assert pytest.approx(70.2 * 4.184) == record.S298
    assert record.u_dfH298 == 2000.0
    t = 0.5
    expected = 4.184 * (14.0 + 20.0 * t - 8.0 * t**2)
    assert PropertyTable.of([record]).heat_capacity(500.0)[0] == pytest.approx(expected)


def test_a_table_is_fitted_and_says_how_well(tmp_path: Path) -> None:
    own = read(tmp_path, TABLE)
    (record,) = own.records
    assert PropertyTable.of([record]).heat_capacity(600.0)[0] == pytest.approx(191.0, rel=2e-3)
    assert record.fit_error < 1e-3
    assert (
        own.evaluated[record.name]
        .findings[0]
        .startswith("Heat capacity fitted to 6 points, |ΔG/RT| ≤ ")
    )


def test_calorimetry_gives_the_entropy_by_the_third_law(tmp_path: Path) -> None:
    T = [10, 15, 20, 25, 30, 40, 50, 60, 70, 80, 90, 100, 120, 140, 160, 180, 200, 250, 300]
    Cp = [0.0555, 0.184, 0.462, 0.963, 1.693, 3.740, 6.154, 8.595, 10.86, 12.85, 14.56, 16.01,
          18.25, 19.87, 21.05, 21.94, 22.63, 23.79, 24.48]  # fmt: skip
    text = f"""
[[record]]
name = "Cu(mine)"
source = "White and Collocott 1984 (recalled)"
enthalpy = "0 kJ/mol"
[record.calorimetry]
unit = "J/(mol K)"
temperature = [{", ".join(f'"{t} K"' for t in T)}]
heat_capacity = {Cp}
"""
    own = read(tmp_path, text)
    (record,) = own.records
    assert pytest.approx(33.15, abs=0.2) == record.S298
    findings = own.evaluated[record.name].findings
    assert any(line.startswith("Third law: S(298.15 K) = 33.") for line in findings)
    assert "  0 K to 10 K, T³ law: 0.018 ± 0.001" in findings


RECALLED = "relative_uncertainty = 0.01"
"""Of heat capacities that are recalled from memory."""


def vapour(changes: str = "") -> str:
    """Nitrogen with its calorimetry, W. F. Giauque and J. O. Clayton (1933), recalled."""
    found = [row for row in rows("calorimetric_points") if row["substance"] == "nitrogen"]
    transitions = (
        ("alpha to beta", 35.61, 54.71, 0.5),
        ("fusion", 63.14, 172.3, 1.0),
        ("vaporisation", 77.32, 1332.9, 3.0),
    )
    text = f"""[record.calorimetry]
unit = "cal/(mol K)"
temperature = [{", ".join(f'"{row["T_K"]} K"' for row in found)}]
heat_capacity = [{", ".join(row["Cp"] for row in found)}]
{changes}
[record.calorimetry.vapour]
boiling = "77.32 K"
pressure = "1 atm"
critical_temperature = "126.2 K"
critical_pressure = "33.9 bar"
"""
    for name, T, enthalpy, u in transitions:
        text += (
            f'[[record.calorimetry.transition]]\nname = "{name}"\ntemperature = "{T} K"\n'
            f'enthalpy = "{enthalpy} cal/mol"\nuncertainty = "{u} cal/mol"\n'
        )
    return text


def test_a_vapours_calorimetry_is_held_against_its_spectrum(tmp_path: Path) -> None:
    own = read(tmp_path, NITROGEN + vapour(RECALLED))
    (record,) = own.records
    assert pytest.approx(191.61, abs=0.01) == record.S298
    findings = own.evaluated["N2(g)"].findings
    assert "  77.32 K to 298.15 K, gas: 39.284 ± 0.000" in findings
    assert findings[-1].startswith("That is +1.028 ± ")
    assert findings[-1].endswith(
        " J/(mol K) from the entropy that the record takes, 191.610: they agree."
    )
    # Residual entropy that nitrogen does not have.
    disordered = vapour(RECALLED + '\nresidual_entropy = "5.76 J/(mol K)"')
    findings = read(tmp_path, NITROGEN + disordered).evaluated["N2(g)"].findings
    assert findings[-1].endswith("191.610: they DISAGREE.")


def test_moments_of_inertia_stand_for_rotational_constants(tmp_path: Path) -> None:
    # h/(8π² c B): 1.40090e-46 kg m² makes 1.99824 1/cm.
    moment = NITROGEN.replace(
        "rotational_constants = [1.99824]", 'moments_of_inertia = ["1.40090e-46 kg m2"]'
    )
    (record,) = read(tmp_path, moment).records
    (same,) = read(tmp_path, NITROGEN).records
    assert pytest.approx(same.S298, abs=1e-3) == record.S298
    in_grams = moment.replace("1.40090e-46 kg m2", "1.40090e-39 g cm2")
    assert pytest.approx(record.S298, abs=1e-9) == read(tmp_path, in_grams).records[0].S298
    in_atoms = moment.replace("1.40090e-46 kg m2", "8.43645 u A2")
    assert pytest.approx(record.S298, abs=1e-3) == read(tmp_path, in_atoms).records[0].S298


METHANOL = """
[[record]]
name = "CH3OH(g)"
source = "T. Shimanouchi (1972) and a barrier of 373 1/cm, recalled"
enthalpy = "-201 kJ/mol"
[record.spectrum]
symmetry_number = 1
rotational_constants = [4.254, 0.8236, 0.7931]
vibrations = [3681, 3000, 2844, 1477, 1455, 1345, 1060, 1033, 2960, 1477, 1165]
[[record.spectrum.internal_rotation]]
barrier = 373
fold = 3
constant = 27.6
symmetry_number = 3
"""


def test_methanol_with_its_internal_rotation_has_its_published_entropy(tmp_path: Path) -> None:
    # 239.9 J/(mol K) at 298.15 K and 1 bar, from spectra and calorimetry alike (recalled).
    (record,) = read(tmp_path, METHANOL).records
    assert pytest.approx(239.9, abs=0.5) == record.S298
    assert pytest.approx(load_library()["CH3OH(g)"].S298, abs=0.5) == record.S298
    # A group without symmetry has R ln 3 more.
    (other,) = read(tmp_path, METHANOL[:-20] + "symmetry_number = 1\n").records
    assert pytest.approx(8.314463 * np.log(3.0), abs=1e-3) == other.S298 - record.S298


def test_a_piece_may_begin_with_a_transition(tmp_path: Path) -> None:
    piece = (
        '[[record.heat_capacity]]\nfirst = "800 K"\nlast = "900 K"\nunit = "J/(mol K)"\nA = 100\n'
        'transition = "3 kJ/mol"\n'
    )
    (record,) = read(tmp_path, SHOMATE + piece).records
    H = PropertyTable.of([record]).enthalpy(np.array([800.0 - 1e-9, 800.0]))[:, 0]
    assert H[1] - H[0] == pytest.approx(3000.0, abs=1e-3)


def test_each_record_has_its_own_source(tmp_path: Path) -> None:
    own = read(tmp_path, NITROGEN + SHOMATE)
    assert [(source.key, source.citation) for source in own.sources] == [
        ("own: mine.toml, N2(g)", "Huber and Herzberg 1979 (recalled)"),
        ("own: mine.toml, XeO4(g)", "invented"),
    ]
    assert [record.source_entropy for record in own.records] == [s.key for s in own.sources]


def test_groups_and_measured_constants(tmp_path: Path) -> None:
    groups = (
        '[[record]]\nname = "CH3CH2OCHO(g)"\nsource = "estimate"\n'
        "groups = { CH3 = 1, CH2 = 1, O = 1, CHO = 1 }\n"
    )
    own = read(tmp_path, groups)
    assert own.records[0].u_dfH298 == 8400.0
    estimated, together = own.evaluated[own.records[0].name].findings
    assert estimated.startswith("An estimate by groups")
    assert together == (
        "Its enthalpy and entropy err together: error bars want a [[correlation]] with between = "
        '["CH3CH2OCHO(g).enthalpy", "CH3CH2OCHO(g).entropy"] and coefficient = 0.707.'
    )
    library = load_library()
    T = [700.0, 800.0, 900.0, 1000.0]
    records = [library[f"{name}(g)"] for name in ("CO", "H2O", "CO2", "H2")]
    G = PropertyTable.of(records).gibbs_energy(np.array(T)) @ [-1.0, -1.0, 1.0, 1.0]
    log10_K = (-G / (8.31446261815324 * np.array(T) * np.log(10.0))).tolist()
    constants = f"""
[[record]]
name = "CO2(g)"
source = "invented measurement"
entropy = "213.79 J/(mol K)"
[[record.heat_capacity]]
first = "298 K"
last = "1200 K"
unit = "J/(mol K)"
A = 24.99735
B = 55.18696
C = -33.69137
D = 7.948387
E = -0.136638
[record.constants]
reaction = "CO + H2O = CO2 + H2"
temperature = ["700 K", "800 K", "900 K", "1000 K"]
log10_K = {log10_K}
"""
    own = read(tmp_path, constants)
    (record,) = own.records
    assert record.dfH298 == pytest.approx(library["CO2(g)"].dfH298, abs=60.0)
    second, third, _ = own.evaluated["CO2(g)"].findings
    assert second.startswith("Second law: ΔfH = -393.")
    assert "the laws " in third


def test_a_case_takes_the_records_and_says_so(tmp_path: Path) -> None:
    (tmp_path / "mine.toml").write_text(NITROGEN)
    case = tmp_path / "case.toml"
    case.write_text(
        '[feed.gas]\ntemperature = "400 degC"\npressure = "100 bar"\nunit = "mol"\n'
        "amounts = { N2 = 1, H2 = 3 }\n"
        '[outlet]\ntemperature = "450 degC"\npressure = "100 bar"\n'
        '[species]\nconsider = ["N2", "H2", "NH3"]\nlibrary = ["mine.toml"]\n'
    )
    loaded = gibbsmin.load_case(case)
    assert loaded.library["N2(g)"].source_enthalpy == "own: mine.toml, N2(g)"
    outlet = gibbsmin.predict(loaded).final
    assert outlet.certified
    assert "Records of the user's own (mine.toml): N2(g)." in outlet.notes
    plain = case.read_text().replace('library = ["mine.toml"]\n', "")
    case.write_text(plain)
    ours = gibbsmin.predict(gibbsmin.load_case(case)).final
    assert outlet.mole_fractions == pytest.approx(ours.mole_fractions, rel=2e-3)


def test_simple_records_come_from_a_table(tmp_path: Path) -> None:
    text = (
        'name,source,"enthalpy, kJ/mol","entropy, J/(mol K)","first, K","last, K",A,B\n'
        "XeO4(g),invented,642.2,293.7,298,800,58.6,83.7\n"
    )
    (record,) = read(tmp_path, text, "mine.csv").records
    assert record.dfH298 == pytest.approx(642.2e3)
    assert PropertyTable.of([record]).heat_capacity(500.0)[0] == pytest.approx(58.6 + 83.7 * 0.5)
    with pytest.raises(InputError) as error:
        read(tmp_path, text.replace("last, K", "end, K"), "mine.csv")
    assert str(error.value).startswith(f"{tmp_path / 'mine.csv'}: found no column last, K; ")


def test_simple_records_come_from_a_workbook(tmp_path: Path) -> None:
    path = tmp_path / "mine.xlsx"
    pd.DataFrame(
        {
            "name": ["XeO4(g)"],
            "source": ["invented"],
            "enthalpy, kJ/mol": [642.2],
            "entropy, J/(mol K)": [293.7],
            "first, K": [298],
            "last, K": [800],
            "A": [58.6],
        }
    ).to_excel(path, index=False)
    (record,) = read_library_file(path, load_library()).records
    assert record.dfH298 == pytest.approx(642.2e3)
    assert record.source_enthalpy == "own: mine.xlsx, XeO4(g)"


def test_coefficients_may_be_those_of_powers_of_kelvin(tmp_path: Path) -> None:
    text = SHOMATE.replace("A = 14.0\nB = 20.0\nC = -8.0", "A = 14.0\nB = 20e-3\nC = -8e-6")
    (record,) = read(tmp_path, text.replace("A = 14.0", 't = "T/K"\nA = 14.0')).records
    (same,) = read(tmp_path, SHOMATE).records
    T = np.array([300.0, 500.0, 800.0])
    table = PropertyTable.of([record, same])
    assert table.heat_capacity(T)[:, 0] == pytest.approx(table.heat_capacity(T)[:, 1])


ON_AN_AXIS = """
[feed.gas]
temperature = "400 degC"
pressure = "1 bar"
unit = "mol"
amounts = { CO = 1, N2 = 1 }
[outlet]
temperature = "450 degC"
pressure = "1 bar"
[species]
consider = ["N2", "CO", "CO2", "C(graphite)"]
library = ["mine.toml"]
[[axis]]
vary = "outlet.temperature"
first = "400 degC"
last = "1100 degC"
count = 8
[onset]
phase = "C(graphite)"
"""


def test_scans_and_onsets_say_whose_the_records_are(tmp_path: Path) -> None:
    (tmp_path / "mine.toml").write_text(NITROGEN)
    case = tmp_path / "case.toml"
    case.write_text(ON_AN_AXIS)
    note = "Records of the user's own (mine.toml): N2(g)."
    runner = CliRunner()
    scan = ["scan", str(case), "--out", str(tmp_path / "scan.csv")]
    for command in (scan, ["onset", str(case)], ["onset", str(case), "--json"]):
        result = runner.invoke(app, command)
        assert result.exit_code == 0, result.output
        assert note in result.output


def test_the_command_shows_and_checks_them(tmp_path: Path) -> None:
    path = tmp_path / "mine.toml"
    path.write_text(NITROGEN)
    result = CliRunner().invoke(app, ["species", "--file", str(path)])
    assert result.exit_code == 0, result.output
    assert "How it came about" in result.output
    assert "Against the library: ΔfH +0.000 kJ/mol" in result.output
    result = CliRunner().invoke(app, ["species", "--file", str(path), "--json"])
    assert result.exit_code == 0
    assert '"checks"' in result.output


MISTAKES = {
    "a unit is missing": (
        SHOMATE.replace('unit = "cal/(mol K)"\n', ""),
        "record.XeO4(g).heat_capacity.1.unit: found no unit; accepted is one such as "
        '"J/(mol K)" or "cal/(mol K)".',
    ),
    "a table does not rise": (
        TABLE.replace('"500 K"', '"390 K"'),
        "record.LiB3O5(cr).table.temperature: found temperatures that do not rise at 390 K; "
        "accepted are "
        "temperatures in rising order.",
    ),
    "a heat capacity is negative": (
        TABLE.replace("177.0", "-177.0"),
        "record.LiB3O5(cr).table.heat_capacity: found a heat capacity of -177 J/(mol K); "
        "accepted are heat "
        "capacities above zero.",
    ),
    "a polynomial turns negative": (
        SHOMATE.replace("C = -8.0", "C = -80.0"),
        "record.XeO4(g).heat_capacity: found a heat capacity of -88.7 J/(mol K) near 800 K; "
        "accepted "
        "is one above zero.",
    ),
    "a symmetry number is impossible": (
        NITROGEN.replace("symmetry_number = 2", "symmetry_number = 7"),
        "record.N2(g).spectrum.symmetry_number: found the symmetry number 7; accepted is one of "
        "1, 2, "
        "3, 4, 5, 6, 8, 10, 12, 24, 60.",
    ),
    "a molar mass disagrees": (
        SHOMATE.replace("195.29", "200.0"),
        "record.XeO4(g).molar_mass: found 200 g/mol, while XeO4 has 195.29 g/mol; accepted is "
        "the molar "
        "mass of the formula, or none.",
    ),
    "a key is unknown": (
        SHOMATE.replace("entropy =", "entropi ="),
        'record.XeO4(g).entropi: found an unknown key (nearest: "entropy"); accepted is name, '
        "common_name, cas, source, molar_mass, density, enthalpy, enthalpy_uncertainty, entropy, "
        "entropy_uncertainty, heat_capacity, table, calorimetry, spectrum, groups or constants.",
    ),
    "an enthalpy is missing": (
        NITROGEN.replace('enthalpy = "0 kJ/mol"\n', ""),
        'record.N2(g).enthalpy: found no enthalpy; accepted is enthalpy = "…", or what gives it: '
        "constants or groups.",
    ),
    "two heat capacities": (
        NITROGEN + "[record.groups]\nCH3 = 1\n",
        "record.N2(g).heat_capacity: found spectrum and groups; accepted is one of heat_capacity, "
        "table, calorimetry, spectrum, groups.",
    ),
    "no state": (
        SHOMATE.replace("XeO4(g)", "XeO4"),
        'record.XeO4.name: found "XeO4" without a state; accepted is a formula and its state, such '
        'as "CO2(g)" or "NaCl(cr)".',
    ),
    "a symmetry number does not fit": (
        NITROGEN.replace("symmetry_number = 2", "symmetry_number = 1"),
        "record.N2(g).spectrum.symmetry_number: found the symmetry number 1 of N2; accepted is 2, "
        "since its two atoms are alike.",
    ),
    "a density of a gas": (
        SHOMATE.replace("molar_mass = 195.29", 'density = "1 kg/L"'),
        "record.XeO4(g).density: found a density of a gas, which follows from temperature and "
        "pressure; "
        'accepted is that of a solid or a liquid, such as "5.2 kg/L".',
    ),
    "no record": (
        "",
        "record: found nothing; accepted are [[record]] tables.",
    ),
    "a negative entropy": (
        TABLE.replace('"120 J', '"-120 J'),
        'record.LiB3O5(cr).entropy: found "-120 J/(mol K)"; accepted is a value above zero.',
    ),
    "a negative uncertainty": (
        SHOMATE.replace('"2 kJ/mol"', '"-2 kJ/mol"'),
        'record.XeO4(g).enthalpy_uncertainty: found "-2 kJ/mol"; accepted is zero or more.',
    ),
    "a number that is none": (
        SHOMATE.replace("A = 14.0", "A = nan"),
        "record.XeO4(g).heat_capacity.1.A: found nan; accepted is a number.",
    ),
    "a number past all use": (
        SHOMATE.replace("A = 14.0", "A = 1e300"),
        "record.XeO4(g).heat_capacity.1.A: found 1e+300; accepted is a number below 1e+100 in "
        "size.",
    ),
    "a unit that is none": (
        SHOMATE.replace('unit = "cal/(mol K)"', 'unit = "cal/mol"'),
        'record.XeO4(g).heat_capacity.1.unit: found "cal/mol", which is no unit of it; accepted '
        "is one "
        'such as "J/(mol K)" or "cal/(mol K)".',
    ),
    "half a degeneracy": (
        NITROGEN.replace("[2358.57]", "[[2358.57, 1.5]]"),
        "record.N2(g).spectrum.vibrations: found the degeneracy 1.5; accepted is a whole number "
        "from 1.",
    ),
    "no moment of inertia": (
        NITROGEN.replace("rotational_constants = [1.99824]", "moments_of_inertia = [1.4]"),
        "record.N2(g).spectrum.moments_of_inertia: found 1.4, which is no moment of inertia; "
        "accepted "
        'is one such as "1.4e-46 kg m2", "1.4e-39 g cm2" or "84 u A2".',
    ),
    "rotation twice": (
        NITROGEN.replace("anharmonicity", 'moments_of_inertia = ["1 u A2"]\nanharmonicity'),
        "record.N2(g).spectrum.moments_of_inertia: found rotational constants and moments of "
        "inertia; "
        "accepted is one of the two.",
    ),
    "a symmetry number that is no number": (
        NITROGEN.replace("symmetry_number = 2", 'symmetry_number = "two"'),
        'record.N2(g).spectrum.symmetry_number: found "two"; accepted is a whole number from 1.',
    ),
    "vibrations that do not fit": (
        NITROGEN.replace("[2358.57]", "[2358.57, 100.0]").replace("anharmonicity = 14.324\n", ""),
        "record.N2(g).spectrum.vibrations: found 2 vibrations and internal rotations of N2; "
        "accepted "
        "are 1, each counted by its degeneracy.",
    ),
    "a record twice": (
        NITROGEN + NITROGEN,
        'record.N2(g).name: found "N2(g)" twice; accepted is each record once.',
    ),
}


@pytest.mark.parametrize("mistake", MISTAKES)
def test_a_mistake_is_one_sentence(tmp_path: Path, mistake: str) -> None:
    text, sentence = MISTAKES[mistake]
    with pytest.raises(InputError) as error:
        read(tmp_path, text)
    assert str(error.value) == f"{tmp_path / 'mine.toml'}: {sentence}"


def test_a_file_that_is_not_there_is_one_sentence(tmp_path: Path) -> None:
    case = tmp_path / "case.toml"
    case.write_text(ON_AN_AXIS)
    with pytest.raises(InputError) as error:
        gibbsmin.load_case(case)
    assert str(error.value) == (
        f"{tmp_path / 'mine.toml'}: found no such file; accepted is the path of a library file in "
        "TOML."
    )
    with pytest.raises(InputError) as error:
        read_library_file(tmp_path / "mine.json", load_library())
    assert str(error.value) == (
        f'{tmp_path / "mine.json"}: found the ending ".json"; accepted is .toml, .csv or .xlsx.'
    )
    (tmp_path / "empty.csv").write_text(
        'name,source,"enthalpy, kJ/mol","entropy, J/(mol K)","first, K","last, K",A\n'
    )
    with pytest.raises(InputError) as error:
        read_library_file(tmp_path / "empty.csv", load_library())
    assert str(error.value) == (
        f"{tmp_path / 'empty.csv'}: record: found nothing; accepted are [[record]] tables."
    )


def test_a_record_may_rest_on_one_before_it_or_in_an_earlier_file(tmp_path: Path) -> None:
    constants = """
[[record]]
name = "XeO3(g)"
source = "invented"
entropy = "287 J/(mol K)"
[[record.heat_capacity]]
first = "298 K"
last = "800 K"
unit = "J/(mol K)"
A = 70
[record.constants]
reaction = "XeO4 = XeO3 + 0.5 O2"
temperature = ["300 K", "320 K", "340 K"]
log10_K = [31.0, 29.3, 27.8]
"""
    own = read(tmp_path, SHOMATE + constants)
    both = own.records[1].dfH298
    with pytest.raises(InputError) as error:
        read(tmp_path, constants)
    assert "record.XeO3(g).constants" in str(error.value)
    (tmp_path / "first.toml").write_text(SHOMATE)
    (tmp_path / "mine.toml").write_text(constants)
    case = tmp_path / "case.toml"
    case.write_text(ON_AN_AXIS.replace('["mine.toml"]', '["first.toml", "mine.toml"]'))
    library = gibbsmin.load_case(case).library
    assert library["XeO3(g)"].dfH298 == both
    assert library["XeO4(g)"].source_entropy == "own: first.toml, XeO4(g)"


def test_json_holds_each_contribution_and_both_laws() -> None:
    example = Path(__file__).parents[2] / "examples/own_species/mine.toml"
    result = CliRunner().invoke(app, ["species", "--file", str(example), "--json"])
    documents = {record["name"]: record for record in json.loads(result.stdout)["species"]}
    law = documents["Cu(cr)"]["third_law"]
    assert law["entropy_J_per_mol_K"] == documents["Cu(cr)"]["S298_J_per_mol_K"]
    parts = law["contributions"]
    assert [part["name"] for part in parts] == [
        "0 K to 10 K, T³ law",
        "10 K to 298.15 K, heat capacity",
    ]
    assert sum(part["value_J_per_mol_K"] for part in parts) == law["entropy_J_per_mol_K"]
    laws = documents["CH3OCH3(g)"]["measured_constants"]
    assert laws["third_law_enthalpy_kJ_per_mol"] == documents["CH3OCH3(g)"]["dfH298_kJ_per_mol"]
    assert laws["laws_agree"] is True
    assert documents["N2(g)"]["third_law"] is None
    assert documents["N2(g)"]["measured_constants"] is None


def test_a_density_gives_the_molar_volume(tmp_path: Path) -> None:
    text = TABLE.replace("entropy =", 'density = "2.47 kg/L"\nentropy =')
    (record,) = read(tmp_path, text).records
    assert record.molar_volume == pytest.approx(record.molar_mass / 2470.0)


def test_a_reaction_may_use_them(tmp_path: Path) -> None:
    path = tmp_path / "mine.toml"
    path.write_text(SHOMATE + NITROGEN)
    command = ["reaction", "XeO4 = Xe + 2 O2", "--file", str(path), "-t", "500 K"]
    result = CliRunner().invoke(app, command)
    assert result.exit_code == 0, result.output
    assert "Records of the user's own (mine.toml): XeO4(g)." in result.output
    document = json.loads(CliRunner().invoke(app, [*command, "--json"]).stdout)
    assert document["notes"] == ["Records of the user's own (mine.toml): XeO4(g)."]
    assert CliRunner().invoke(app, command[:2]).exit_code == 2
