"""Species records for people, as text with tables, and for programs, as plain data."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import asdict
from typing import Any

import numpy as np
from rich.console import Group, RenderableType
from rich.text import Text

from gibbsmin.arrays import FloatArray
from gibbsmin.constants import REFERENCE_TEMPERATURE
from gibbsmin.present.layout import heading, number, pairs, sentences, short, table, uncertainty
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.properties import PropertyTable
from gibbsmin.thermo.reaction_path import range_warning
from gibbsmin.thermo.species import Species
from gibbsmin.thermo.uncertainty import (
    BY_DEFINITION,
    OWN_RECORD,
    PUBLISHED,
    record_uncertainties,
)


def species_list_view(records: Sequence[Species]) -> RenderableType:
    """One line for each record."""
    rows = [
        (
            record.name,
            record.common_name,
            record.cas,
            number(record.dfH298 / 1000, 3),
            uncertainty(record.u_dfH298 / 1000),
            number(record.S298, 3),
            f"{short(record.T_low)} – {short(record.T_high)}",
            record.status,
        )
        for record in records
    ]
    headers = (
        "record",
        "common name",
        "CAS",
        "ΔfH 298 K\nkJ/mol",
        "standard\nuncertainty",
        "S 298 K\nJ/(mol K)",
        "range\nK",
        "status",
    )
    words = ("record", "common name", "CAS", "status")
    example = f'To see one in full, name it: gibbsmin species "{records[0].name}"'
    return Group(
        heading(f"{len(records)} records"),
        Text(""),
        table(headers, rows, words=words),
        Text(example),
    )


def species_view(record: Species, temperatures: FloatArray, library: Library) -> RenderableType:
    """Everything the library holds of one record, with its properties at the temperatures, K."""
    named = f"{record.name}, {record.common_name}" if record.common_name else record.name
    return Group(
        heading(named),
        pairs(_facts(record)),
        heading("Properties at 1 bar"),
        _properties(record, temperatures),
        *sentences("Warnings", species_warnings(record, temperatures)),
        heading("Heat capacity: Cp = A + B t + C t² + D t³ + E/t² in J/(mol K), t = T/(1000 K)"),
        _pieces(record),
        *sentences("Transitions", _transitions(record)),
        heading("Sources"),
        pairs(_sources(record, library)),
        *sentences("Remark", [record.remark] if record.remark else []),
    )


def _facts(record: Species) -> Iterator[tuple[str, str]]:
    yield "formula", record.formula
    yield "phase", record.phase.value + (", superseded" if record.superseded else "")
    yield "CAS", record.cas or "–"
    yield "molar mass", f"{short(1000 * record.molar_mass)} g/mol"
    if not math.isnan(record.molar_volume):
        yield "molar volume", f"{number(1e6 * record.molar_volume, 2)} cm³/mol"
    known = record_uncertainties([record])
    u_H = _uncertainty(known.enthalpy[0] / 1000, known.enthalpy_origins[0])
    u_S = _uncertainty(known.entropy[0], known.entropy_origins[0])
    yield "enthalpy of formation at 298.15 K", f"{number(record.dfH298 / 1000, 3)} kJ/mol{u_H}"
    S = f"{number(record.S298, 3)} J/(mol K){u_S}"
    yield "absolute entropy at 298.15 K and 1 bar", S
    yield "range", f"{short(record.T_low)} K to {short(record.T_high)} K"
    if not math.isnan(record.fit_error):
        yield "largest fit error |ΔG/RT|", f"{record.fit_error:.1e}"


def _uncertainty(value: float, origin: str) -> str:
    if origin == BY_DEFINITION:
        return ", exact by definition"
    if origin in (PUBLISHED, OWN_RECORD):
        return f" ± {value:.2g} (standard uncertainty)"
    return f", no uncertainty given, counted as ± {value:.2g}"


def _properties(record: Species, temperatures: FloatArray) -> RenderableType:
    properties = PropertyTable.of([record])
    columns = (
        properties.heat_capacity(temperatures)[:, 0],
        properties.entropy(temperatures)[:, 0],
        (properties.enthalpy(temperatures)[:, 0] - record.dfH298) / 1000,
        properties.enthalpy(temperatures)[:, 0] / 1000,
        properties.gibbs_energy(temperatures)[:, 0] / 1000,
    )
    rows = [
        (number(T, 2), number(T - 273.15, 2), *(number(float(column[k]), 3) for column in columns))
        for k, T in enumerate(temperatures.tolist())
    ]
    headers = (
        "T\nK",
        "T\n°C",
        "Cp\nJ/(mol K)",
        "S\nJ/(mol K)",
        "H − H(298.15 K)\nkJ/mol",
        "H with ΔfH 298 K\nkJ/mol",
        "G = H − T S\nkJ/mol",
    )
    return table(headers, rows)


def _pieces(record: Species) -> RenderableType:
    rows = [
        tuple(short(value) for value in (p.T_low, p.T_high, p.A, p.B, p.C, p.D, p.E))
        for p in record.pieces
    ]
    return table(("from K", "to K", "A", "B", "C", "D", "E"), rows)


def _transitions(record: Species) -> Iterator[str]:
    for piece in record.pieces:
        if piece.transition or piece.label:
            taken = f"takes up {number(piece.transition / 1000, 3)} kJ/mol"
            if not piece.transition:
                taken = "takes up no heat; the heat capacity changes"
            yield f"{piece.label or 'transition'} at {short(piece.T_low)} K, {taken}"


def _source_keys(record: Species) -> dict[str, str]:
    return {
        "enthalpy": record.source_enthalpy,
        "entropy": record.source_entropy,
        "heat capacity": record.source_heat_capacity,
    }


def _sources(record: Species, library: Library) -> Iterator[tuple[str, str]]:
    """Each source once, with all that it gives."""
    keys = _source_keys(record)
    for key in dict.fromkeys(keys.values()):
        source = library.source(key)
        given = ", ".join(what for what, key_of_it in keys.items() if key_of_it == key)
        yield given, f"{source.key}: {source.citation} [{source.status}]"


def species_warnings(record: Species, temperatures: FloatArray) -> list[str]:
    """What the user should know about values at these temperatures, K."""
    outside = temperatures[(temperatures < record.T_low) | (temperatures > record.T_high)]
    return [range_warning(record, outside)] if outside.size else []


def species_document(record: Species, temperatures: FloatArray, library: Library) -> dict[str, Any]:
    """A record as plain data; an unknown value is None, units stand in the keys."""
    properties = PropertyTable.of([record])
    Cp, S = properties.heat_capacity(temperatures), properties.entropy(temperatures)
    H, G = properties.enthalpy(temperatures), properties.gibbs_energy(temperatures)
    known = record_uncertainties([record])
    return {
        "name": record.name,
        "formula": record.formula,
        "state": record.state,
        "phase": record.phase.value,
        "common_name": record.common_name,
        "cas": record.cas,
        "status": record.status,
        "elements": dict(record.elements),
        "charge": record.charge,
        "molar_mass_g_per_mol": 1000 * record.molar_mass,
        "molar_volume_cm3_per_mol": _known(1e6 * record.molar_volume),
        "reference_temperature_K": REFERENCE_TEMPERATURE,
        "dfH298_kJ_per_mol": _known(record.dfH298 / 1000),
        "u_dfH298_kJ_per_mol": _known(record.u_dfH298 / 1000),
        "S298_J_per_mol_K": _known(record.S298),
        "u_S298_J_per_mol_K": _known(record.u_S298),
        "uncertainty_counted": {
            "enthalpy_kJ_per_mol": float(known.enthalpy[0]) / 1000,
            "enthalpy_origin": known.enthalpy_origins[0],
            "entropy_J_per_mol_K": float(known.entropy[0]),
            "entropy_origin": known.entropy_origins[0],
        },
        "T_low_K": record.T_low,
        "T_high_K": record.T_high,
        "fit_error_G_RT": _known(record.fit_error),
        "properties": [
            {
                "temperature_K": T,
                "heat_capacity_J_per_mol_K": float(Cp[k, 0]),
                "entropy_J_per_mol_K": float(S[k, 0]),
                "enthalpy_kJ_per_mol": float(H[k, 0]) / 1000,
                "gibbs_energy_kJ_per_mol": float(G[k, 0]) / 1000,
            }
            for k, T in enumerate(temperatures.tolist())
        ],
        "pieces": [
            {
                "T_low_K": piece.T_low,
                "T_high_K": piece.T_high,
                **{letter: getattr(piece, letter) for letter in "ABCDE"},
                "transition": piece.label,
                "transition_kJ_per_mol": piece.transition / 1000,
            }
            for piece in record.pieces
        ],
        "sources": {
            what: asdict(library.source(key)) for what, key in _source_keys(record).items()
        },
        "remark": record.remark,
        "warnings": species_warnings(record, temperatures),
    }


def usual_temperatures(T_low: float, T_high: float) -> FloatArray:
    """Temperatures in K that are shown where none is asked for, within a range."""
    T = np.array([298.15, 400, 500, 600, 800, 1000, 1200, 1500, 2000, 2500, 3000])
    kept = T[(T_low <= T) & (T_high >= T)]
    return kept if kept.size else np.array([T_low])


def _known(value: float) -> float | None:
    return None if math.isnan(value) else value
