"""Builds the species records of the main tables."""

from __future__ import annotations

from collections import Counter
from collections.abc import Container, Iterator
from dataclasses import dataclass
from functools import cache
from typing import Final

import numpy as np
from gibbsmin.data.build.enthalpies import (
    JANAF,
    Enthalpy,
    active_enthalpy,
    key_uncertainties,
    main_enthalpy,
)
from gibbsmin.data.build.identities import registry_numbers
from gibbsmin.data.build.names import common_name, form_word, trade_formula
from gibbsmin.data.build.record import BuildRecord
from gibbsmin.data.build.tables import MainTable, read_main_tables

from gibbsmin.arrays import FloatArray
from gibbsmin.constants import REFERENCE_TEMPERATURE
from gibbsmin.thermo.fit import Table, fit_heat_capacity, gibbs_errors
from gibbsmin.thermo.species import Phase, Piece

LOWEST: Final = 200.0
"""K; where a fit from here misses ``FAIR_FIT`` below 298.15 K or ``GOOD_FIT`` above, a record
begins at 298.15 K."""

GOOD_FIT: Final = 2e-4
FAIR_FIT: Final = 1e-3
AIM: Final = 1.2e-4
"""|ΔG/RT|; the tables' rounding alone makes about 1e-4."""

# Elements whose only form in the tables is the reference form.
_REFERENCE_TABLES: Final = frozenset(
    [
        "Ar-001",
        "C-002",
        "Cl-073",
        "D-012",
        "D-020",
        "F-054",
        "H-050",
        "He-001",
        "Kr-001",
        "N-023",
        "Ne-001",
        "O-029",
        "Rn-001",
        "Xe-001",
    ]
)

# Composites of crystal and liquid that exist nowhere else.
_COMPOSITES: Final = frozenset(
    ["Br-039", "H-075", "H-092", "H-094", "H-095", "H-096", "H-097", "Hg-002"]
)

_METASTABLE: Final = (
    "metastable; the table's extrapolation would make it the stable form, against the source's "
    "own sequence V, IV, I, liquid"
)
_REMARKS: Final = {
    "FeO(cr)": "stoichiometric, off measured gas ratios by a factor of 2 to 3; wustite is Fe0.947O",
    "Na2SO4(delta)": _METASTABLE,
    "Na2SO4(iii)": _METASTABLE,
}
_SUPERSEDED: Final = frozenset({"FeO(cr)", "Na2SO4(delta)", "Na2SO4(iii)"})
_CORRECTED_ENTROPIES: Final = {
    "TiCl4(l)": (
        252.377,
        "the table prints 221.925 J/mol/K; this value follows from the crystal's entropy and the "
        "enthalpy of melting, 9.966 kJ/mol at 249.046 K",
    ),
}
_COMPOSITE_REMARK: Final = "crystal below its melting point"


@dataclass(frozen=True, slots=True)
class Identity:
    """A main table with the name that the library gives its record."""

    table: MainTable
    formula: str
    state: str
    cas: str

    @property
    def name(self) -> str:
        return f"{self.formula}({self.state})"

    @property
    def phase(self) -> Phase:
        return {"g": Phase.GAS, "l": Phase.LIQUID}.get(self.state, Phase.SOLID)


@cache
def identities() -> tuple[Identity, ...]:
    """The tables that become records, in the order of their keys."""
    tables = [
        (table, trade_formula(table.key, table.formula, table.code))
        for table in read_main_tables()
        if table.state in ("g", "l", "cr") or table.key in _REFERENCE_TABLES | _COMPOSITES
    ]
    numbers = registry_numbers(tables)
    crystals = Counter(formula for table, formula in tables if table.state == "cr")
    return tuple(
        Identity(table, formula, _state(table, crystals[formula] > 1), numbers.get(table.key, ""))
        for table, formula in tables
    )


def _state(table: MainTable, several_forms: bool) -> str:
    if table.key in _COMPOSITES:
        return "l"
    if table.state == "cr":
        return form_word(table.key, table.words) if several_forms else "cr"
    if table.state == "ref":
        return "graphite" if table.formula == "C" else "g"
    return table.state


def main_records(names: Container[str] | None = None) -> Iterator[BuildRecord]:
    """Records of the main tables in the order of their keys, all or those of some names."""
    active = {
        identity.table.key: enthalpy
        for identity in identities()
        if (enthalpy := active_enthalpy(identity.formula, identity.table, identity.cas))
    }
    moved = {
        identity.formula: active[identity.table.key].value - identity.table.dfH298
        for identity in identities()
        if identity.state == "g" and identity.table.key in active
    }
    for identity in identities():
        if names is not None and identity.name not in names:
            continue
        table = identity.table
        enthalpy = active.get(table.key) or main_enthalpy(identity.name, table, moved)
        yield _record(identity, enthalpy)


def _record(identity: Identity, enthalpy: Enthalpy) -> BuildRecord:
    table, name = identity.table, identity.name
    pieces, error = fitted(table)
    S298, entropy_remark = _CORRECTED_ENTROPIES.get(name, (table.S298, ""))
    u_dfH298, u_S298 = key_uncertainties(name, enthalpy.value, S298)
    remarks = (
        _REMARKS.get(name, ""),
        _COMPOSITE_REMARK if table.key in _COMPOSITES else "",
        enthalpy.remark,
        entropy_remark,
        table.remark,
    )
    return BuildRecord(
        formula=identity.formula,
        state=identity.state,
        phase=identity.phase,
        common_name=common_name(table.key, table.words, identity.formula, identity.state),
        cas=identity.cas,
        dfH298=enthalpy.value,
        u_dfH298=u_dfH298 if enthalpy.uncertainty is None else enthalpy.uncertainty,
        S298=S298,
        u_S298=u_S298,
        pieces=pieces,
        source_enthalpy=enthalpy.source,
        source_entropy=JANAF,
        source_heat_capacity=JANAF,
        status="superseded" if name in _SUPERSEDED else "",
        fit_error=error,
        remark="; ".join(remark for remark in remarks if remark),
    )


def fitted(table: MainTable) -> tuple[tuple[Piece, ...], float]:
    """Pieces of a table and their largest |ΔG/RT|, from 200 K on or else from 298.15 K on."""
    pieces, T, errors = _fit(table.between(LOWEST))
    good = np.all(errors <= np.where(T < REFERENCE_TEMPERATURE, FAIR_FIT, GOOD_FIT))
    if not good and T[0] < REFERENCE_TEMPERATURE and table.key not in _COMPOSITES:
        shorter, _, smaller = _fit(table.between(REFERENCE_TEMPERATURE))
        if np.max(smaller) < np.max(errors):
            pieces, errors = shorter, smaller
    return pieces, float(np.max(errors))


def fit_columns(table: MainTable) -> Table:
    """The table's columns as the fit reads them."""
    S298 = table.S298
    return Table.read(table.T, table.Cp, table.H, table.S - S298, table.gibbs_function - S298)


def _fit(table: MainTable) -> tuple[tuple[Piece, ...], FloatArray, FloatArray]:
    S298 = table.S298
    columns = (table.T, table.Cp, table.H, table.S - S298, table.gibbs_function - S298)
    pieces = fit_heat_capacity(*columns, tolerance=AIM, labels=dict(table.labels))
    return pieces, table.T, np.abs(gibbs_errors(pieces, fit_columns(table)))
