"""Molar volumes of condensed records at about 298 K, from densities published with CAS numbers.

A crystal with several forms is taken only from ``curated_molar_volumes.csv``, since the density
tables seldom say which form they mean; that list comes first in any case.  Melts take the density
at their melting point, liquids that near 20 °C.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable
from typing import Final

from gibbsmin.data.build import reference_tables as tables

from gibbsmin.thermo.species import Phase

CRC_SOLID: Final = "CRC-solid-density"
CRC_LIQUID: Final = "CRC-liquid-density"
CRC_MOLTEN: Final = "CRC-molten-density"
CRC_ORGANIC: Final = "CRC-organic-constants"

# Rows whose density is that of another form or contradicts the substance.
_REFUSED: Final = frozenset({"HgI2(cr)", "HBO2(cr)", "WOCl4(cr)"})

Substance = tuple[str, str, Phase, str, float]
"""Formula, state, phase, CAS number and molar mass in kg/mol."""


def volumes_of(substances: Iterable[Substance]) -> dict[str, tuple[float, str]]:
    """Molar volume in m³/mol and source key by record name, for those that have one."""
    listed = list(substances)
    given = {
        row["record"]: (1e-6 * float(row["molar_volume_cm3_per_mol"]), row["source"])
        for row in tables.curated_list("molar_volumes")
    }
    crystals = Counter(formula for formula, _, phase, _, _ in listed if phase is Phase.SOLID)
    volumes: dict[str, tuple[float, str]] = {}
    for formula, state, phase, cas, mass in listed:
        name = f"{formula}({state})"
        found = given.get(name)
        if found is None and name not in _REFUSED:
            if phase is Phase.SOLID and crystals[formula] == 1:
                found = _constant(tables.CRC_SOLID_DENSITY, cas, CRC_SOLID)
            elif phase is Phase.LIQUID:
                found = _liquid(cas, mass)
        if found is not None:
            volumes[name] = found
    return volumes


def _liquid(cas: str, mass: float) -> tuple[float, str] | None:
    return (
        _constant(tables.CRC_LIQUID_DENSITY, cas, CRC_LIQUID)
        or _from_density(tables.CRC_ORGANIC, cas, mass, CRC_ORGANIC)
        or _from_density(tables.CRC_MOLTEN_DENSITY, cas, mass, CRC_MOLTEN)
    )


def _constant(path: str, cas: str, source: str) -> tuple[float, str] | None:
    volume = tables.value(path, cas, "Vm")
    return None if volume is None else (float(f"{volume:.4g}"), source)


def _from_density(path: str, cas: str, mass: float, source: str) -> tuple[float, str] | None:
    density = tables.value(path, cas, "rho")
    return None if density is None else (float(f"{mass / density:.4g}"), source)
