"""The chemical elements: their symbols, and their atomic weights from the library's table."""

from __future__ import annotations

import csv
from collections.abc import Iterable, Mapping
from functools import cache
from importlib.resources import files
from types import MappingProxyType
from typing import Final

from gibbsmin.errors import InputError

_IN_ORDER: Final = """
    H D He Li Be B C N O F Ne Na Mg Al Si P S Cl Ar K Ca Sc Ti V Cr Mn Fe Co Ni Cu Zn Ga Ge As Se
    Br Kr Rb Sr Y Zr Nb Mo Tc Ru Rh Pd Ag Cd In Sn Sb Te I Xe Cs Ba La Ce Pr Nd Pm Sm Eu Gd Tb Dy
    Ho Er Tm Yb Lu Hf Ta W Re Os Ir Pt Au Hg Tl Pb Bi Po At Rn Fr Ra Ac Th Pa U Np Pu Am Cm Bk Cf
    Es Fm Md No Lr Rf Db Sg Bh Hs Mt Ds Rg Cn Nh Fl Mc Lv Ts Og
"""

SYMBOLS: Final = frozenset(_IN_ORDER.split())
"""Symbols of all elements; deuterium (D) counts as an element of its own."""

ELECTRON_MOLAR_MASS: Final = 5.4857990962e-7
"""kg/mol; CODATA 2022, recalled from memory."""


@cache
def atomic_weights() -> Mapping[str, float]:
    """Atomic weights in kg/mol by symbol, as the library's table of elements lists them."""
    text = files("gibbsmin.data").joinpath("elements.csv").read_text(encoding="utf-8")
    rows = csv.DictReader(text.splitlines())
    # The table is in g/mol, the customary unit.
    return MappingProxyType({row["symbol"]: float(row["atomic_weight"]) / 1000 for row in rows})


def molar_mass(elements: Iterable[tuple[str, float]], charge: float = 0.0) -> float:
    """Molar mass in kg/mol: the sum of the atomic weights less the electrons that are missing.

    Parameters
    ----------
    elements
        Pairs of symbol and count.
    charge
        In elementary charges.

    Raises
    ------
    InputError
        If the table lists no atomic weight for an element.
    """
    weights = atomic_weights()
    mass = -charge * ELECTRON_MOLAR_MASS
    for symbol, count in elements:
        if symbol not in weights:
            raise InputError(
                f"found the element {symbol}, which has no standard atomic weight in the library",
                "accepted are the elements of its table of elements",
            )
        mass += count * weights[symbol]
    return mass
