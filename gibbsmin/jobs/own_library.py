"""Reads a library file of the user's own: records that add to the library's or replace them."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING

import numpy as np

from gibbsmin.errors import InputError
from gibbsmin.jobs.case_text import read_tables
from gibbsmin.jobs.feed_parts import item_key, within
from gibbsmin.jobs.record_evaluations import Evaluated, with_calorimetry, with_constants
from gibbsmin.jobs.record_files import read_record_rows
from gibbsmin.jobs.record_thermal import thermal_of
from gibbsmin.thermo.elements import molar_mass
from gibbsmin.thermo.formula import parse_formula
from gibbsmin.thermo.index import split_name
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import OWN, Phase, Species
from gibbsmin.thermo.tables import Source

if TYPE_CHECKING:
    from gibbsmin.jobs.record_schema import RecordTable

_MASS_AGREES = 1e-3
_GIVING = {
    "enthalpy": "constants or groups",
    "entropy": "calorimetry, spectrum, constants or groups",
}


@dataclass(frozen=True)
class OwnRecords:
    """Records of a file, their sources, and what was worked out on the way.

    Each record has a source of its own, whose key names the file and the record.  ``evaluated`` is
    by record name: sentences on fit errors, contributions to an entropy, how the second and the
    third law agree, and these evaluations themselves.
    """

    records: tuple[Species, ...]
    sources: tuple[Source, ...]
    evaluated: Mapping[str, Evaluated]


def read_library_file(path: Path, library: Library) -> OwnRecords:
    """The records of a ``.toml``, ``.csv`` or ``.xlsx`` file; each may rest on those before it.

    Raises
    ------
    InputError
        for the first fault; the sentence names the file, the record and the key.
    """
    from gibbsmin.jobs.record_schema import LibraryTable
    from gibbsmin.jobs.validation import validated

    file = str(path)
    if path.suffix.lower() == ".toml":
        tables = read_tables(path, "library file")
    else:
        tables = {"record": read_record_rows(path)}
    try:
        rows = validated(LibraryTable, tables).record
        records: list[Species] = []
        sources: list[Source] = []
        evaluated: dict[str, Evaluated] = {}
        for index, row in enumerate(rows):
            with within(item_key("record", index, row.name)):
                source = Source(f"{OWN}{path.name}, {row.name}", row.source, "the user's")
                found = _record(row, source.key, library.overruled(records))
                if found.record.name in evaluated:
                    raise InputError(
                        f'found "{found.record.name}" twice',
                        "accepted is each record once",
                        key="name",
                    )
            records.append(found.record)
            sources.append(source)
            evaluated[found.record.name] = found
    except InputError as error:
        raise error.at(file=file) from None
    return OwnRecords(tuple(records), tuple(sources), evaluated)


def _record(row: RecordTable, source: str, library: Library) -> Evaluated:
    formula, state = split_name(row.name)
    with within("name"):
        composition = parse_formula(formula)
        if not state:
            raise InputError(
                f'found "{row.name}" without a state',
                'accepted is a formula and its state, such as "CO2(g)" or "NaCl(cr)"',
            )
    mass = molar_mass(composition.elements, composition.charge)
    if row.molar_mass is not None and abs(row.molar_mass * 1e-3 / mass - 1.0) > _MASS_AGREES:
        raise InputError(
            f"found {row.molar_mass:g} g/mol, while {formula} has {1e3 * mass:.5g} g/mol",
            "accepted is the molar mass of the formula, or none",
            key="molar_mass",
        )
    phase = _phase(state)
    if row.density is not None and phase is Phase.GAS:
        raise InputError(
            "found a density of a gas, which follows from temperature and pressure",
            'accepted is that of a solid or a liquid, such as "5.2 kg/L"',
            key="density",
        )
    thermal = thermal_of(row, composition, mass, library)
    record = Species(
        name=row.name,
        formula=formula,
        state=state,
        phase=phase,
        common_name=row.common_name,
        cas=row.cas,
        elements=composition.elements,
        charge=composition.charge,
        molar_mass=mass,
        dfH298=_given(row.enthalpy, thermal.enthalpy),
        u_dfH298=_given(row.enthalpy_uncertainty, thermal.u_enthalpy),
        S298=_given(row.entropy, thermal.entropy),
        u_S298=_given(row.entropy_uncertainty, thermal.u_entropy),
        molar_volume=float("nan") if row.density is None else mass / row.density,
        pieces=thermal.pieces,
        source_enthalpy=source,
        source_entropy=source,
        source_heat_capacity=source,
        fit_error=thermal.fit_error,
        remark="the user's own record",
    )
    evaluated = Evaluated(record, thermal.findings)
    if row.calorimetry is not None:
        known = row.entropy is not None or row.spectrum is not None
        evaluated = with_calorimetry(row.calorimetry, evaluated, known=known)
    if row.constants is not None:
        evaluated = with_constants(row.constants, evaluated, library)
    record = evaluated.record
    for key, value in (("enthalpy", record.dfH298), ("entropy", record.S298)):
        if np.isnan(value):
            raise InputError(
                f"found no {key}",
                f'accepted is {key} = "…", or what gives it: {_GIVING[key]}',
                key=key,
            )
    return evaluated


def _given(value: float | None, otherwise: float) -> float:
    return otherwise if value is None else value


def _phase(state: str) -> Phase:
    return {"g": Phase.GAS, "l": Phase.LIQUID}.get(state, Phase.SOLID)
