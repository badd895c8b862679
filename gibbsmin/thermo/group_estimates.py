"""Estimates for an organic gas by the groups it is made of: K. G. Joback, R. C. Reid.

    ΔfH298 = 68.29 + Σ h,   ΔfG298 = 53.88 + Σ g   (kJ/mol)
    Cp = Σ a − 37.93 + (Σ b + 0.210) T + (Σ c − 3.91e-4) T² + (Σ d + 2.06e-7) T³   (J/mol/K)

Source: Chem. Eng. Commun. 57 (1987) 233-243; the contributions are recalled from memory and
tested against the library's own organics.  The paper gives mean absolute errors of 8.4 kJ/mol in
either energy and of 1.4 % in Cp; it states Cp for 273 to about 1000 K.
"""

from __future__ import annotations

import csv
from collections import Counter
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from typing import Final

import numpy as np

from gibbsmin.constants import REFERENCE_TEMPERATURE
from gibbsmin.errors import InputError
from gibbsmin.thermo.formula import parse_formula
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Piece

LOWEST_TEMPERATURE: Final = 273.0
HIGHEST_TEMPERATURE: Final = 1000.0

ENTHALPY_ERROR: Final = 8400.0
"""J/mol; the method's mean absolute error, taken as the standard uncertainty."""

_REFERENCES: Final = {
    "C": ("C(graphite)", 1),
    "H": ("H2(g)", 2),
    "O": ("O2(g)", 2),
    "N": ("N2(g)", 2),
    "S": ("S(rhombic)", 1),
    "F": ("F2(g)", 2),
    "Cl": ("Cl2(g)", 2),
    "Br": ("Br2(l)", 2),
    "I": ("I2(cr)", 2),
}


@dataclass(frozen=True)
class GroupEstimate:
    """Estimated numbers of a gas.

    Attributes
    ----------
    enthalpy, entropy : ΔfH298 in J/mol, S298 in J/mol/K
    u_enthalpy, u_entropy : standard uncertainties
    correlation : of their errors, since the entropy follows from both energies, which err by
        themselves
    piece : the heat capacity
    """

    enthalpy: float
    u_enthalpy: float
    entropy: float
    u_entropy: float
    correlation: float
    piece: Piece


def estimate_by_groups(
    groups: Mapping[str, int], elements: Mapping[str, float], library: Library
) -> GroupEstimate:
    """Estimate a gas from its groups; ``elements`` are its formula's, for the entropy.

    Raises
    ------
    InputError
        for an unknown group, a count below 1, or groups that do not
        add up to the formula.
    """
    table = contributions()
    for name, count in groups.items():
        if name not in table:
            raise InputError(
                f'found the group "{name}"', f"accepted is one of {', '.join(table)}", key="groups"
            )
        if isinstance(count, bool) or not isinstance(count, int) or count < 1:
            raise InputError(
                f"found {count!r} of the group {name}",
                "accepted is a whole number from 1",
                key="groups",
            )
    _check_composition(groups, elements)
    total = np.sum([count * table[name] for name, count in groups.items()], axis=0)
    enthalpy, gibbs = 1e3 * (68.29 + total[0]), 1e3 * (53.88 + total[1])
    a, b, c, d = total[2:] + np.array([-37.93, 0.210, -3.91e-4, 2.06e-7])
    entropy_of_elements = 0.0
    for symbol, amount in elements.items():
        name, atoms = _REFERENCES[symbol]
        entropy_of_elements += amount / atoms * library[name].S298
    u_entropy = np.sqrt(2.0) * ENTHALPY_ERROR / REFERENCE_TEMPERATURE
    return GroupEstimate(
        enthalpy=float(enthalpy),
        u_enthalpy=ENTHALPY_ERROR,
        entropy=float((enthalpy - gibbs) / REFERENCE_TEMPERATURE + entropy_of_elements),
        u_entropy=float(u_entropy),
        correlation=float(ENTHALPY_ERROR / (REFERENCE_TEMPERATURE * u_entropy)),
        piece=Piece(
            LOWEST_TEMPERATURE,
            HIGHEST_TEMPERATURE,
            A=float(a),
            B=float(b * 1e3),
            C=float(c * 1e6),
            D=float(d * 1e9),
        ),
    )


def _check_composition(groups: Mapping[str, int], elements: Mapping[str, float]) -> None:
    """Refuse groups whose atoms are not those of the formula."""
    atoms: Counter[str] = Counter()
    for name, count in groups.items():
        # "ring =CH" and "phenol OH" hold the atoms of their last word.
        for symbol, number in parse_formula(name.split()[-1].strip("=#")).elements:
            atoms[symbol] += count * int(number)
    for symbol in sorted({*atoms, *elements}):
        if atoms[symbol] != elements.get(symbol, 0.0):
            raise InputError(
                f"found groups with {atoms[symbol]} {symbol}, while the formula has "
                f"{elements.get(symbol, 0.0):g}",
                "accepted are groups that add up to the formula",
                key="groups",
            )


@cache
def contributions() -> Mapping[str, np.ndarray]:
    """h, g (kJ/mol), a, b, c and d of each group."""
    text = files("gibbsmin.data").joinpath("group_contributions.csv").read_text(encoding="utf-8")
    rows = csv.reader(text.splitlines()[1:])
    return {row[0]: np.array([float(cell) for cell in row[2:]]) for row in rows}
