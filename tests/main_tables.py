"""Reads the tabulated formation constants of the main tables, which the build never loads."""

from __future__ import annotations

import csv
from dataclasses import dataclass
from functools import cache
from importlib.resources import files

import numpy as np
import numpy.typing as npt
from gibbsmin.data.build.main_records import identities
from gibbsmin.data.build.tables import folder

from gibbsmin.thermo.library import load_library
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.species import Species

FloatArray = npt.NDArray[np.float64]

# J/mol/K: what the tables' own dfG/(T ln 10 log Kf) gives, to within their rounding.
TABLES_GAS_CONSTANT = 8.3143


@dataclass(frozen=True)
class FormationConstants:
    """log10 Kf by temperature (rows) and record (columns), ours and as printed."""

    T: FloatArray
    names: tuple[str, ...]
    computed: FloatArray
    printed: FloatArray


@cache
def formation_constants() -> FormationConstants:
    """Constants of all records of the main tables from 298.15 K to 3000 K.

    Ours come from the library's pieces with the tables' own enthalpies and entropies at 298.15 K,
    so that the one difference between the two is the heat capacity and the sum over elements.
    """
    T = np.array([298.15, 300.0, 350.0, 400.0, 450.0, *range(500, 3001, 100)])
    known = identities()
    records = [load_library()[identity.name] for identity in known]
    tables = [identity.table for identity in known]
    change = np.array([table.dfH298 for table in tables]) - [r.dfH298 for r in records]
    G = PropertyTable.of(records).gibbs_energy(T) + change
    G -= np.outer(T, np.array([table.S298 for table in tables]) - [r.S298 for r in records])
    formation = G - _elements(G, records)
    computed = -formation / (TABLES_GAS_CONSTANT * np.log(10) * T[:, None])
    printed = np.array([_printed(table.key, T) for table in tables]).T
    outside = [(r.T_low > T) | (r.T_high < T) for r in records]
    printed[np.array(outside).T] = np.nan
    return FormationConstants(T, tuple(r.name for r in records), computed, printed)


def _elements(G: FloatArray, records: list[Species]) -> FloatArray:
    """Gibbs energy of the elements (and electrons) in each record, by temperature."""
    place = {record.name: column for column, record in enumerate(records)}
    total = np.zeros_like(G)
    text = files("gibbsmin.data").joinpath("elements.csv").read_text(encoding="utf-8")
    for row in csv.DictReader(text.splitlines()):
        forms = [name for name in row["reference_forms"].split(";") if name in place]
        if not forms:
            continue
        stable = np.min([G[:, place[name]] / records[place[name]].atoms for name in forms], axis=0)
        counts = [dict(record.elements).get(row["symbol"], 0.0) for record in records]
        total += np.outer(stable, counts)
    return total - np.outer(G[:, place["e-(g)"]], [record.charge for record in records])


def gas_constants() -> FloatArray:
    """R in J/mol/K by which tables turned large Gibbs energies into constants, one for each."""
    found = []
    for identity in identities():
        G, K = _column(identity.table.key, 6), _column(identity.table.key, 7)
        if abs(G.get(298.15, 0.0)) > 1500:
            found.append(-1000 * G[298.15] / (298.15 * np.log(10) * K[298.15]))
    return np.array(found)


def _printed(key: str, T: FloatArray) -> FloatArray:
    cells = _column(key, 7)
    return np.array([cells.get(float(t), np.nan) for t in T])


@cache
def _column(key: str, column: int) -> dict[float, float]:
    """A column of a table by temperature, 6 for dfG in kJ/mol and 7 for log10 Kf."""
    cells = {}
    for line in (folder() / f"{key}.txt").read_text(encoding="utf-8").splitlines()[2:]:
        row = line.split("\t")
        if len(row) == 8 and row[column].strip() and not row[column].strip().endswith("inf"):
            cells[float(row[0])] = float(row[column])
    return cells
