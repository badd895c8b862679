"""Independent reactions, their extents, and where each element went."""

from __future__ import annotations

import numpy as np
import pytest

from gibbsmin.errors import InputError
from gibbsmin.reactor.balance import element_counts, elements_of
from gibbsmin.reactor.extents import (
    element_selectivities,
    element_shares,
    independent_reactions,
    keyed_extents,
    named_extents,
)
from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.species import Species

REFORMER = "CH4 H2O CO CO2 H2"
FEED = np.array([1.0, 3.0, 0.0, 0.1, 0.2])
OUTLET = np.array([0.3, 2.1, 0.5, 0.3, 2.5])  # ξ of reforming 0.7, of shift 0.2


def records_of(names: str) -> list[Species]:
    library = load_library()
    return [library.resolve(name) for name in names.split()]


@pytest.mark.parametrize(
    ("names", "fed", "expected"),
    [
        (
            REFORMER,
            "CH4 H2O",
            ["CH4(g) + H2O(g) = CO(g) + 3 H2(g)", "CO(g) + H2O(g) = CO2(g) + H2(g)"],
        ),
        ("SO2 O2 SO3 N2", "SO2 O2 N2", ["2 SO2(g) + O2(g) = 2 SO3(g)"]),
        ("N2 H2 NH3", "N2 H2", ["N2(g) + 3 H2(g) = 2 NH3(g)"]),
        ("CaCO3(calcite) CaO(cr) CO2", "CaCO3(calcite)", ["CaCO3(calcite) = CaO(cr) + CO2(g)"]),
        (
            "Fe0.947O(cr) Fe(alpha) CO CO2",
            "Fe0.947O(cr) CO",
            ["Fe0.947O(cr) + CO(g) = 0.947 Fe(alpha) + CO2(g)"],
        ),
        (
            "CH3OH CO H2 CH3OH(l)",
            "CH3OH CO H2",
            ["CH3OH(g) = CO(g) + 2 H2(g)", "CH3OH(g) = CH3OH(l)"],
        ),
        ("S2 S8 S(l) S(g)", "S2 S8", ["S8(g) = 4 S2(g)", "S2(g) = 2 S(l)", "S(l) = S(g)"]),
    ],
)
def test_reactions_are_those_of_the_trade(names: str, fed: str, expected: list[str]) -> None:
    fed_names = {record.name for record in records_of(fed)}
    found = [str(reaction) for reaction in independent_reactions(records_of(names), fed_names)]
    assert found == expected


@pytest.mark.parametrize(
    "names", [REFORMER, "H2S O2 N2 SO2 S2 S8 H2O H2 COS", "Fe3C(cr) Fe(alpha) CO CO2 CH4 H2 H2O"]
)
def test_reactions_balance_and_span_what_the_elements_leave_open(names: str) -> None:
    records = records_of(names)
    order = [record.name for record in records]
    counts = element_counts(records, elements_of(records))
    reactions = independent_reactions(records)
    nu = np.array(
        [[float(reaction.terms.get(name, 0)) for name in order] for reaction in reactions]
    )
    assert counts @ nu.T == pytest.approx(0.0, abs=1e-12)
    assert np.linalg.matrix_rank(nu) == len(records) - np.linalg.matrix_rank(counts)
    keys = [reaction.key for reaction in reactions]
    assert all(sum(key in other.terms for other in reactions) == 1 for key in keys)


def test_keyed_extents_are_those_that_happened() -> None:
    records = records_of(REFORMER)
    reactions = independent_reactions(records, {"CH4(g)", "H2O(g)"})
    names = [record.name for record in records]
    found = keyed_extents(reactions, names, np.array([OUTLET - FEED, 2 * (OUTLET - FEED)]))
    assert found == pytest.approx(np.array([[0.7, 0.2], [1.4, 0.4]]))


def test_what_condenses_counts_to_the_reaction_that_made_it() -> None:
    records = records_of("CO H2 CH3OH CH3OH(l)")
    reactions = independent_reactions(records, {"CO(g)", "H2(g)"})
    names = [record.name for record in records]
    found = keyed_extents(reactions, names, np.array([-1.0, -2.0, 0.3, 0.7]))
    assert dict(zip(map(str, reactions), found.tolist(), strict=True)) == pytest.approx(
        {"CO(g) + 2 H2(g) = CH3OH(g)": 1.0, "CH3OH(g) = CH3OH(l)": 0.7}
    )


def test_named_extents_tell_what_they_leave_over() -> None:
    dry = np.array([-1.0, 0.0, 2.0, -1.0, 2.0])
    shift = np.array([0.0, -1.0, -1.0, 1.0, 1.0])
    extents, rest = named_extents(np.array([dry, shift]), OUTLET - FEED)
    assert extents == pytest.approx([0.7, 0.9])
    assert rest == pytest.approx(np.zeros(5), abs=1e-12)
    _, rest = named_extents(shift[np.newaxis], OUTLET - FEED)
    assert np.abs(rest).max() > 0.1


def test_dependent_named_reactions_are_refused() -> None:
    shift = np.array([0.0, -1.0, -1.0, 1.0, 1.0])
    with pytest.raises(InputError) as raised:
        named_extents(np.array([shift, -2 * shift]), OUTLET - FEED)
    assert str(raised.value) == (
        "found reactions that depend on each other; accepted are independent reactions."
    )


def test_every_element_fed_is_found_in_the_outlet() -> None:
    records = records_of(REFORMER)
    counts = element_counts(records, ("C", "H", "N", "O"))
    shares = element_shares(counts, FEED, OUTLET)
    assert shares[0] == pytest.approx(np.array([0.3, 0.0, 0.5, 0.3, 0.0]) / 1.1)
    assert shares[[0, 1, 3]].sum(axis=1) == pytest.approx(1.0)
    assert np.isnan(shares[2]).all()


def test_selectivity_shares_out_what_was_converted() -> None:
    counts = element_counts(records_of(REFORMER), ("C", "N"))
    found = element_selectivities(counts, FEED, OUTLET)
    assert found[0] == pytest.approx([0.0, 0.0, 0.5 / 0.7, 0.2 / 0.7, 0.0])
    assert np.isnan(found[1]).all()
    assert np.isnan(element_selectivities(counts, FEED, FEED)).all()
