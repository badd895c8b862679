"""The curated part of the library: what the main tables lack, and what they do not print.

Organic gases and liquids, solids, melts and metal vapours, and liquids of the main gases;
molar volumes and critical constants of all records; and the sources of these.
"""

from __future__ import annotations

from collections.abc import Iterable
from functools import cache

from gibbsmin.data.build.critical import CriticalRow, critical_rows_of
from gibbsmin.data.build.evaluate import molar_mass
from gibbsmin.data.build.liquids import liquid_records
from gibbsmin.data.build.main_records import identities
from gibbsmin.data.build.molar_volumes import volumes_of
from gibbsmin.data.build.organics import organic_records
from gibbsmin.data.build.record import BuildRecord, SourceEntry
from gibbsmin.data.build.reference_tables import curated_list
from gibbsmin.data.build.solids import solid_records

from gibbsmin.thermo.species import Phase


def curated_records() -> list[BuildRecord]:
    """Records that the main tables lack, without their molar volumes."""
    return list(_records())


def molar_volumes() -> dict[str, tuple[float, str]]:
    """Molar volume in m³/mol and source key by record name, of main and curated records."""
    return volumes_of(
        (formula, state, phase, cas, molar_mass(formula))
        for formula, state, phase, cas in _substances()
        if phase is not Phase.GAS
    )


def critical_rows() -> list[CriticalRow]:
    """Critical constants by record name, of main and curated gases."""
    return critical_rows_of(
        (f"{formula}({state})", cas)
        for formula, state, phase, cas in _substances()
        if phase is Phase.GAS
    )


def curated_sources() -> list[SourceEntry]:
    """Sources of the curated part, apart from those that the main tables cite too."""
    return [
        SourceEntry(row["key"], row["citation"], row["status"]) for row in curated_list("sources")
    ]


def _substances() -> Iterable[tuple[str, str, Phase, str]]:
    for identity in identities():
        yield identity.formula, identity.state, identity.phase, identity.cas
    for record in _records():
        yield record.formula, record.state, record.phase, record.cas


@cache
def _records() -> tuple[BuildRecord, ...]:
    return (*organic_records(), *solid_records(), *liquid_records())
