"""Reactions: reading, balance, Hess, and properties over T."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from numpy.testing import assert_allclose
from thermo_builders import make_species, small_library

from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.errors import ReactionError
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.reaction import Reaction
from gibbsmin.thermo.species import Piece

library = Library(
    (
        *small_library().records,
        make_species("H2(g)", dfH298=0.0, S298=130.7, common_name="hydrogen"),
        make_species("O2(g)", dfH298=0.0, S298=205.2, pieces=(Piece(298.15, 6000, 29, 4, 1),)),
        make_species("Fe(cr)", dfH298=0.0, S298=27.3),
        make_species("Na(g)"),
    )
)


def read(text: str) -> Reaction:
    return Reaction.read(text, library)


@pytest.mark.parametrize(
    ("text", "written"),
    [
        ("CH4+2H2O->CO2+4H2", "CH4 + 2 H2O = CO2 + 4 H2"),
        ("methane + 2 water = carbon dioxide + 4 hydrogen", "CH4 + 2 H2O = CO2 + 4 H2"),
        ("CH4(g) + 2 H2O(l) = CO2 + 4 H2", "CH4(g) + 2 H2O(l) = CO2 + 4 H2"),
        ("0.947 Fe + 1/2 O2 = Fe0.947O", "0.947 Fe + 1/2 O2 = Fe0.947O"),
        ("2 CO = C + CO2", "2 CO = C + CO2"),
        ("H2O(l) = H2O(g)", "H2O(l) = H2O(g)"),
        ("CO + H2O + H2O = CO2 + H2 + H2O", "CO + H2O = CO2 + H2"),
        ("Na = Na+ + e-", "Na = Na+ + e-"),
    ],
)
def test_reading(text: str, written: str) -> None:
    assert str(read(text)) == written


def test_a_named_state_is_that_record_alone() -> None:
    named, bare = read("H2O(l) + CO = CO2 + H2"), read("H2O + CO = CO2 + H2")
    assert named.terms[0][1].key == ("H2O(l)",)
    assert bare.terms[0][1].key == ("H2O(g)", "H2O(l)")


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
            "Fe0.947O + H2 = Fe + H2O",
            'found "Fe0.947O + H2 = Fe + H2O", which is not balanced: '
            "Fe 0.947 on the left and 1 on the right; "
            'accepted is a balanced reaction, here "Fe0.947O + H2 = 0.947 Fe + H2O".',
        ),
        (
            "CH4 + H2O = CO + CO2 + H2",
            'found "CH4 + H2O = CO + CO2 + H2", which is not balanced: '
            "C 1 on the left and 2 on the right, H 6 on the left and 2 on the right, "
            "O 1 on the left and 3 on the right; "
            "accepted is a balanced reaction, and these species allow more than one.",
        ),
        (
            "CH4 = CO2",
            'found "CH4 = CO2", which is not balanced: '
            "H 4 on the left and 0 on the right, O 0 on the left and 2 on the right; "
            "accepted is a balanced reaction, but these species on these sides allow none.",
        ),
        (
            "CO + O2 + CO2 = C",
            'found "CO + O2 + CO2 = C", which is not balanced: '
            "C 2 on the left and 1 on the right, O 5 on the left and 0 on the right; "
            "accepted is a balanced reaction, and these species allow more than one.",
        ),
        (
            "CO + CO2 = O2",
            'found "CO + CO2 = O2", which is not balanced: '
            "C 2 on the left and 0 on the right, O 3 on the left and 2 on the right; "
            "accepted is a balanced reaction, but these species on these sides allow none.",
        ),
        (
            "Na+ = Na",
            'found "Na+ = Na", which is not balanced: charge +1 on the left and 0 on the right; '
            "accepted is a balanced reaction, but these species on these sides allow none.",
        ),
        (
            "H2 = H2",
            "found a reaction in which everything cancels out; "
            "accepted is one in which something is consumed and something formed.",
        ),
        (
            "C(s) + O2 = CO2",
            'found "C(s)", which names several records; '
            "accepted is one of C(graphite), C(diamond).",
        ),
        (
            "H2O(s) = H2O(g)",
            'found "H2O(s)", a form that the library does not hold; accepted is H2O(g) or H2O(l).',
        ),
        (
            "H2 + O3 = H2O",
            'found "O3", which names no species; accepted is a library record, '
            "the nearest are O2(g), CO2(g), CO(g).",
        ),
    ],
)
def test_refused(text: str, message: str) -> None:
    with pytest.raises((ReactionError, KeyError)) as caught:
        read(text)
    assert str(caught.value) == message


SHIFT = read("CO + H2O = CO2 + H2")
REFORMING = read("CH4 + H2O = CO + 3 H2")
fractions = st.fractions(-10, 10, max_denominator=12).map(lambda n: n or Fraction(1, 7))


@given(fractions, fractions, st.floats(200, 4000))
def test_properties_follow_hess(a: Fraction, b: Fraction, T: float) -> None:
    combined = a * REFORMING + b * SHIFT
    for name in ("enthalpy", "entropy", "gibbs_energy", "log10_K"):
        parts = [float(n) * getattr(r, name)(T) for n, r in ((a, REFORMING), (b, SHIFT))]
        scale = sum(abs(part) for part in parts) + 1.0
        assert_allclose(getattr(combined, name)(T), sum(parts), atol=1e-9 * scale)


def test_sums_read_as_reactions() -> None:
    assert str(REFORMING + SHIFT) == "CH4 + 2 H2O = 4 H2 + CO2"
    assert str(REFORMING - SHIFT) == "CH4 + CO2 = 2 CO + 2 H2"
    assert str(-SHIFT) == "CO2 + H2 = CO + H2O"
    assert str(0.5 * SHIFT) == "1/2 CO + 1/2 H2O = 1/2 CO2 + 1/2 H2"
    assert str(SHIFT * 0.1 / 0.1) == str(SHIFT)
    with pytest.raises(ReactionError, match="everything cancels out"):
        SHIFT - SHIFT
    with pytest.raises(ReactionError) as caught:
        float("nan") * SHIFT
    assert str(caught.value) == "found the factor nan; accepted is a finite number."


def test_values_by_hand() -> None:
    reaction = read("H2 + 1/2 O2 = H2O(g)")
    assert_allclose(reaction.enthalpy(298.15), -241826.0, rtol=1e-12)
    assert_allclose(reaction.entropy(298.15), 188.834 - 130.7 - 205.2 / 2, rtol=1e-12)
    G = -241826.0 - 298.15 * (188.834 - 130.7 - 102.6)
    assert_allclose(reaction.gibbs_energy(298.15), G, rtol=1e-12)
    expected = -G / (GAS_CONSTANT * 298.15 * np.log(10))
    assert_allclose(reaction.log10_K(298.15), expected, rtol=1e-12)


def test_shapes_follow_the_temperatures() -> None:
    T = np.full((2, 3), 800.0)
    assert SHIFT.log10_K(T).shape == (2, 3)
    assert SHIFT.log10_K(800.0).shape == ()
    assert_allclose(SHIFT.log10_K(T), np.full((2, 3), SHIFT.log10_K(800.0)), rtol=1e-14)
