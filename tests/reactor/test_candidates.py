"""Which records may appear in an outlet."""

from __future__ import annotations

import pytest

from gibbsmin.errors import InputError
from gibbsmin.reactor.candidates import Selection, choose_candidates, forms_of_feed
from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.species import Phase

LIBRARY = load_library()
FEED = [LIBRARY["CH4(g)"], LIBRARY["H2O(g)"]]


def names(selection: Selection) -> list[str]:
    return [record.name for record in choose_candidates(selection, FEED, LIBRARY)]


def test_all_takes_the_feeds_elements_but_neither_ions_nor_superseded_forms() -> None:
    chosen = choose_candidates(Selection(), FEED, LIBRARY)
    assert {"CO(g)", "C(graphite)", "H2O(l)", "C2H6(g)"} <= {record.name for record in chosen}
    assert all(set(dict(record.elements)) <= {"C", "H", "O"} for record in chosen)
    assert not any(record.charge or record.superseded for record in chosen)


def test_gases_come_first_and_the_order_is_kept() -> None:
    selection = Selection(consider=("C(graphite)", "H2(g)", "CO(g)"))
    assert names(selection) == ["H2(g)", "CO(g)", "C(graphite)"]


def test_a_record_with_a_foreign_element_cannot_form() -> None:
    assert names(Selection(consider=("CO(g)", "NH3(g)", "H2(g)"))) == ["CO(g)", "H2(g)"]


def test_left_out_records_go_and_inert_ones_stay() -> None:
    assert "CO(g)" not in names(Selection(leave_out=("CO(g)",)))
    assert names(Selection(consider=("H2(g)",), inert=("CH4(g)",))) == ["H2(g)", "CH4(g)"]


def test_an_inert_record_must_enter() -> None:
    with pytest.raises(InputError) as caught:
        names(Selection(inert=("CO2(g)",)))
    assert str(caught.value) == (
        'species.inert: found "CO2(g)", which is not in the feed; accepted is a record of the '
        "feed: CH4(g), H2O(g)."
    )


def test_nothing_left_to_form() -> None:
    with pytest.raises(InputError) as caught:
        names(Selection(consider=("NH3(g)",)))
    assert str(caught.value) == (
        "species.consider: found no record that the feed's elements could form; accepted is a "
        "list with at least one, or all."
    )


def test_where_nothing_reacts_substances_that_condense_have_all_their_forms() -> None:
    forms = forms_of_feed(("H2O",), FEED, LIBRARY)
    assert {record.name for record in forms} >= {"CH4(g)", "H2O(g)", "H2O(l)"}
    assert {record.formula for record in forms} == {"CH4", "H2O"}
    assert forms[0].phase is Phase.GAS
    with pytest.raises(InputError) as caught:
        forms_of_feed(("NH3",), FEED, LIBRARY)
    assert str(caught.value) == (
        'condense: found "NH3", which is not in the feed; accepted is a substance of the feed: '
        "CH4, H2O."
    )
