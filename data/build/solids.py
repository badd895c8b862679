"""Solids, melts and metal vapours that the main tables lack, from curated lists.

``curated_solids.csv`` holds enthalpies and entropies with the source of each;
``curated_heat_capacities.csv`` the equations Cp = a + b 10⁻³ T + c 10⁵/T² + d 10⁻⁶ T², in joules
or calories as published.  A melt is given by the crystal it comes from, its melting point and
enthalpy of fusion; below its range its heat capacity goes on as the constant at the melting point,
so its values at 298.15 K follow from there.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace
from functools import cache
from typing import Final

from gibbsmin.data.build.evaluate import properties_of
from gibbsmin.data.build.record import BuildRecord
from gibbsmin.data.build.reference_tables import Row, curated_list
from gibbsmin.data.build.sources import MAIN_SOURCES

from gibbsmin.thermo.species import Phase, Piece

_JOULES: Final = {"J": 1.0, "cal": 4.184}
_PHASES: Final = {"g": Phase.GAS, "l": Phase.LIQUID}


def solid_records() -> Iterator[BuildRecord]:
    """The records of the list, in its order."""
    known: dict[str, BuildRecord] = {}
    for row in curated_list("solids"):
        record = _melt(row, known[row["melts_from"]]) if row["melts_from"] else _given(row)
        known[record.name] = record
        yield replace(record, remark="; ".join(filter(None, (record.remark, _recalled(record)))))


def _recalled(record: BuildRecord) -> str:
    """Which of a record's values were recalled from memory, by the status of their sources."""
    values = {
        "enthalpy": record.source_enthalpy,
        "entropy": record.source_entropy,
        "heat capacity": record.source_heat_capacity,
    }
    recalled = [value for value, source in values.items() if source in _recalled_sources()]
    return f"{', '.join(recalled)} recalled from memory" if recalled else ""


@cache
def _recalled_sources() -> frozenset[str]:
    listed = {row["key"]: row["status"] for row in curated_list("sources")}
    listed |= {source.key: source.status for source in MAIN_SOURCES}
    return frozenset(k for k, status in listed.items() if status.startswith("recalled"))


@cache
def _heat_capacities() -> dict[str, tuple[Piece, ...]]:
    pieces: dict[str, tuple[Piece, ...]] = {}
    for row in curated_list("heat_capacities"):
        pieces[row["record"]] = (*pieces.get(row["record"], ()), _piece(row))
    return pieces


def _piece(row: Row) -> Piece:
    joules = _JOULES[row["unit"]]
    a, b, c, d = (round(joules * float(row[name] or 0), 6) for name in "abcd")
    return Piece(
        float(row["T_low_K"]),
        float(row["T_high_K"]),
        a,
        b,
        d,
        0.0,
        # 10⁵/T² counts in t = T/1000 as 0.1/t².
        round(c / 10, 7),
        transition=1000 * float(row["transition_kJ_per_mol"] or 0),
        label=row["transition"],
    )


def _given(row: Row) -> BuildRecord:
    """A record whose enthalpy and entropy the list states; values from 298.15 K on are exact."""
    return BuildRecord(
        formula=row["formula"],
        state=row["state"],
        phase=_PHASES.get(row["state"], Phase.SOLID),
        common_name=row["common_name"],
        cas=row["cas"],
        dfH298=1000 * float(row["dfH298_kJ_per_mol"] or 0),
        u_dfH298=1000 * float(row["u_dfH298"]) if row["u_dfH298"] else None,
        S298=float(row["S298_J_per_mol_K"] or 0),
        u_S298=float(row["u_S298"]) if row["u_S298"] else None,
        pieces=_heat_capacities()[f"{row['formula']}({row['state']})"],
        source_enthalpy=row["source_enthalpy"],
        source_entropy=row["source_entropy"],
        source_heat_capacity=row["source_heat_capacity"],
        remark=row["remark"],
    )


def _melt(row: Row, crystal: BuildRecord) -> BuildRecord:
    """The melt that meets its crystal at the melting point."""
    T, fusion = float(row["T_melt_K"]), 1000 * float(row["fusion_kJ_per_mol"])
    melt = _given(row)
    # The first value holds below the melting point, where the pieces have not begun.
    pair = properties_of(crystal, melt)
    H_crystal, H_melt = pair.enthalpy(T)
    S_crystal, S_melt = pair.entropy(T)
    remark = f"from the crystal, melting at {T:g} K with {fusion / 1000:g} kJ/mol"
    return replace(
        melt,
        dfH298=round(float(H_crystal + fusion - H_melt), 1),
        S298=round(float(S_crystal + fusion / T - S_melt), 4),
        remark="; ".join(part for part in (remark, row["remark"]) if part),
    )
