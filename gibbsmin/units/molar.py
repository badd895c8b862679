"""Reads quantities of one mole: energies, and entropies or heat capacities."""

from __future__ import annotations

import re

from gibbsmin.errors import UnitError
from gibbsmin.units.reading import read_heat, shown
from gibbsmin.units.unit import Dimension

_MOLAR_ENERGY = 'accepted is an energy of one mole such as "5 kJ/mol"'
_MOLAR_ENTROPY = 'accepted is an entropy of one mole such as "0.5 J/(mol K)"'
_PER_MOLE = {"mol": 1.0, "kmol": 1e3}
_PER_MOLE_AND_KELVIN = re.compile(
    r"(?P<energy>.+?)\s*/\s*(?:\(\s*(?P<moles>k?mol)[\s*·]+K\s*\)|(?P<plain>k?mol)\s*/\s*K)\s*"
)


def read_molar_energy(given: object) -> float:
    """An energy of one mole in J/mol, of either sign.

    Raises
    ------
    UnitError
        as the reader of entropies: for what is no number with such a unit, or is not finite.
    """
    text, _, per = given.rpartition("/") if isinstance(given, str) else ("", "", "")
    moles = _PER_MOLE.get(per.strip())
    if moles is None:
        raise UnitError(f"found {shown(given)}, which is no energy of one mole", _MOLAR_ENERGY)
    return _energy(text, given, _MOLAR_ENERGY) / moles


def read_molar_entropy(given: object) -> float:
    """An entropy or heat capacity of one mole in J/mol/K: "0.5 J/(mol K)", "8 cal/mol/K"."""
    match = _PER_MOLE_AND_KELVIN.fullmatch(given) if isinstance(given, str) else None
    if match is None:
        raise UnitError(f"found {shown(given)}, which is no entropy of one mole", _MOLAR_ENTROPY)
    moles = _PER_MOLE[match["moles"] or match["plain"]]
    return _energy(match["energy"], given, _MOLAR_ENTROPY) / moles


def _energy(text: str, given: object, accepted: str) -> float:
    try:
        energy = read_heat(text)
    except UnitError:
        raise UnitError(f"found {shown(given)}", accepted) from None
    if energy.unit.dimension is not Dimension.ENERGY:
        raise UnitError(f"found {shown(given)}, which is a heat flow", accepted)
    return energy.value
