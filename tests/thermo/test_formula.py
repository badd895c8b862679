"""Formulas: what they count, and what is refused."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from gibbsmin.errors import FormulaError
from gibbsmin.thermo.formula import parse_formula

ACCEPTED = "accepted is a formula such as CH4, Ca(OH)2, CaSO4·2H2O or H3O+."


@pytest.mark.parametrize(
    ("text", "elements", "charge"),
    [
        ("CO2", {"C": 1, "O": 2}, 0),
        ("CO", {"C": 1, "O": 1}, 0),
        ("Co", {"Co": 1}, 0),
        ("CO₂", {"C": 1, "O": 2}, 0),
        ("Ca(OH)2", {"Ca": 1, "O": 2, "H": 2}, 0),
        ("CH3COOH", {"C": 2, "H": 4, "O": 2}, 0),
        ("Al2(SO4)3", {"Al": 2, "S": 3, "O": 12}, 0),
        ("K4[Fe(CN)6]", {"K": 4, "Fe": 1, "C": 6, "N": 6}, 0),
        ("((CH3)3Si)2O", {"C": 6, "H": 18, "Si": 2, "O": 1}, 0),
        ("CaSO4·2H2O", {"Ca": 1, "S": 1, "O": 6, "H": 4}, 0),
        ("CaSO4*0.5H2O", {"Ca": 1, "S": 1, "O": 4.5, "H": 1}, 0),
        ("3CaO·Al2O3·6H2O", {"Ca": 3, "Al": 2, "O": 12, "H": 12}, 0),
        ("Fe0.947O", {"Fe": 0.947, "O": 1}, 0),
        ("n-C4H10", {"C": 4, "H": 10}, 0),
        ("cis-CH3CHCHCH3", {"C": 4, "H": 8}, 0),
        ("trans-2-C4H8", {"C": 4, "H": 8}, 0),
        ("1,3-C4H6", {"C": 4, "H": 6}, 0),
        ("o-C6H4(CH3)2", {"C": 8, "H": 10}, 0),
        ("n-(CH3)2", {"C": 2, "H": 6}, 0),
        ("D2O", {"D": 2, "O": 1}, 0),
        ("H3O+", {"H": 3, "O": 1}, 1),
        ("O2-", {"O": 2}, -1),
        ("Mg++", {"Mg": 1}, 2),
        ("SO4--", {"S": 1, "O": 4}, -2),
        ("e-", {}, -1),
        (" NH3 ", {"N": 1, "H": 3}, 0),
    ],
)
def test_counts(text: str, elements: dict[str, float], charge: float) -> None:
    formula = parse_formula(text)
    assert dict(formula.elements) == elements
    assert formula.charge == charge
    assert formula.atoms == sum(elements.values())
    assert list(formula.elements) == sorted(formula.elements)


@pytest.mark.parametrize(
    ("text", "found"),
    [
        ("", "found an empty formula"),
        ("CxH4", 'found "CxH4", where "Cx" is no element at position 1'),
        ("co2", 'found "co2", where "c" is out of place at position 1'),
        ("2H2O", 'found "2H2O", where "2" is out of place at position 1'),
        ("Ca(OH2", 'found "Ca(OH2", where "(" is not closed at position 3'),
        ("Ca(OH]2", 'found "Ca(OH]2", where "(" is not closed at position 3'),
        ("CaOH)2", 'found "CaOH)2", where ")" is out of place at position 5'),
        ("Ca()2", 'found "Ca()2", where an element symbol is missing at position 4'),
        ("CaSO4·", 'found "CaSO4·", where an element symbol is missing at the end'),
        ("C0H4", 'found "C0H4", where the count "0" is zero at position 2'),
        ("C H4", 'found "C H4", where " " is out of place at position 2'),
        ("Na+Cl", 'found "Na+Cl", where "+" is out of place at position 3'),
        ("H2O(g)", 'found "H2O(g)", where "g" is out of place at position 5'),
        ("+", 'found "+", where "+" is out of place at position 1'),
        ("n-", 'found "n-", where "n" is out of place at position 1'),
    ],
)
def test_refused(text: str, found: str) -> None:
    with pytest.raises(FormulaError) as caught:
        parse_formula(text)
    assert str(caught.value) == f"{found}; {ACCEPTED}"


groups = st.lists(
    st.tuples(st.sampled_from(["H", "C", "Ca", "O", "D", "Cl", "Fe"]), st.integers(1, 20)),
    min_size=1,
    max_size=5,
)


@given(groups, groups, st.integers(1, 9), st.integers(0, 3))
def test_a_written_formula_reads_back(
    outer: list[tuple[str, int]], inner: list[tuple[str, int]], factor: int, charge: int
) -> None:
    def written(pairs: list[tuple[str, int]]) -> str:
        return "".join(f"{symbol}{count}" for symbol, count in pairs)

    expected: dict[str, int] = {}
    for symbol, count in outer:
        expected[symbol] = expected.get(symbol, 0) + count
    for symbol, count in inner:
        expected[symbol] = expected.get(symbol, 0) + factor * count
    formula = parse_formula(f"{written(outer)}({written(inner)}){factor}{'+' * charge}")
    assert dict(formula.elements) == expected
    assert formula.charge == charge
