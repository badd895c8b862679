"""Writes the library's tables: UTF-8, LF, comma, one header row, numbers in their shortest form."""

from __future__ import annotations

import csv
from collections.abc import Iterable, Mapping, Sequence
from io import StringIO
from pathlib import Path

from gibbsmin.data.build.critical import CriticalRow
from gibbsmin.data.build.record import BuildRecord, SourceEntry

SPECIES_HEADER = [
    "name",
    "formula",
    "state",
    "phase",
    "common_name",
    "cas",
    "dfH298_kJ_per_mol",
    "u_dfH298_kJ_per_mol",
    "S298_J_per_mol_K",
    "u_S298_J_per_mol_K",
    "molar_volume_cm3_per_mol",
    "source_enthalpy",
    "source_entropy",
    "source_heat_capacity",
    "status",
    "fit_error_G_RT",
    "remark",
]
HEAT_CAPACITY_HEADER = [
    "name",
    "T_low_K",
    "T_high_K",
    "A",
    "B",
    "C",
    "D",
    "E",
    "transition_kJ_per_mol",
    "transition",
]
CRITICAL_HEADER = ["name", "Tc_K", "Pc_bar", "acentric_factor", "source"]
INTERACTION_HEADER = ["equation", "first", "second", "k", "source"]
SOURCES_HEADER = ["key", "citation", "status"]


def species_table(records: Iterable[BuildRecord]) -> str:
    """Text of ``species.csv``."""
    return table_text(
        SPECIES_HEADER,
        (
            (
                record.name,
                record.formula,
                record.state,
                record.phase.value,
                record.common_name,
                record.cas,
                _number(record.dfH298, 1e-3),
                _number(record.u_dfH298, 1e-3),
                _number(record.S298),
                _number(record.u_S298),
                _number(record.molar_volume, 1e6),
                record.source_enthalpy,
                record.source_entropy,
                record.source_heat_capacity,
                record.status,
                f"{record.fit_error:.1e}" if record.fit_error else "0",
                record.remark,
            )
            for record in records
        ),
    )


def heat_capacity_table(records: Iterable[BuildRecord]) -> str:
    """Text of ``heat_capacity.csv``."""
    return table_text(
        HEAT_CAPACITY_HEADER,
        (
            (
                record.name,
                *map(_number, (p.T_low, p.T_high, p.A, p.B, p.C, p.D, p.E)),
                _number(p.transition or None, 1e-3),
                p.label,
            )
            for record in records
            for p in record.pieces
        ),
    )


def critical_table(rows: Iterable[CriticalRow]) -> str:
    """Text of ``critical.csv``."""
    return table_text(
        CRITICAL_HEADER,
        (
            (row.name, _number(row.Tc), _number(row.Pc), _number(row.acentric_factor), row.source)
            for row in rows
        ),
    )


def interaction_table(rows: Iterable[Mapping[str, str]]) -> str:
    """Text of ``interaction.csv``, sorted by equation and pair."""
    ordered = sorted(tuple(row[field] for field in INTERACTION_HEADER) for row in rows)
    return table_text(INTERACTION_HEADER, ordered)


def sources_table(sources: Iterable[SourceEntry]) -> str:
    """Text of ``sources.csv``."""
    return table_text(
        SOURCES_HEADER, ((source.key, source.citation, source.status) for source in sources)
    )


def write(folder: Path, tables: dict[str, str]) -> None:
    """Write tables by their file names."""
    for name, text in tables.items():
        (folder / name).write_text(text, encoding="utf-8", newline="\n")


def table_text(header: Sequence[str], rows: Iterable[Sequence[str]]) -> str:
    """Text of a table."""
    stream = StringIO()
    writer = csv.writer(stream, lineterminator="\n")
    writer.writerow(header)
    writer.writerows(rows)
    return stream.getvalue()


def _number(value: float | None, factor: float = 1.0) -> str:
    """Shortest text of a number; twelve digits, so that a change of unit leaves no trace."""
    return "" if value is None else f"{value * factor:.12g}"
