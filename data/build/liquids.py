"""Liquids of the main tables' gases, tied to them by vaporization (``curated_liquids.csv``)."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from gibbsmin.data.build.boiling import (
    REMARK,
    perry_liquid,
    with_boiling_point,
    with_vaporization,
)
from gibbsmin.data.build.enthalpies import JANAF, active_enthalpy, main_enthalpy
from gibbsmin.data.build.main_records import fitted, identities
from gibbsmin.data.build.record import BuildRecord
from gibbsmin.data.build.reference_tables import Row, curated_list

from gibbsmin.thermo.fit import Table, fit_heat_capacity, gibbs_errors
from gibbsmin.thermo.species import Phase, Piece


def liquid_records() -> Iterator[BuildRecord]:
    """The liquids of the list, in its order."""
    for row in curated_list("liquids"):
        gas = main_record(f"{row['formula']}(g)")
        pieces, error = _heat_capacity(row)
        liquid = BuildRecord(
            formula=row["formula"],
            state="l",
            phase=Phase.LIQUID,
            common_name=row["common_name"],
            cas=row["cas"],
            dfH298=0.0,
            S298=0.0,
            pieces=pieces,
            source_enthalpy=row["source"],
            source_entropy=row["source"],
            source_heat_capacity=row["source_heat_capacity"],
            fit_error=error,
            remark=REMARK,
        )
        heat = 1000 * float(row["vaporization_kJ_per_mol"])
        liquid = with_vaporization(liquid, gas, heat, float(row["vaporization_T_K"]))
        yield with_boiling_point(liquid, gas, float(row["T_boil_K"]))


def main_record(name: str) -> BuildRecord:
    """A record of the main tables by its name, without what only the written one needs.

    Enthalpies that move along with a gas's stay as the tables print them.
    """
    identity = next(i for i in identities() if i.name == name)
    table = identity.table
    enthalpy = active_enthalpy(identity.formula, table, identity.cas)
    enthalpy = enthalpy or main_enthalpy(name, table, {})
    pieces, error = fitted(table)
    return BuildRecord(
        formula=identity.formula,
        state=identity.state,
        phase=identity.phase,
        common_name="",
        dfH298=enthalpy.value,
        S298=table.S298,
        pieces=pieces,
        source_enthalpy=enthalpy.source,
        source_entropy=JANAF,
        source_heat_capacity=JANAF,
        fit_error=error,
    )


def _heat_capacity(row: Row) -> tuple[tuple[Piece, ...], float]:
    """The list's own line a + b 10⁻³ T, or Perry's polynomial where it has none."""
    if row["a"]:
        low, high = float(row["T_low_K"]), float(row["T_high_K"])
        return (Piece(low, high, float(row["a"]), float(row["b"])),), 0.0
    T, Cp = perry_liquid(row["cas"])
    pieces = fit_heat_capacity(T, Cp)
    return pieces, float(np.max(np.abs(gibbs_errors(pieces, Table.read(T, Cp)))))
