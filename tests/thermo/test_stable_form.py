"""The stable form: which, where it changes, and by how much."""

from __future__ import annotations

import numpy as np
import pytest
from numpy.testing import assert_allclose
from thermo_builders import make_species

from gibbsmin.thermo.species import Piece, Species
from gibbsmin.thermo.stable_form import PhaseChange, Substance


def constant(name: str, H: float, S: float, low: float = 200.0, high: float = 3000.0) -> Species:
    """All forms share one Cp, so that ΔH and ΔS between them are constant."""
    return make_species(name, dfH298=H, S298=S, pieces=(Piece(low, high, 40.0),))


ICE = constant("H2O(cr)", 0.0, 40.0)
WATER = constant("H2O(l)", 6000.0, 62.0, high=900.0)
STEAM = constant("H2O(g)", 46000.0, 170.0)
MELTING = 6000.0 / 22.0
BOILING = 40000.0 / 108.0


def test_each_form_where_its_gibbs_energy_is_lowest() -> None:
    substance = Substance("H2O", (STEAM, ICE, WATER))
    T = np.array([[200.0, MELTING - 1e-6], [MELTING + 1e-6, BOILING + 1e-6]])
    assert substance.stable(T).tolist() == [[1, 1], [2, 0]]
    assert_allclose(substance.enthalpy(T[1, 1]), 46000.0 + 40.0 * (BOILING + 1e-6 - 298.15))
    assert_allclose(
        substance.gibbs_energy(T), substance.enthalpy(T) - T * substance.entropy(T), rtol=1e-12
    )


def test_changes_are_named_in_the_order_of_heating() -> None:
    melting, boiling = Substance("H2O", (STEAM, ICE, WATER)).phase_changes(200.0, 1000.0)
    assert (melting.lower, melting.upper, melting.kind) == ("H2O(cr)", "H2O(l)", "melting")
    assert (boiling.lower, boiling.upper, boiling.kind) == (
        "H2O(l)",
        "H2O(g)",
        "evaporation to the ideal gas at 1 bar",
    )
    assert_allclose([melting.temperature, boiling.temperature], [MELTING, BOILING], atol=1e-6)
    assert_allclose([melting.enthalpy, boiling.enthalpy], [6000.0, 40000.0], rtol=1e-12)
    assert abs(melting.gibbs_step) < 1e-5


@pytest.mark.parametrize(
    ("low", "high", "number"),
    [
        (298.15, 300.0, 0),
        (298.15, BOILING + 1e-5, 1),
        (298.15, BOILING - 1e-5, 0),
        (BOILING + 1e-5, 900.0, 0),
        (300.0, 250.0, 0),
        (300.0, 300.0, 0),
    ],
)
def test_only_changes_between_the_limits(low: float, high: float, number: int) -> None:
    assert len(Substance("H2O", (STEAM, ICE, WATER)).phase_changes(low, high)) == number


def test_two_changes_within_one_step_of_the_search() -> None:
    # Melting at 1000.0 K and boiling at 1000.3 K.
    solid = constant("H2O(cr)", 0.0, 40.0)
    liquid = constant("H2O(l)", 10000.0, 50.0)
    gas = constant("H2O(g)", 10000.0 + 100030.0, 150.0)
    changes = Substance("H2O", (solid, liquid, gas)).phase_changes(298.15, 2000.0)
    assert_allclose([change.temperature for change in changes], [1000.0, 1000.3], atol=1e-6)


def test_a_form_counts_only_within_its_range() -> None:
    # The liquid's table ends at 350 K, short of the boiling point.
    short = constant("H2O(l)", 6000.0, 62.0, high=350.0)
    (change,) = Substance("H2O", (STEAM, short)).phase_changes(298.15, 1000.0)
    assert_allclose(change.temperature, 350.0, atol=1e-6)
    assert_allclose(change.gibbs_step, 40000.0 - 350.0 * 108.0, rtol=1e-6)


def test_beyond_all_ranges_the_nearest_form_counts() -> None:
    substance = Substance("H2O", (STEAM, WATER))
    assert substance.stable(5000.0) == 0
    only_liquids = Substance("H2O", (WATER, constant("H2O(vit)", 0.0, 0.0, high=200.1)))
    assert only_liquids.stable(5000.0) == 0


def test_transitions_of_one_record() -> None:
    pieces = (
        Piece(298.15, 1184.0, 30.0),
        Piece(1184.0, 1665.0, 30.0, transition=900.0, label="alpha–gamma"),
        Piece(1665.0, 2000.0, 30.0, transition=837.0, label="gamma–delta"),
    )
    iron = Substance("Fe(cr)", (make_species("Fe(cr)", pieces=pieces),))
    alpha = PhaseChange("Fe(cr)", "Fe(cr)", "alpha–gamma", 1184.0, 900.0)
    assert iron.phase_changes(298.15, 1184.0) == (alpha,)
    assert iron.phase_changes(298.15, 1183.0) == ()
    assert len(iron.phase_changes(298.15, 1800.0)) == 2


def test_a_transition_counts_only_where_its_form_is_stable() -> None:
    pieces = (Piece(200.0, 500.0, 40.0), Piece(500.0, 900.0, 40.0, transition=1.0, label="x"))
    liquid = make_species("H2O(l)", dfH298=6000.0, S298=62.0, pieces=pieces)
    changes = Substance("H2O", (STEAM, liquid)).phase_changes(298.15, 1000.0)
    assert [change.kind for change in changes] == ["evaporation to the ideal gas at 1 bar"]
