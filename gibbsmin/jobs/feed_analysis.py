"""A stream given by analysis: a total, shares that add up, and lumps."""

from __future__ import annotations

from collections.abc import Mapping
from typing import TYPE_CHECKING

from gibbsmin.errors import InputError
from gibbsmin.jobs.feed_parts import ANALYSIS_SPREAD, moles_of, parts_of, placed
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Species
from gibbsmin.units import Measure

if TYPE_CHECKING:
    from gibbsmin.jobs.feed_schema import FeedTable


def analysed_amounts(
    name: str, table: FeedTable, total: Measure, analysis: Mapping[str, float], library: Library
) -> tuple[dict[str, float], tuple[str, ...]]:
    """Amounts in mol (or mol/s) by record, and remarks on how they came about.

    Raises
    ------
    InputError
        for an analysis that does not add up to 100 % or a lump whose shares do not add up to 1.
    """
    shares, remarks = _added_up(name, analysis)
    parts = _parts(name, shares, table, library)
    if table.basis == "mass":
        moles = {record: share / record.molar_mass for record, share in parts.items()}
        whole = sum(moles.values())
        parts = {record: share / whole for record, share in moles.items()}
    with placed(f"feed.{name}.total"):
        amounts = {r.name: n for r, n in moles_of(total, parts).items()}
    return amounts, remarks


def _added_up(name: str, analysis: Mapping[str, float]) -> tuple[dict[str, float], tuple[str, ...]]:
    total = sum(analysis.values())
    if abs(total - 1.0) > ANALYSIS_SPREAD:
        raise InputError(
            f"found an analysis that adds up to {100 * total:.6g} %",
            f"accepted is {100 * (1 - ANALYSIS_SPREAD):g} to {100 * (1 + ANALYSIS_SPREAD):g} %",
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
                records = parts_of(part, library)
            for record, content in records.items():
                parts[record] = parts.get(record, 0.0) + share * fraction * content
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
