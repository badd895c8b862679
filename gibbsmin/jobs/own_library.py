"""Reads a library file of the user's own: records that add to the library's or replace them."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from pathlib import Path
from typing import TYPE_CHECKING

import numpy as np

from gibbsmin.errors import InputError
from gibbsmin.jobs.case_text import read_tables
from gibbsmin.jobs.feed_parts import within
from gibbsmin.jobs.record_files import read_record_rows
from gibbsmin.jobs.record_thermal import thermal_of
from gibbsmin.thermo.elements import molar_mass
from gibbsmin.thermo.formula import parse_formula
from gibbsmin.thermo.index import split_name
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.measured_constants import compare_laws
from gibbsmin.thermo.reaction import Reaction
from gibbsmin.thermo.species import OWN, Phase, Species
from gibbsmin.thermo.tables import Source

if TYPE_CHECKING:
    from gibbsmin.jobs.record_schema import ConstantsTable, RecordTable

_MASS_AGREES = 1e-3
_GIVING = {
    "enthalpy": "constants or groups",
    "entropy": "calorimetry, spectrum, constants or groups",
}


@dataclass(frozen=True)
class OwnRecords:
    """Records of a file, the file's own source, and what was worked out on the way.

    ``findings`` are sentences by record name: fit errors, contributions to an entropy, how the
    second and the third law agree.
    """

    records: tuple[Species, ...]
    source: Source
    findings: Mapping[str, tuple[str, ...]]


def read_library_file(path: Path, library: Library) -> OwnRecords:
    """The records of a ``.toml``, ``.csv`` or ``.xlsx`` file.

    Raises
    ------
    InputError
        for the first fault; the sentence names the file, the record and the key.
    """
    from gibbsmin.jobs.record_schema import LibraryTable
    from gibbsmin.jobs.validation import validated

    file = str(path)
    if path.suffix.lower() == ".toml":
        tables = read_tables(path)
    else:
        tables = {"record": read_record_rows(path)}
    try:
        rows = validated(LibraryTable, tables).record
        citations = "; ".join(dict.fromkeys(row.source for row in rows))
        source = Source(f"{OWN}{path.name}", citations, "the user's")
        records: list[Species] = []
        findings: dict[str, tuple[str, ...]] = {}
        for index, row in enumerate(rows):
            with within(f"record.{index}"):
                record, found = _record(row, source.key, library)
                if record.name in findings:
                    raise InputError(
                        f'found "{record.name}" twice', "accepted is each record once", key="name"
                    )
            records.append(record)
            findings[record.name] = found
    except InputError as error:
        raise error.at(file=file) from None
    return OwnRecords(tuple(records), source, findings)


def _record(row: RecordTable, source: str, library: Library) -> tuple[Species, tuple[str, ...]]:
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
    thermal = thermal_of(row, composition, mass, library)
    record = Species(
        name=row.name,
        formula=formula,
        state=state,
        phase=_phase(state),
        common_name=row.common_name,
        cas=row.cas,
        elements=composition.elements,
        charge=composition.charge,
        molar_mass=mass,
        dfH298=_given(row.enthalpy, thermal.enthalpy),
        u_dfH298=_given(row.enthalpy_uncertainty, thermal.u_enthalpy),
        S298=_given(row.entropy, thermal.entropy),
        u_S298=_given(row.entropy_uncertainty, thermal.u_entropy),
        molar_volume=float("nan"),
        pieces=thermal.pieces,
        source_enthalpy=source,
        source_entropy=source,
        source_heat_capacity=source,
        fit_error=thermal.fit_error,
        remark="the user's own record",
    )
    findings = thermal.findings
    if row.constants is not None:
        record, said = _with_constants(row.constants, record, library)
        findings = (*findings, *said)
    for key, value in (("enthalpy", record.dfH298), ("entropy", record.S298)):
        if np.isnan(value):
            raise InputError(
                f"found no {key}",
                f'accepted is {key} = "…", or what gives it: {_GIVING[key]}',
                key=key,
            )
    return record, findings


def _given(value: float | None, otherwise: float) -> float:
    return otherwise if value is None else value


def _phase(state: str) -> Phase:
    return {"g": Phase.GAS, "l": Phase.LIQUID}.get(state, Phase.SOLID)


def _with_constants(
    given: ConstantsTable, record: Species, library: Library
) -> tuple[Species, tuple[str, ...]]:
    """The record with what measured constants say of it."""
    with within("constants"):
        bare = replace(record, dfH298=_or(record.dfH298, 0.0), S298=_or(record.S298, 0.0))
        reaction = Reaction.read(given.reaction, library.overruled([bare]))
        coefficients = {
            _form(substance.forms, record.name): float(number)
            for number, substance in reaction.terms
        }
        laws = compare_laws(record, coefficients, given.temperature, given.log10_K)
    said = [
        f"Second law: ΔfH = {laws.second_law_enthalpy / 1e3:.3f} ± "
        f"{laws.u_second_law_enthalpy / 1e3:.3f} kJ/mol, S = {laws.second_law_entropy:.2f} ± "
        f"{laws.u_second_law_entropy:.2f} J/(mol K)."
    ]
    enthalpy, u_enthalpy = laws.second_law_enthalpy, laws.u_second_law_enthalpy
    entropy, u_entropy = laws.second_law_entropy, laws.u_second_law_entropy
    if np.isfinite(record.S298):
        agree = "agree" if laws.consistent else "DISAGREE"
        said.append(
            f"Third law: ΔfH = {laws.third_law_enthalpy / 1e3:.3f} ± "
            f"{laws.u_third_law_enthalpy / 1e3:.3f} kJ/mol, drifting by {1e3 * laws.drift:.3f} ± "
            f"{1e3 * laws.u_drift:.3f} J/mol in 1000 K: the laws {agree}."
        )
        enthalpy, u_enthalpy = laws.third_law_enthalpy, laws.u_third_law_enthalpy
        entropy, u_entropy = record.S298, record.u_S298
    return replace(
        record,
        dfH298=_or(record.dfH298, enthalpy),
        u_dfH298=_or(record.u_dfH298, u_enthalpy),
        S298=entropy,
        u_S298=u_entropy,
    ), tuple(said)


def _form(forms: Sequence[Species], name: str) -> Species:
    """The form of a substance that bears the name, else its gas, else its first."""
    named = [form for form in forms if form.name == name]
    return next(iter([*named, *(form for form in forms if form.phase is Phase.GAS), *forms]))


def _or(value: float, otherwise: float) -> float:
    return otherwise if np.isnan(value) else value
