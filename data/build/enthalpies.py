"""Enthalpies of formation and standard uncertainties of the main tables' substances.

Gases, and the few liquids of its table, take the enthalpy of the Active Thermochemical Tables
wherever registry number, composition and charge agree.  That source prints 95 % intervals, of
which half is the standard uncertainty.  It counts an ion's enthalpy without the electron's own
H(298.15 K) − H(0 K); the main tables count it with, as the record of the electron gas does, so
the values are brought to that convention.

Some condensed substances and gas oligomers were measured against a gas whose enthalpy has moved.
They move along, so that the enthalpy of the measured reaction stays.
"""

from __future__ import annotations

import csv
import re
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from typing import Final

from gibbsmin.data.build.identities import composition
from gibbsmin.data.build.reference_tables import ATCT_GAS, ATCT_LIQUID, Row, table
from gibbsmin.data.build.tables import MainTable

from gibbsmin.errors import FormulaError

JANAF: Final = "JANAF"
ATCT: Final = "ATcT"
NBS: Final = "NBS"

ELECTRON_ENTHALPY: Final = 6197.0
"""H(298.15 K) − H(0 K) of the electron gas, 5/2 RT, in J/mol, as the main tables print it."""

# The source's nitrous acid is one value for two rotamers that the main tables hold apart.
_NOT_THE_SAME: Final = frozenset({"trans-HNO2"})

_MOVED_WITH: Final[dict[str, dict[str, int]]] = {
    "NH4Cl(cr)": {"NH3": 1, "HCl": 1},
    "NH4Br(cr)": {"NH3": 1, "HBr": 1},
    "NH4I(cr)": {"NH3": 1, "HI": 1},
    "NH4ClO4(cr)": {"NH3": 1},
    "N2H4(l)": {"N2H4": 1},
    "N2O4(cr)": {"N2O4": 1},
    "N2O4(l)": {"N2O4": 1},
    "ICl(cr)": {"ICl": 1},
    **{f"(HF){count}(g)": {"HF": count} for count in range(2, 8)},
}
"""Multiples of the gases whose change of enthalpy a record takes over."""

_PCL5_ENTHALPY: Final = -374_900.0
_PCL5_REMARK: Final = (
    "the main tables' enthalpy, -360.184 kJ/mol, makes the constant of PCl5 = PCl3 + Cl2 about "
    "28 times a measured one; the NBS value is used"
)

_CORRECTED: Final = {
    "HgCl2(l)": (-216_926.0, -213.222, 550),
    "ZrF2(l)": (-930_951.0, -936.951, 1175),
}
"""Liquids whose table prints an enthalpy (kJ/mol, second) that contradicts its own composite with
the crystal, which melts at the temperature that stands last (K); the first value agrees."""


@dataclass(frozen=True, slots=True)
class Enthalpy:
    """An enthalpy of formation at 298.15 K in J/mol, where it comes from and what to say of it."""

    value: float
    uncertainty: float | None
    source: str
    remark: str = ""


def active_enthalpy(formula: str, main: MainTable, cas: str) -> Enthalpy | None:
    """The value of the Active Thermochemical Tables, if they hold the same species."""
    path = ATCT_LIQUID if main.state == "l" else ATCT_GAS
    row = table(path).get(cas)
    if main.state in ("cr", "cr,l") or row is None or formula in _NOT_THE_SAME:
        return None
    if formula == "C" and main.state == "ref":
        return None
    if _composition(row) != composition(formula):
        return None
    _, charge = composition(formula)
    column = "Hfl" if main.state == "l" else "Hfg"
    return Enthalpy(
        float(row[column]) + charge * ELECTRON_ENTHALPY, float(row["uncertainty"]) / 2, ATCT
    )


def main_enthalpy(name: str, main: MainTable, moved: Mapping[str, float]) -> Enthalpy:
    """The main tables' value, re-based where it rests on a gas that moved.

    ``moved`` holds by formula how much the enthalpy of each gas rose, in J/mol.
    """
    if name == "PCl5(g)":
        return Enthalpy(_PCL5_ENTHALPY, None, NBS, _PCL5_REMARK)
    if name in _CORRECTED:
        value, printed, T_melt = _CORRECTED[name]
        remark = f"the table prints {printed} kJ/mol, with which it would not melt at {T_melt} K"
        return Enthalpy(value, None, JANAF, remark)
    gases = _MOVED_WITH.get(name)
    if gases is None:
        return Enthalpy(main.dfH298, None, JANAF)
    shift = sum(count * moved[gas] for gas, count in gases.items())
    listed = " and ".join(f"{gas}(g)" for gas in gases)
    remark = f"enthalpy re-based by {shift / 1000:+.3f} kJ/mol with that of {listed}"
    return Enthalpy(main.dfH298 + shift, None, JANAF, remark)


def key_uncertainties(name: str, dfH298: float, S298: float) -> tuple[float | None, float | None]:
    """Standard uncertainties of dfH298 and S298 from the CODATA key values, where they apply.

    A printed interval of 95 % is halved; it applies where it holds the library's value too.
    """
    row = _key_values().get(name)
    if row is None:
        return None, None
    return (
        _applicable(row["dfH298_kJ_per_mol"], row["uncertainty_dfH298"], dfH298, 1000.0),
        _applicable(row["S298_J_per_mol_K"], row["uncertainty_S298"], S298, 1.0),
    )


def _applicable(value: str, interval: str, ours: float, unit: float) -> float | None:
    if not interval or abs(ours - unit * float(value)) > unit * float(interval) + 1e-9:
        return None
    return unit * float(interval) / 2


@cache
def _key_values() -> dict[str, Row]:
    text = files("gibbsmin.data.build").joinpath("key_values.csv").read_text(encoding="utf-8")
    return {row["name"]: row for row in csv.DictReader(text.splitlines())}


def _composition(row: Row) -> object:
    """Composition and charge from a formula such as ``[HCO]+ (g)`` or ``O(CH2CH2) (g)``."""
    text = row["Formula"].rpartition(" ")[0]
    ion = re.match(r"\[(.+)\]([+-])$", text)
    try:
        return composition("".join(ion.groups()) if ion else text)
    except FormulaError:
        return None
