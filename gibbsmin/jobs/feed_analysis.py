"""A stream given by analysis: a total, shares that add up, lumps, and the water of a dry gas."""

from __future__ import annotations

from collections.abc import Mapping
from typing import TYPE_CHECKING

import numpy as np

from gibbsmin.constants import GAS_CONSTANT, STANDARD_PRESSURE
from gibbsmin.errors import InputError
from gibbsmin.jobs.feed_parts import moles_of, placed, resolve
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.species import Species
from gibbsmin.units import Measure

if TYPE_CHECKING:
    from gibbsmin.jobs.feed_schema import FeedTable

_SPREAD = 0.005
"""An analysis may miss 100 % by this much; it is then scaled, and the result says so."""

_WATER = "H2O(g)"


def analysed_amounts(
    name: str, table: FeedTable, total: Measure, analysis: Mapping[str, float], library: Library
) -> tuple[dict[str, float], tuple[str, ...]]:
    """Amounts in mol (or mol/s) by record, and remarks on how they came about.

    The total counts the gas as analysed; water by dew point or steam ratio comes on top.

    Raises
    ------
    InputError
        for an analysis that does not add up to 100 %, a lump whose shares do not add up to 1,
        or a dew point at which the stream would be all water.
    """
    shares, remarks = _added_up(name, analysis)
    parts = _parts(name, shares, table, library)
    if table.basis == "mass":
        moles = {record: share / record.molar_mass for record, share in parts.items()}
        whole = sum(moles.values())
        parts = {record: share / whole for record, share in moles.items()}
    with placed(f"feed.{name}.total"):
        amounts = {r.name: n for r, n in moles_of(total, parts).items()}
    steam = _steam(name, table, sum(amounts.values()), library)
    if steam:
        amounts[_WATER] = amounts.get(_WATER, 0.0) + steam
    return amounts, remarks


def _added_up(name: str, analysis: Mapping[str, float]) -> tuple[dict[str, float], tuple[str, ...]]:
    total = sum(analysis.values())
    if abs(total - 1.0) > _SPREAD:
        raise InputError(
            f"found an analysis that adds up to {100 * total:.6g} %",
            f"accepted is {100 * (1 - _SPREAD):g} to {100 * (1 + _SPREAD):g} %",
            key=f"feed.{name}.analysis",
        )
    scaled = {text: share / total for text, share in analysis.items()}
    if abs(total - 1.0) <= 1e-9:
        return scaled, ()
    return scaled, (
        f"The analysis of {name} adds up to {100 * total:.6g} % and is scaled to 100 %.",
    )


def _parts(
    name: str, shares: Mapping[str, float], table: FeedTable, library: Library
) -> dict[Species, float]:
    """Shares by record, with each lump split as stated."""
    parts: dict[Species, float] = {}
    for text, share in shares.items():
        for part, fraction in table.lumps.get(text, {text: 1.0}).items():
            with placed(f"feed.{name}.analysis.{text}"):
                record = resolve(part, library)
            parts[record] = parts.get(record, 0.0) + share * fraction
    for lump, split in table.lumps.items():
        key = f"feed.{name}.lumps.{lump}"
        if lump not in shares:
            raise InputError(
                "found a lump that the analysis does not name",
                f"accepted is one of {', '.join(shares)}",
                key=key,
            )
        if abs(sum(split.values()) - 1.0) > 1e-6:
            raise InputError(
                f"found shares that add up to {sum(split.values()):.6g}",
                "accepted are shares that add up to 1",
                key=key,
            )
    return parts


def _steam(name: str, table: FeedTable, dry: float, library: Library) -> float:
    """Moles of water that the dry gas carries."""
    if table.steam_ratio is not None:
        return table.steam_ratio * dry
    if table.water_dew_point is None:
        return 0.0
    fraction = _saturation(table.water_dew_point, library) / table.pressure
    if fraction >= 1.0:
        raise InputError(
            f"found a dew point of {table.water_dew_point:.2f} K, at which water alone reaches the "
            f"stream's {table.pressure / 1e5:g} bar",
            "accepted is a lower one",
            key=f"feed.{name}.water_dew_point",
        )
    return dry * fraction / (1.0 - fraction)


def _saturation(T: float, library: Library) -> float:
    """Vapour pressure of water in Pa, from the Gibbs energies of the liquid and the ideal gas."""
    table = PropertyTable.of([library[_WATER], library["H2O(l)"]])
    gas, liquid = table.gibbs_energy(T)
    return float(STANDARD_PRESSURE * np.exp((liquid - gas) / (GAS_CONSTANT * T)))
