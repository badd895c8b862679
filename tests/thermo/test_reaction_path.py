"""The path by way of 298.15 K: its parts add up, its phase changes are named."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from numpy.testing import assert_allclose
from thermo_builders import make_species

from gibbsmin.errors import InputError
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.reaction import Reaction
from gibbsmin.thermo.reaction_path import study_reaction
from gibbsmin.thermo.species import Piece

IRON = (Piece(298.15, 1184.0, 30.0), Piece(1184.0, 1800.0, 34.0, 0, 0, 0, 0, 900.0, "alpha–gamma"))
library = Library(
    (
        make_species("H2(g)", dfH298=0.0, S298=130.7, pieces=(Piece(298.15, 3000, 29.0),)),
        make_species("H2O(g)"),
        make_species("H2O(l)", dfH298=-285830.0, S298=69.95, pieces=(Piece(273.15, 600.0, 75.3),)),
        make_species("Fe(cr)", dfH298=0.0, S298=27.3, pieces=IRON),
        make_species(
            "FeO(cr)", dfH298=-272000.0, S298=60.8, status="superseded", remark="use Fe0.947O(cr)"
        ),
    )
)
REACTION = Reaction.read("FeO + H2 = Fe + H2O", library)
NAMED = Reaction.read("FeO + H2 = Fe + H2O(l)", library)


@given(st.lists(st.floats(150, 4000), min_size=1, max_size=5))
def test_the_parts_add_up(temperatures: list[float]) -> None:
    for row in study_reaction(REACTION, temperatures).rows:
        parts = (row.reactants_to_reference, row.reaction_at_reference, row.products_from_reference)
        assert_allclose(sum(part.enthalpy for part in parts), row.enthalpy, atol=1e-6)
        assert_allclose(sum(part.entropy for part in parts), row.entropy, atol=1e-9)
        assert_allclose(row.gibbs_energy, row.enthalpy - row.temperature * row.entropy, atol=1e-6)
        assert_allclose(row.enthalpy, REACTION.enthalpy(row.temperature), atol=1e-9)


def test_phase_changes_on_the_way_are_those_between_298_K_and_T() -> None:
    rows = study_reaction(REACTION, [298.15, 350.0, 500.0, 1184.0, 1500.0]).rows
    kinds = [[item.change.kind for item in row.phase_changes] for row in rows]
    assert kinds == [
        [],
        [],
        ["evaporation to the ideal gas at 1 bar"],
        ["alpha–gamma", "evaporation to the ideal gas at 1 bar"],
        ["alpha–gamma", "evaporation to the ideal gas at 1 bar"],
    ]
    assert [dict(row.forms)["H2O"] for row in rows] == ["H2O(l)", "H2O(l)", *["H2O(g)"] * 3]


def test_a_phase_change_takes_up_what_the_path_gains() -> None:
    (item,) = study_reaction(REACTION, 400.0).rows[0].phase_changes
    T = item.change.temperature
    below, above = study_reaction(REACTION, [T - 1e-6, T + 1e-6]).rows
    gained = above.products_from_reference.enthalpy - below.products_from_reference.enthalpy
    assert_allclose(gained, item.change.enthalpy, atol=1e-3)
    assert_allclose(above.gibbs_energy, below.gibbs_energy, atol=1e-3)


def test_a_named_form_stays() -> None:
    row = study_reaction(NAMED, 500.0).rows[0]
    assert dict(row.forms)["H2O(l)"] == "H2O(l)"
    assert row.phase_changes == ()


def test_reference_values_are_the_tables() -> None:
    reference = study_reaction(REACTION, 1000.0).reference
    assert_allclose(reference.enthalpy, -285830.0 + 272000.0)
    assert_allclose(reference.entropy, 69.95 + 27.3 - 60.8 - 130.7)
    assert_allclose(reference.gibbs_energy, reference.enthalpy - 298.15 * reference.entropy)
    assert_allclose(reference.log10_K, REACTION.log10_K(298.15))
    assert [record.name for _, record in reference.records] == [
        "FeO(cr)",
        "H2(g)",
        "Fe(cr)",
        "H2O(l)",
    ]


def test_warnings_name_range_and_superseded_records() -> None:
    assert study_reaction(NAMED, [500.0, 2000.0, 2500.0]).warnings == (
        "Fe(cr) is tabulated from 298.15 K to 1800 K; "
        "at 2000, 2500 K its heat capacity is continued as a constant.",
        "H2O(l) is tabulated from 273.15 K to 600 K; "
        "at 2000, 2500 K its heat capacity is continued as a constant.",
        "FeO(cr) is superseded (use Fe0.947O(cr)).",
    )
    many = study_reaction(Reaction.read("H2O(l) = H2O(g)", library), np.linspace(700, 800, 5))
    assert many.warnings == (
        "H2O(l) is tabulated from 273.15 K to 600 K; "
        "at 700, 725, 750, … K its heat capacity is continued as a constant.",
    )


def test_a_superseded_form_is_left_out_but_not_in_silence() -> None:
    melt = make_species("FeO(l)", dfH298=-250000.0, S298=75.0)
    with_melt = Library((*library.records, melt))
    study = study_reaction(Reaction.read("FeO + H2 = Fe + H2O(g)", with_melt), 900.0)
    assert dict(study.rows[0].forms)["FeO"] == "FeO(l)"
    assert study.warnings == (
        "FeO(cr) would be the stable form of FeO but is superseded (use Fe0.947O(cr)); "
        "to use it all the same, name it.",
    )
    named = study_reaction(Reaction.read("FeO(l) + H2 = Fe + H2O(g)", with_melt), 900.0)
    assert named.warnings == ()


def test_a_form_whose_range_ends_early_is_named() -> None:
    short = make_species(
        "H2O(l)", dfH298=-285830.0, S298=69.95, pieces=(Piece(273.15, 350.0, 75.3),)
    )
    early = Library((library["H2O(g)"], short, library["H2(g)"], make_species("O2(g)")))
    study = study_reaction(Reaction.read("2 H2 + O2 = 2 H2O", early), 500.0)
    assert study.warnings == (
        "H2O(l) gives way to H2O(g) at 350 K because its range ends there, "
        "2.57 kJ/mol away from the balance of the two.",
    )


def test_absolute_zero_is_refused() -> None:
    with pytest.raises(InputError, match="accepted is a temperature above absolute zero"):
        study_reaction(REACTION, [300.0, 0.0])
