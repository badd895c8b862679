"""What a stage conserves: elements, charge, substances, what named reactions leave alone."""

from __future__ import annotations

import numpy as np
import pytest

from gibbsmin.errors import BalanceError
from gibbsmin.reactor.balance import (
    element_balance,
    reaction_balance,
    require_every_element_held,
    substance_balance,
)
from gibbsmin.reactor.holds import fixed_conversion, frozen, held_element_share, held_gas_fraction
from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.species import Species

LIBRARY = load_library()


def records(*names: str) -> list[Species]:
    return [LIBRARY[name] for name in names]


def test_elements_of_feed_and_candidates_are_counted() -> None:
    balance = element_balance(records("CO(g)", "H2(g)", "H2O(g)"), records("CH4(g)", "H2O(g)"))
    assert balance.rows == balance.elements == ("C", "H", "O")
    assert balance.matrix.tolist() == [[1, 0, 0], [0, 2, 2], [1, 0, 1]]
    assert balance.supplies(np.array([1.0, 3.0])).tolist() == [1.0, 10.0, 3.0]
    assert balance.atoms.tolist() == [2, 2, 3]


def test_many_feeds_at_once_equal_each_alone() -> None:
    balance = element_balance(records("CO(g)", "H2(g)"), records("CH4(g)", "H2O(g)"))
    feeds = np.array([[1.0, 3.0], [0.5, 0.0]])
    alone = [balance.supplies(feed) for feed in feeds]
    np.testing.assert_array_equal(balance.supplies(feeds), alone)


def test_dual_direction_reaches_electrons_and_ions() -> None:
    candidates = records("Ar(g)", "Ar+(g)", "e-(g)", "H2(g)", "H+(g)", "H-(g)")
    balance = element_balance(candidates, records("Ar(g)", "H2(g)"))
    assert balance.rows[-1] == "charge"
    assert (balance.direction @ balance.matrix >= 1.0).all()


def test_substances_may_only_change_their_form() -> None:
    candidates = records("H2O(g)", "H2O(l)", "N2(g)")
    balance = substance_balance(candidates, records("N2(g)", "H2O(g)"))
    assert balance.rows == ("substance N2", "substance H2O")
    assert balance.matrix.tolist() == [[0, 0, 1], [1, 1, 0]]
    assert balance.elements == ()


def test_what_a_named_reaction_leaves_alone() -> None:
    candidates = records("CO(g)", "H2O(g)", "CO2(g)", "H2(g)", "CH4(g)")
    shift = np.array([[-1.0, -1.0, 1.0, 1.0, 0.0]])
    balance = reaction_balance(candidates, candidates, shift)
    np.testing.assert_allclose(balance.matrix @ shift.T, 0.0, atol=1e-14)
    assert np.linalg.matrix_rank(balance.matrix) == 4
    np.testing.assert_allclose(balance.direction @ balance.matrix, balance.atoms, rtol=1e-12)


def test_holds_add_rows_without_a_direction() -> None:
    candidates = records("CH4(g)", "H2O(g)", "CO(g)", "H2(g)", "C(graphite)")
    feed = records("CH4(g)", "H2O(g)")
    balance = element_balance(candidates, feed).with_holds(
        candidates,
        feed,
        [
            frozen("H2O(g)"),
            fixed_conversion("CH4(g)", 0.25),
            held_gas_fraction("CH4(g)", 0.1, candidates, dry=True),
            held_element_share(LIBRARY["C(graphite)"], 0.02, "C", feed),
        ],
    )
    assert balance.direction[3:].tolist() == [0, 0, 0, 0]
    assert balance.matrix[3:].tolist() == [
        [0, 1, 0, 0, 0],
        [1, 0, 0, 0, 0],
        [0.9, 0, -0.1, -0.1, 0],
        [0, 0, 0, 0, 1],
    ]
    assert balance.supplies(np.array([2.0, 5.0]))[3:].tolist() == [5.0, 1.5, 0.0, 0.04]


def test_an_element_without_a_candidate_is_named() -> None:
    with pytest.raises(BalanceError) as caught:
        require_every_element_held(records("CO2(g)"), records("CO2(g)", "N2(g)"), LIBRARY)
    assert str(caught.value) == (
        'species.consider: found the element N in the feed (from "N2(g)"), which no candidate can '
        'hold; accepted is a list with a record of N, for instance "N2(g)" or "N(g)".'
    )
