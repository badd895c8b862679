"""The text of a reaction: coefficients, signs between species, ions, and what is refused."""

from __future__ import annotations

from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from gibbsmin.errors import ReactionError
from gibbsmin.thermo.equation import read_equation, written_equation, written_number

ACCEPTED = 'accepted is a reaction such as "CH4 + 2 H2O = CO2 + 4 H2".'
REFORMING = ((-1, "CH4"), (-2, "H2O"), (1, "CO2"), (4, "H2"))


@pytest.mark.parametrize(
    ("text", "terms"),
    [
        ("CH4 + 2 H2O = CO2 + 4 H2", REFORMING),
        ("CH4+2H2O=CO2+4H2", REFORMING),
        ("CH4+ 2 H2O -> CO2 +4 H2", REFORMING),
        ("CH4 + 2*H2O → CO2 + 4·H2", REFORMING),
        ("CH₄ + 2 H₂O ⇌ CO₂ + 4 H₂", REFORMING),
        ("CH4 + 2 H2O <=> CO2 + 4 H2", REFORMING),
        (
            "1/2 N2 + 1.5H2 = NH3(g)",
            ((Fraction(-1, 2), "N2"), (Fraction(-3, 2), "H2"), (1, "NH3(g)")),
        ),
        ("½ O2 = O", ((Fraction(-1, 2), "O2"), (1, "O"))),
        (".5 O2 = O", ((Fraction(-1, 2), "O2"), (1, "O"))),
        ("Na+ + Cl- = NaCl", ((-1, "Na+"), (-1, "Cl-"), (1, "NaCl"))),
        ("Na++Cl-=NaCl", ((-1, "Na+"), (-1, "Cl-"), (1, "NaCl"))),
        ("Na = Na+ + e-", ((-1, "Na"), (1, "Na+"), (1, "e-"))),
        ("Mg++(g) + 2e- -> Mg", ((-1, "Mg++(g)"), (-2, "e-"), (1, "Mg"))),
        ("NH3+(NH4)2SO4 = X", ((-1, "NH3"), (-1, "(NH4)2SO4"), (1, "X"))),
        ("2 1,3-C4H6 + 2n-C4H10 = X", ((-2, "1,3-C4H6"), (-2, "n-C4H10"), (1, "X"))),
        ("CaSO4*2H2O = CaSO4 + 2 H2O", ((-1, "CaSO4·2H2O"), (1, "CaSO4"), (2, "H2O"))),
        ("0.947 Fe + 1/2 O2 = wustite", (
            (Fraction(-947, 1000), "Fe"), (Fraction(-1, 2), "O2"), (1, "wustite"),
        )),
        ("carbon dioxide = x", ((-1, "carbon dioxide"), (1, "x"))),
    ],
)  # fmt: skip
def test_read(text: str, terms: tuple[tuple[Fraction, str], ...]) -> None:
    assert read_equation(text) == terms


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("CH4 + O2", f'found "CH4 + O2", which has no sign between two sides; {ACCEPTED}'),
        ("", f'found "", which has no sign between two sides; {ACCEPTED}'),
        ("A = B = C", f'found "A = B = C", which has more than one sign between two sides; '
         f"{ACCEPTED}"),
        ("CH4 = ", f'found "CH4 = ", where a species is missing; {ACCEPTED}'),
        ("CH4 + + O2 = X", f'found "CH4 + + O2 = X", where a species is missing; {ACCEPTED}'),
        ("CH4 + = CO", f'found "CH4 + = CO", where a species is missing; {ACCEPTED}'),
        ("0,5 O2 = O", 'found "0,5 O2", which has a decimal comma; '
         'accepted is a point, as in "0.5 O2".'),
        ("0 O2 = O", 'found "0 O2", whose coefficient has a zero; '
         "accepted is a number above zero."),
        ("1/0 O2 = O", 'found "1/0 O2", whose coefficient has a zero; '
         "accepted is a number above zero."),
    ],
)  # fmt: skip
def test_refused(text: str, message: str) -> None:
    with pytest.raises(ReactionError) as caught:
        read_equation(text)
    assert str(caught.value) == message


@pytest.mark.parametrize(
    ("number", "text"),
    [
        (Fraction(2), "2"),
        (Fraction(1, 2), "1/2"),
        (Fraction(2, 3), "2/3"),
        (Fraction(947, 1000), "0.947"),
        (Fraction(1, 13), "1/13"),
        (Fraction(-3, 2), "-3/2"),
    ],
)
def test_written_number(number: Fraction, text: str) -> None:
    assert written_number(number) == text


numbers = st.fractions(min_value="1/100", max_value=100, max_denominator=200)
sides = st.lists(
    st.tuples(
        numbers, st.sampled_from(["CH4", "Na+", "e-", "n-C4H10", "(NH4)2SO4", "C(graphite)"])
    ),
    min_size=1,
    max_size=4,
)


@given(sides, sides)
def test_what_is_written_reads_back(
    left: list[tuple[Fraction, str]], right: list[tuple[Fraction, str]]
) -> None:
    terms = (*((-number, name) for number, name in left), *right)
    assert read_equation(written_equation(terms)) == terms
