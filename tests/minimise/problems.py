"""The problems that every method of the minimiser is tried on, and the builder that makes them.

Energies are round figures of the right size unless a source stands beside them.
"""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence

import numpy as np

from gibbsmin.minimise import Programme

TEN_SPECIES = {
    "H(g)": -6.089,
    "H2(g)": -17.164,
    "H2O(g)": -34.054,
    "N(g)": -5.914,
    "N2(g)": -24.721,
    "NH(g)": -14.986,
    "NO(g)": -24.100,
    "O(g)": -10.708,
    "O2(g)": -26.662,
    "OH(g)": -22.179,
}
"""g̃ at 3500 K and 750 psi: White, Johnson & Dantzig, J. Chem. Phys. 28 (1958) 751; Hock &
Schittkowski, Test Examples for Nonlinear Programming Codes (1981), problem 112."""

REFORMER = {
    "CH4(g)": 2.4,
    "H2O(g)": -23.1,
    "CO(g)": -24.1,
    "CO2(g)": -47.6,
    "H2(g)": 0.0,
    "N2(g)": 0.0,
    "C(s)": 0.0,
}
"""About 1000 K and 1 bar."""


def counts(name: str) -> dict[str, float]:
    """Element counts of a name such as ``"CaCO3(s)"``; ``+`` and ``-`` count charge."""
    formula = name.rpartition("(")[0]
    found: dict[str, float] = {}
    for symbol, number in re.findall(r"([A-Z][a-z]?)(\d*)", formula):
        found[symbol] = found.get(symbol, 0.0) + float(number or 1)
    charge = formula.count("+") - formula.count("-")
    return found | ({"charge": float(charge)} if charge else {})


def build(
    energies: Mapping[str, float],
    *feeds: Mapping[str, float],
    holds: Sequence[tuple[Mapping[str, float], Sequence[float]]] = (),
) -> Programme:
    """Programme of named species, one state a feed.

    A hold is a row of coefficients by species name and its supply in each state.
    """
    names = list(energies)
    composition = [counts(name) for name in names]
    rows = sorted({row for species in composition for row in species})
    matrix = np.array([[species.get(row, 0.0) for species in composition] for row in rows])
    supplies = np.array(
        [
            [sum(n * counts(name).get(row, 0.0) for name, n in feed.items()) for row in rows]
            for feed in feeds
        ]
    )
    atoms = matrix[[row != "charge" for row in rows]].sum(axis=0)
    direction = np.ones(len(rows))
    if "charge" in rows:
        per_atom = matrix[rows.index("charge")] / np.where(atoms > 0, atoms, np.inf)
        direction += per_atom.max()
        direction[rows.index("charge")] = -1.0
    for coefficients, amounts in holds:
        matrix = np.vstack([matrix, [coefficients.get(name, 0.0) for name in names]])
        supplies = np.column_stack([supplies, amounts])
        direction = np.append(direction, 0.0)
    return Programme(
        matrix=matrix,
        supplies=supplies,
        energies=np.tile(list(energies.values()), (len(feeds), 1)),
        gas=np.array([name.endswith("(g)") for name in names]),
        direction=direction,
        atoms=atoms,
    )


PROBLEMS: dict[str, Programme] = {
    "ten species": build(TEN_SPECIES, {"H2(g)": 1, "N2(g)": 0.5, "O2(g)": 0.5}),
    "reformer": build(
        REFORMER, {"CH4(g)": 1, "H2O(g)": 3, "N2(g)": 0.1}, {"CH4(g)": 2, "H2O(g)": 1, "N2(g)": 1}
    ),
    "reformer over carbon": build(REFORMER, {"CH4(g)": 3, "H2O(g)": 0.5, "N2(g)": 0.1}),
    "one gas": build({"N2(g)": -20.0}, {"N2(g)": 2.5}),
    "one solid": build({"SiO2(s)": -300.0}, {"SiO2(s)": 2.5}),
    "carbon monoxide alone": build(
        {"CO(g)": -55.0, "CO2(g)": -160.0, "C(s)": -0.5, "O2(g)": -24.0}, {"CO(g)": 1}
    ),
    "carbon monoxide that cannot part": build({"CO(g)": -55.0, "CO2(g)": -160.0}, {"CO(g)": 1}),
    "stoichiometric flame": build(
        {"H2(g)": 0.0, "O2(g)": 0.0, "H2O(g)": -91.6}, {"H2(g)": 2, "O2(g)": 1}
    ),
    "cold steam with radicals": build(
        {"H2O(g)": -91.6, "H2(g)": 0.0, "O2(g)": 0.0, "OH(g)": 13.8, "H(g)": 81.5, "O3(g)": 65.4},
        {"H2O(g)": 1},
    ),
    "fractions near 1e-300": build(
        {"H2O(g)": 0.0, "H2(g)": 320.0, "O2(g)": 320.0, "O3(g)": 470.0}, {"H2O(g)": 1}
    ),
    "no gas at all": build(
        {"CaO(s)": -260.0, "SiO2(s)": -360.0, "CaSiO3(s)": -650.0, "Ca2SiO4(s)": -925.0},
        {"CaO(s)": 3, "SiO2(s)": 2},
    ),
    "gas that does not form": build(
        {"CaCO3(s)": -480.0, "CaO(s)": -260.0, "CO2(g)": -165.0}, {"CaCO3(s)": 1}
    ),
    "gas that does not form, without a second solid": build(
        {"CaCO3(s)": -480.0, "CaO(g)": -60.0, "CO2(g)": -165.0}, {"CaCO3(s)": 1}
    ),
    "solid that vanishes": build(
        {"CaCO3(s)": -420.0, "CaO(s)": -260.0, "CO2(g)": -165.0}, {"CaCO3(s)": 1}
    ),
    "element at zero amount": build(
        REFORMER | {"SO2(g)": -60.0, "H2S(g)": -8.0}, {"CH4(g)": 1, "H2O(g)": 2}
    ),
    "nothing at all": build(REFORMER, {"CH4(g)": 0.0}),
    "dependent rows": build({"CO(g)": -24.0, "N2(g)": 0.0}, {"CO(g)": 1, "N2(g)": 3}),
    "plasma": build(
        {"Ar(g)": -30.0, "Ar+(g)": 20.0, "-(g)": -12.0, "N2(g)": -33.0, "N2+(g)": 15.0},
        {"Ar(g)": 1, "N2(g)": 0.2},
    ),
    "held conversion": build(
        REFORMER,
        {"CH4(g)": 1, "H2O(g)": 3, "N2(g)": 0.1},
        holds=[({"CH4(g)": 1.0}, [0.4]), ({"CO(g)": 1.0, "CO2(g)": -1.0}, [0.0])],
    ),
    "held difference of mixed sign": build(
        REFORMER,
        {"CH4(g)": 1, "H2O(g)": 3, "N2(g)": 0.1},
        holds=[({"CO(g)": 1.0, "H2(g)": -1.0}, [-2.0])],
    ),
    "trace of an element": build(
        REFORMER | {"Hg(g)": -10.0, "HgO(s)": -5.0},
        {"CH4(g)": 1, "H2O(g)": 3, "Hg(g)": 1e-12},
    ),
    "two forms": build(
        {"S(s)": -4.0, "S2(s)": -7.9, "S2(g)": 10.0, "O2(g)": -25.0, "SO2(g)": -150.0},
        {"S(s)": 2, "O2(g)": 1},
    ),
}
"""Each is feasible, and every method must certify all of its states."""
