"""Finding records: what a text names, what is near it, and what each refusal says."""

from __future__ import annotations

import pytest
from thermo_builders import make_species, small_library

from gibbsmin.errors import InputError, UnknownSpeciesError
from gibbsmin.thermo.library import Library

library = small_library()


@pytest.mark.parametrize(
    ("text", "name"),
    [
        ("CO2(g)", "CO2(g)"),
        ("CO₂", "CO2(g)"),
        ("H2O", "H2O(g)"),
        ("H2O(l)", "H2O(l)"),
        ("C", "C(g)"),
        ("NH4Cl", "NH4Cl(cr)"),
        ("NH4Cl(s)", "NH4Cl(cr)"),
        ("CaSO4*2H2O", "CaSO4·2H2O(cr)"),
        ("FeO", "FeO(l)"),
        ("FeO(cr)", "FeO(cr)"),
        ("FeO(s)", "FeO(cr)"),
        ("Methane", "CH4(g)"),
        ("sulfuric  acid", "H2SO4(l)"),
        ("74-82-8", "CH4(g)"),
        ("e-", "e-(g)"),
        ("Na+", "Na+(g)"),
    ],
)
def test_resolve(text: str, name: str) -> None:
    assert library.resolve(text).name == name


@pytest.mark.parametrize(
    ("text", "message"),
    [
        (
            "CH5",
            'found "CH5", which names no species; accepted is a library record, '
            "the nearest are CH4(g), CH3(g), CH2(g).",
        ),
        (
            "methan",
            'found "methan", which names no species; accepted is a library record, '
            "the nearest are CH4(g), CH3(g), C2H5OH(g).",
        ),
        (
            "C2H6O",
            'found "C2H6O", which names no species; accepted is a library record, '
            "the nearest are C2H5OH(g), CH3OCH3(g), CH4(g).",
        ),
        (
            "co2",
            'found "co2", which names no species; accepted is a library record, '
            "the nearest are CO2(g), CH2(g), CO(g).",
        ),
        (
            "CO2(l)",
            'found "CO2(l)", a form that the library does not hold; accepted is CO2(g).',
        ),
        (
            "CO2(s)",
            'found "CO2(s)", a form that the library does not hold; accepted is CO2(g).',
        ),
        (
            "SiO2",
            'found "SiO2", which names several records; '
            "accepted is one of SiO2(quartz), SiO2(cristobalite), SiO2(l).",
        ),
        (
            "SiO2(s)",
            'found "SiO2(s)", which names several records; '
            "accepted is one of SiO2(quartz), SiO2(cristobalite).",
        ),
        (
            "water",
            'found "water", which names several records; accepted is one of H2O(g), H2O(l).',
        ),
        ("  ", "found an empty name; accepted is a library record such as CO2(g)."),
    ],
)
def test_refused(text: str, message: str) -> None:
    with pytest.raises(UnknownSpeciesError) as caught:
        library.resolve(text)
    assert str(caught.value) == message


@pytest.mark.parametrize(
    ("text", "names"),
    [
        ("H2O", ["H2O(g)", "H2O(l)"]),
        ("water", ["H2O(g)", "H2O(l)"]),
        ("64-17-5", ["C2H5OH(g)", "C2H5OH(l)"]),
        ("C", ["C(graphite)", "C(diamond)", "C(g)"]),
        ("C(graphite)", ["C(graphite)"]),
        ("FeO", ["FeO(l)"]),
        ("NH4Cl(s)", ["NH4Cl(cr)"]),
    ],
)
def test_substance(text: str, names: list[str]) -> None:
    assert [record.name for record in library.substance(text)] == names


def test_substance_of_several_formulas_is_refused() -> None:
    twins = Library(
        (make_species("C2H6(g)", common_name="x"), make_species("C3H8(g)", common_name="x"))
    )
    with pytest.raises(UnknownSpeciesError) as caught:
        twins.substance("x")
    assert str(caught.value) == (
        'found "x", which names several substances; accepted is one of C2H6, C3H8.'
    )
    with pytest.raises(UnknownSpeciesError, match='found "y", which names no species'):
        twins.substance("y")


@pytest.mark.parametrize(
    ("conditions", "names"),
    [
        ({"text": "CO2"}, ["CO2(g)"]),
        ({"text": "H2O(l)"}, ["H2O(l)"]),
        ({"text": "C2H6O"}, ["C2H5OH(g)", "C2H5OH(l)", "CH3OCH3(g)"]),
        ({"text": "OH2"}, ["H2O(g)", "H2O(l)"]),
        ({"text": "FeO"}, ["FeO(cr)", "FeO(l)"]),
        ({"text": "74-82-8"}, ["CH4(g)"]),
        ({"text": "carbon"}, ["C(g)"]),
        ({"text": "carbon di"}, ["CO2(g)"]),
        ({"text": "SiO2(s)"}, ["SiO2(quartz)", "SiO2(cristobalite)"]),
        ({"name": "oxide"}, ["CO(g)", "CO2(g)"]),
        ({"cas": "64-17-5"}, ["C2H5OH(g)", "C2H5OH(l)"]),
        ({"elements": ["H", "O"]}, ["H2O(g)", "H2O(l)", "e-(g)"]),
        (
            {"name": "meth", "elements": ["C", "H", "O"]},
            ["CH4(g)", "CH3(g)", "CH2(g)", "CH(g)", "CH3OCH3(g)"],
        ),
        ({"text": "nothing of the kind"}, []),
    ],
)
def test_find(conditions: dict[str, str], names: list[str]) -> None:
    found = [record.name for record in library.find(**conditions)]
    assert found == names


def test_candidates_of_elements() -> None:
    assert [r.name for r in library.of_elements(["Fe", "O"])] == ["FeO(l)", "Fe0.947O(cr)"]


def test_candidates_with_ions() -> None:
    assert [r.name for r in library.of_elements(["Na"])] == []
    assert library.of_elements([]) == ()
    assert [r.name for r in library.of_elements(["Na"], ions=True)] == ["Na+(g)", "e-(g)"]


def test_unknown_element_is_refused() -> None:
    with pytest.raises(InputError) as caught:
        library.of_elements(["C", "Xx"])
    assert str(caught.value) == (
        'found "Xx", which is no element; accepted are element symbols such as C, H, O.'
    )


def test_exact_name() -> None:
    assert library["CaSO4*2H2O(cr)"].name == "CaSO4·2H2O(cr)"
    with pytest.raises(UnknownSpeciesError) as caught:
        library["H2O"]
    assert str(caught.value) == (
        'found "H2O", which leaves its form open; accepted is H2O(g) or H2O(l).'
    )


def test_sources() -> None:
    assert library.source("tables").citation == "A. Author, Tables, 1998."
    with pytest.raises(InputError) as caught:
        library.source("other")
    assert str(caught.value) == (
        'found the source key "other", which the library does not list; '
        "accepted is a key of its table of sources."
    )


def test_a_name_stands_once() -> None:
    with pytest.raises(InputError) as caught:
        Library((make_species(), make_species()))
    assert str(caught.value) == ('found the name "H2O(g)" twice; accepted is one record of a name.')
