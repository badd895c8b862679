"""Critical constants and acentric factors of gases, as published; predicted ones are left out.

``curated_critical.csv`` comes first.  Else temperature and pressure come from one evaluation, the
first of ``_CONSTANTS`` that holds both, and the acentric factor from the first of ``_ACENTRIC``
whose critical temperature agrees within ``TEMPERATURE_WITHIN``, so that factor and constants belong
together.  A gas enters when it has all three.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from typing import Final

from gibbsmin.data.build import reference_tables as tables

TEMPERATURE_WITHIN: Final = 0.01
"""Relative difference of critical temperatures up to which two sources are taken together."""

_CONSTANTS: Final = (
    ("IUPAC-critical", tables.IUPAC_CRITICAL),
    ("CRC-critical", tables.CRC_CRITICAL),
    ("Mathews-1972", tables.MATHEWS_CRITICAL),
    ("Passut-1973", tables.PASSUT_CRITICAL),
    ("PSRK-2005", tables.PSRK_CRITICAL),
)

# Substances that decompose below their critical point or were never measured there: what this
# source prints for them can only be an estimate.
_ESTIMATED_IN_PSRK: Final = frozenset(
    {
        "208-96-8",  # acenaphthylene
        "86-73-7",  # fluorene
        "206-44-0",  # fluoranthene
        "129-00-0",  # pyrene
        "120-12-7",  # anthracene
        "85-01-8",  # phenanthrene
        "65-85-0",  # benzoic acid
        "96-49-1",  # ethylene carbonate
        "95-13-6",  # indene
        "60-35-5",  # acetamide
        "7697-37-2",  # nitric acid
    }
)

_ACENTRIC: Final = (
    ("PSRK-2005", tables.PSRK_CRITICAL),
    ("Passut-1973", tables.PASSUT_CRITICAL),
)


@dataclass(frozen=True, slots=True)
class CriticalRow:
    """Critical constants of one gas: K, bar; ``source`` joins the keys of constants and factor."""

    name: str
    Tc: float
    Pc: float
    acentric_factor: float
    source: str


def critical_rows_of(gases: Iterable[tuple[str, str]]) -> list[CriticalRow]:
    """Rows for those gases, given as record name and CAS number, that have published constants."""
    rows = [_row(name, cas) for name, cas in gases if cas]
    listed = {row["record"]: row for row in tables.curated_list("critical")}
    given = [
        CriticalRow(
            name,
            float(row["Tc_K"]),
            float(row["Pc_bar"]),
            float(row["acentric_factor"]),
            row["source"],
        )
        for name, row in listed.items()
    ]
    return sorted(
        [*given, *(row for row in rows if row is not None and row.name not in listed)],
        key=lambda row: row.name,
    )


def _row(name: str, cas: str) -> CriticalRow | None:
    constants = next(((k, *c) for k, p in _CONSTANTS if (c := _constants(p, cas))), None)
    if constants is None:
        return None
    source, Tc, Pc = constants
    for key, path in _ACENTRIC:
        omega, Tc_there = tables.value(path, cas, "omega"), tables.value(path, cas, "Tc")
        if omega is None or Tc_there is None:
            continue
        if abs(Tc_there - Tc) <= TEMPERATURE_WITHIN * Tc:
            keys = source if key == source else f"{source};{key}"
            return CriticalRow(name, _short(Tc), _short(Pc / 1e5), _short(omega), keys)
    return None


def _constants(path: str, cas: str) -> tuple[float, float] | None:
    if path == tables.PSRK_CRITICAL and cas in _ESTIMATED_IN_PSRK:
        return None
    Tc, Pc = tables.value(path, cas, "Tc"), tables.value(path, cas, "Pc")
    return None if Tc is None or Pc is None else (Tc, Pc)


def _short(value: float) -> float:
    return float(f"{value:.6g}")
