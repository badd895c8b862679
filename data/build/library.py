"""Puts the library together: every table as text, from the main tables and the curated part."""

from __future__ import annotations

from dataclasses import replace
from itertools import pairwise

from gibbsmin.data.build.critical import CriticalRow
from gibbsmin.data.build.curated import (
    critical_rows,
    curated_records,
    curated_sources,
    molar_volumes,
)
from gibbsmin.data.build.elements import elements_table
from gibbsmin.data.build.main_records import main_records
from gibbsmin.data.build.record import BuildRecord
from gibbsmin.data.build.reference_tables import curated_list
from gibbsmin.data.build.sources import MAIN_SOURCES
from gibbsmin.data.build.write import (
    critical_table,
    heat_capacity_table,
    interaction_table,
    sources_table,
    species_table,
)

from gibbsmin.errors import GibbsminError


def library_tables() -> tuple[dict[str, str], list[BuildRecord]]:
    """Texts of the tables by file name, and the records that they hold, sorted by name."""
    records = library_records()
    return tables_of(records, critical_rows()), records


def library_records() -> list[BuildRecord]:
    """All records with their molar volumes, sorted by name.

    Raises
    ------
    GibbsminError
        If two records bear one name.
    """
    records = sorted((*main_records(), *curated_records()), key=lambda record: record.name)
    for below, above in pairwise(records):
        if below.name == above.name:
            raise GibbsminError(f"two records bear the name {below.name}")
    return with_volumes(records)


def with_volumes(records: list[BuildRecord]) -> list[BuildRecord]:
    """The records with the molar volumes that are known for them."""
    volumes = {name: volume for name, (volume, _) in molar_volumes().items()}
    return [replace(record, molar_volume=volumes.get(record.name)) for record in records]


def tables_of(records: list[BuildRecord], critical: list[CriticalRow]) -> dict[str, str]:
    """Texts of the tables by file name."""
    sources = sorted((*MAIN_SOURCES, *curated_sources()), key=lambda source: source.key)
    return {
        "species.csv": species_table(records),
        "heat_capacity.csv": heat_capacity_table(records),
        "critical.csv": critical_table(critical),
        "interaction.csv": interaction_table(curated_list("interaction")),
        "elements.csv": elements_table(records),
        "sources.csv": sources_table(sources),
    }
