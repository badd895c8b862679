"""Evaluates records of the build before they are written, by the library's own equations."""

from __future__ import annotations

from functools import cache

from gibbsmin.data.build.record import BuildRecord
from gibbsmin.data.build.reference_tables import rows_of

from gibbsmin.thermo.formula import parse_formula
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.species import Species

_UNKNOWN = float("nan")


def properties_of(*records: BuildRecord) -> PropertyTable:
    """Cp, H, S and G of records, in the order given."""
    return PropertyTable.of([species_of(record) for record in records])


def species_of(record: BuildRecord) -> Species:
    """The record with the fields that its properties need; masses and volumes stay unknown."""
    formula = parse_formula(record.formula)
    return Species(
        name=record.name,
        formula=record.formula,
        state=record.state,
        phase=record.phase,
        common_name=record.common_name,
        cas=record.cas,
        elements=formula.elements,
        charge=formula.charge,
        molar_mass=_UNKNOWN,
        dfH298=record.dfH298,
        u_dfH298=_UNKNOWN,
        S298=record.S298,
        u_S298=_UNKNOWN,
        molar_volume=_UNKNOWN,
        pieces=record.pieces,
    )


def molar_mass(formula: str) -> float:
    """Molar mass in kg/mol, from the library's atomic weights."""
    weights = _atomic_weights()
    return sum(n * weights[symbol] for symbol, n in parse_formula(formula).elements) / 1000


@cache
def _atomic_weights() -> dict[str, float]:
    return {row["symbol"]: float(row["atomic_weight"]) for row in rows_of("atomic_weights.csv")}
