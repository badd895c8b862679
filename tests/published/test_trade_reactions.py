"""K of the trade's reactions against sums over the log Kf of the published tables.

The tables' enthalpies of formation are superseded for many gases, and the library replaces them
on purpose.  So the published sum is moved by the difference of the enthalpies of formation,

    ln K = ln 10 · Σ ν log10 Kf − Σ ν (dfH_library − dfH_table)/(R T)

which leaves entropies, heat capacities and the sums themselves under test.  Methanol,
which those tables lack, takes its log Kf from another printed table.
"""

from __future__ import annotations

import numpy as np
import pytest
from published_values import main_table, rows

from gibbsmin.constants import GAS_CONSTANT
from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.reaction import Reaction

TOLERANCE = 0.02
REACTIONS = rows("trade_reactions")
CASES = [
    pytest.param(row["reaction"], float(T), id=f"{row['name']} at {T.strip()} K")
    for row in REACTIONS
    for T in row["temperatures_K"].split(";")
]


@pytest.mark.parametrize(("text", "T"), CASES)
def test_constant_is_within_two_percent_of_the_sum_over_tables(text: str, T: float) -> None:
    reaction = Reaction.read(text, load_library())
    expected = 0.0
    for number, substance in reaction.terms:
        log10_Kf, dfH_table = table_values(substance.text, T)
        moved = substance.forms[0].dfH298 - dfH_table
        expected += float(number) * (log10_Kf - moved / (GAS_CONSTANT * T * np.log(10)))
    ratio = 10 ** (float(reaction.log10_K(T)) - expected)
    assert abs(ratio - 1) <= TOLERANCE


def table_values(record: str, T: float) -> tuple[float, float]:
    """Log10 Kf at T and dfH(298.15 K) in J/mol, as the table prints them."""
    if record == "CH3OH(g)":
        row = next(row for row in rows("methanol_formation") if float(row["temperature_K"]) == T)
        return float(row["log10_Kf"]), 1000 * float(row["dfH298_kJ_per_mol"])
    table = main_table(record)
    return float(table.log10_Kf[table.line(T)]), 1000 * table.dfH298
