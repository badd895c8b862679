"""The build: a sample of the records is made again and must give the bytes of the tables."""

from __future__ import annotations

from importlib.resources import files

import pytest
from gibbsmin.data.build.curated import curated_sources
from gibbsmin.data.build.enthalpies import ELECTRON_ENTHALPY
from gibbsmin.data.build.library import with_volumes
from gibbsmin.data.build.main_records import identities, main_records
from gibbsmin.data.build.names import common_name, form_word, trade_formula
from gibbsmin.data.build.record import BuildRecord
from gibbsmin.data.build.reference_tables import curated_list
from gibbsmin.data.build.sources import MAIN_SOURCES
from gibbsmin.data.build.tables import read_table
from gibbsmin.data.build.write import (
    heat_capacity_table,
    interaction_table,
    sources_table,
    species_table,
)

from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.errors import GibbsminError

# Every fortieth table, and those that take a path of their own through the build.
SPECIAL = {
    "NH4Cl(cr)",
    "PCl5(g)",
    "FeO(cr)",
    "TiCl4(l)",
    "HgCl2(l)",
    "K(cr)",
    "K(g)",
    "H2S(g)",
    "Na3AlF6(beta)",
    "H2SO4(l)",
    "Hg(l)",
    "C(graphite)",
    "e-(g)",
    "H3O+(g)",
    "NO2-(g)",
    "Fe(alpha)",
    "CoO(cr)",
    "H2O(l)",
}


@pytest.fixture(scope="module")
def sample() -> list[BuildRecord]:
    names = SPECIAL | {identity.name for identity in identities()[::40]}
    return with_volumes(sorted(main_records(names), key=lambda record: record.name))


def lines(file: str) -> list[str]:
    return files("gibbsmin.data").joinpath(file).read_bytes().decode("utf-8").split("\n")


def test_rebuilt_species_are_the_bytes_of_the_table(sample: list[BuildRecord]) -> None:
    rebuilt = species_table(sample).rstrip("\n").split("\n")
    assert len(rebuilt) > 50
    assert set(rebuilt) <= set(lines("species.csv"))


def test_rebuilt_heat_capacities_are_the_bytes_of_the_table(sample: list[BuildRecord]) -> None:
    rebuilt = heat_capacity_table(sample).rstrip("\n").split("\n")
    assert len(rebuilt) > 150
    assert set(rebuilt) <= set(lines("heat_capacity.csv"))


def test_rebuilt_sources_are_the_bytes_of_the_table() -> None:
    sources = sorted((*MAIN_SOURCES, *curated_sources()), key=lambda source: source.key)
    assert sources_table(sources).split("\n") == lines("sources.csv")


def test_rebuilt_interactions_are_the_bytes_of_the_table() -> None:
    assert interaction_table(curated_list("interaction")).split("\n") == lines("interaction.csv")


@pytest.mark.parametrize("file", ["species.csv", "heat_capacity.csv", "elements.csv"])
def test_tables_are_plain_text(file: str) -> None:
    data = files("gibbsmin.data").joinpath(file).read_bytes()
    assert b"\r" not in data
    assert data.endswith(b"\n")
    assert not data.startswith(b"\xef\xbb\xbf")


FORMULAS = [
    ("C-061", "H2CO", "C1H2O1", "HCHO"),
    ("H-075", "O2S(OH)2", "H2O4S1", "H2SO4"),
    ("Al-019", "OAlCl", "Al1Cl1O1", "AlOCl"),
    ("Al-084", "(AlBr3)2", "Al2Br6", "Al2Br6"),
    ("H-062", "(NaOH)2", "H2Na2O2", "(NaOH)2"),
    ("B-089", "(B(OH)2)2", "B2H4O4", "(B(OH)2)2"),
    ("H-094", "H2SO4.2H2O", "H6O6S1", "H2SO4·2H2O"),
    ("F-037", "OF", "F1O1", "OF"),
    ("D-020", "e-", "e1-", "e-"),
]


@pytest.mark.parametrize(("key", "title", "code", "expected"), FORMULAS)
def test_formulas_of_the_trade(key: str, title: str, code: str, expected: str) -> None:
    assert trade_formula(key, title, code) == expected


def test_formula_of_another_composition_is_refused() -> None:
    with pytest.raises(GibbsminError, match="is not the composition of"):
        trade_formula("X-001", "CO2", "C1O1")


@pytest.mark.parametrize(
    ("words", "formula", "state", "expected"),
    [
        ("Sodium Chloride", "NaCl", "cr", "sodium chloride"),
        ("Sodium Chloride", "Na2Cl2", "g", "sodium chloride dimer"),
        ("Aluminum Oxide, Gamma", "Al2O3", "gamma", "aluminium oxide"),
        ("Titanium Chloride", "TiCl4", "l", "titanium tetrachloride"),
        ("Vanadium Oxide", "V2O5", "cr", "divanadium pentoxide"),
        ("Oxygen", "O2", "g", "oxygen"),
        ("Oxygen", "O", "g", "atomic oxygen"),
        ("Calcium, Ion", "Ca+", "g", "calcium cation"),
        ("Hydrogen Sulfide", "H2S", "g", "hydrogen sulfide"),
    ],
)
def test_common_names(words: str, formula: str, state: str, expected: str) -> None:
    assert common_name("", words, formula, state) == expected


@pytest.mark.parametrize(
    ("words", "expected"),
    [
        ("Aluminum Oxide, Gamma", "gamma"),
        ("Silicon Oxide, Cristobalite, High", "high-cristobalite"),
        ("Sulfur, Orthorhombic", "rhombic"),
        ("Cesium Sulfate, II", "ii"),
        ("Iron", ""),
    ],
)
def test_form_words(words: str, expected: str) -> None:
    assert form_word("", words) == expected


TABLE = """Substance (Na2S)\tNa2S1(cr)
T(K)\tCp\tS\t-[G-H(Tr)]/T\tH-H(Tr)\tdelta-f H\tdelta-f G\tlog Kf
0\t0.\t0.\t+inf\t-10.\t0.\t0.\t0.
298.15\t80.\t100.\t100.\t0.\t-300.\t-290.\t50.8
400\t82.\t123.8\t102.97\t8.332\t-300.\t-286.\t37.3
400.000\t82.\t123.8\t102.97\t8.332\tALPHA <--> BETA
500\t84.\t142.3\t109.\t16.632\t-300.\t-283.\t29.6
500.000\t90.\t144.3\t109.\t17.632\tTRANSITION
600\t90.\t160.7\t116.3\t26.632\t-300.\t-279.\t24.3
"""


def test_table_is_read_without_its_zero_row_and_repeated_markers() -> None:
    table = read_table("X-001", TABLE)
    assert (table.formula, table.code, table.state) == ("Na2S", "Na2S1", "cr")
    assert table.T.tolist() == [298.15, 400.0, 500.0, 500.0, 600.0]
    assert table.dfH298 == -300_000.0
    assert table.S298 == 100.0
    assert table.H.tolist() == pytest.approx([0.0, 8332.0, 16632.0, 17632.0, 26632.0])
    assert table.labels == ((400.0, "alpha–beta"),)


def test_ions_follow_the_convention_of_the_electron_gas(sample: list[BuildRecord]) -> None:
    found = {record.name: record for record in sample}
    # ATcT prints 598.75(61) kJ/mol, without the 5/2 RT of the electron that was taken away.
    assert pytest.approx(2.5 * GAS_CONSTANT * 298.15, abs=1.0) == ELECTRON_ENTHALPY
    assert found["H3O+(g)"].dfH298 == pytest.approx(598_750.0 + ELECTRON_ENTHALPY)
    assert found["H3O+(g)"].u_dfH298 == pytest.approx(305.0)
    assert found["e-(g)"].dfH298 == 0.0
