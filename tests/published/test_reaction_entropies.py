"""Reaction entropies by path against the differences of tabulated entropies at T.

The path takes the reactants from T to 298.15 K, lets them react there and takes the products to
T, with every phase change on the way.
"""

import pytest
from published_values import main_table, rows

from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.reaction import Reaction
from gibbsmin.thermo.reaction_path import study_reaction

TOLERANCE = 0.02  # J/K per mole of substance: the tables' rounding and the fit of Cp
CASES = [
    pytest.param(row["reaction"], float(T), id=f"{row['reaction']} at {T.strip()} K")
    for row in [*rows("trade_reactions"), *rows("reactions_through_phase_changes")]
    if "CH3OH" not in row["reaction"]
    for T in row["temperatures_K"].split(";")
]


@pytest.mark.parametrize(("text", "T"), CASES)
def test_entropy_by_path_is_the_difference_of_tabulated_entropies(text: str, T: float) -> None:
    reaction = Reaction.read(text, load_library())
    (row,) = study_reaction(reaction, T).rows
    by_path = (
        row.reactants_to_reference.entropy
        + row.reaction_at_reference.entropy
        + row.products_from_reference.entropy
    )
    tables = [(float(number), main_table(substance.text)) for number, substance in reaction.terms]
    tabulated = sum(number * table.S[table.line(T)] for number, table in tables)
    moles = sum(abs(number) for number, _ in tables)
    assert abs(by_path - tabulated) <= TOLERANCE * moles
