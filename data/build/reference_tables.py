"""Reads the tables of published values that the package chemicals carries, by CAS number."""

from __future__ import annotations

import csv
from functools import cache
from importlib.resources import files
from typing import Final

from gibbsmin.data.build.identities import chemicals_folder

ATCT_GAS: Final = "Reactions/ATcT 1.112 (g).tsv"
ATCT_LIQUID: Final = "Reactions/ATcT 1.112 (l).tsv"
CRC_STANDARD: Final = (
    "Heat Capacity/CRC Standard Thermodynamic Properties of Chemical Substances.tsv"
)
CRC_VAPORIZATION: Final = "Phase Change/CRC Handbook Heat of Vaporization.tsv"
CRC_SOLID_DENSITY: Final = "Density/CRC Solid Inorganic Constant Densities.tsv"
CRC_LIQUID_DENSITY: Final = "Density/CRC Liquid Inorganic Constant Densities.tsv"
CRC_MOLTEN_DENSITY: Final = "Density/CRC Inorganics densties of molten compounds and salts.tsv"
CRC_ORGANIC: Final = "Misc/Physical Constants of Organic Compounds.csv"
CRC_CRITICAL: Final = "Critical Properties/CRCCriticalOrganics.tsv"
IUPAC_CRITICAL: Final = "Critical Properties/IUPACOrganicCriticalProps.tsv"
MATHEWS_CRITICAL: Final = "Critical Properties/Mathews1972InorganicCriticalProps.tsv"
PASSUT_CRITICAL: Final = "Critical Properties/PassutDanner1973.tsv"
PSRK_CRITICAL: Final = "Critical Properties/Appendix to PSRK Revision 4.tsv"
TRC_GAS: Final = "Heat Capacity/TRC Thermodynamics of Organic Compounds in the Gas State.tsv"
POLING: Final = "Heat Capacity/PolingDatabank.tsv"
PERRY_LIQUID: Final = "Heat Capacity/Perry_Table_2-153_DIPPR_100.tsv"
WEBBOOK: Final = "Misc/webbook_constants.tsv"
YAWS: Final = "Reactions/Yaws Hf S0 (g).tsv"

Row = dict[str, str]


@cache
def table(path: str) -> dict[str, Row]:
    """Rows of a table of the package by CAS number; the first row of a repeated number counts."""
    rows: dict[str, Row] = {}
    with chemicals_folder(*path.split("/")).open(encoding="utf-8", newline="") as file:
        for row in csv.DictReader(file, delimiter="\t"):
            rows.setdefault(_hyphened(row["CAS"].strip()), row)
    return rows


def value(path: str, cas: str, column: str) -> float | None:
    """A number of a table, ``None`` where the substance or the cell is missing."""
    text = (table(path).get(cas, {}).get(column) or "").strip()
    return float(text) if text else None


def curated_list(name: str) -> list[Row]:
    """Rows of a list that this project curates, ``curated_<name>.csv`` of this folder."""
    return rows_of(f"curated_{name}.csv")


def rows_of(file: str) -> list[Row]:
    """Rows of a table of this folder."""
    text = files("gibbsmin.data.build").joinpath(file).read_text(encoding="utf-8")
    return list(csv.DictReader(text.splitlines()))


def _hyphened(cas: str) -> str:
    # One table writes the numbers without their hyphens.
    return cas if "-" in cas else f"{cas[:-3]}-{cas[-3:-1]}-{cas[-1:]}"
