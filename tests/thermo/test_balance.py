"""Element balance: differences, null spaces, simplest coefficients."""

from __future__ import annotations

from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st
from thermo_builders import make_species

from gibbsmin.thermo.balance import balances, composition, imbalance, simplest


def compositions(*names: str) -> list[dict[str, Fraction]]:
    return [composition(make_species(name)) for name in names]


def test_composition_is_exact_and_counts_charge() -> None:
    assert composition(make_species("Fe0.947O(cr)")) == {"Fe": Fraction(947, 1000), "O": 1}
    assert composition(make_species("SO4--(g)")) == {"S": 1, "O": 4, "charge": -2}
    assert composition(make_species("e-(g)")) == {"charge": -1}


def test_imbalance() -> None:
    methane, water, dioxide = compositions("CH4(g)", "H2O(g)", "CO2(g)")
    terms = [(Fraction(-1), methane), (Fraction(-1), water), (Fraction(1), dioxide)]
    assert imbalance(terms) == {
        "H": (Fraction(6), Fraction(0)),
        "O": (Fraction(1), Fraction(2)),
    }


@pytest.mark.parametrize(
    ("names", "count"),
    [
        (["CH4(g)", "H2O(g)", "CO2(g)", "H2(g)"], 1),
        (["CH4(g)", "H2O(g)", "CO2(g)", "CO(g)", "H2(g)"], 2),
        (["CH4(g)", "CO2(g)"], 0),
        (["Na(g)", "Na+(g)", "e-(g)"], 1),
    ],
)
def test_number_of_balances(names: list[str], count: int) -> None:
    assert len(balances(compositions(*names))) == count


counts = st.dictionaries(
    st.sampled_from("CHON"), st.fractions(0, 9, max_denominator=10), max_size=4
)


@given(st.lists(counts, min_size=1, max_size=6))
def test_every_balance_balances(species: list[dict[str, Fraction]]) -> None:
    for vector in balances(species):
        assert imbalance(list(zip(vector, species, strict=True))) == {}
        assert any(vector)


@pytest.mark.parametrize(
    ("given_numbers", "expected"),
    [
        ([Fraction(-1, 4), Fraction(-1, 2), Fraction(1, 4), Fraction(1)], [-1, -2, 1, 4]),
        ([Fraction(-6), Fraction(4)], [-3, 2]),
        # Wüstite: 1000, 1000, 947, 1000 would be worse to read.
        (
            [Fraction(-1000), Fraction(-1000), Fraction(947), Fraction(1000)],
            [-1, -1, Fraction(947, 1000), 1],
        ),
    ],
)
def test_simplest(given_numbers: list[Fraction], expected: list[Fraction]) -> None:
    assert simplest(given_numbers) == expected
