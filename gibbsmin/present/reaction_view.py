"""A reaction at several temperatures for people, as tables, and for programs, as plain data."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

from rich.console import Group, RenderableType
from rich.text import Text

from gibbsmin.constants import REFERENCE_TEMPERATURE
from gibbsmin.present.layout import heading, number, sentences, table, uncertainty
from gibbsmin.thermo.equation import written_number
from gibbsmin.thermo.reaction_path import (
    PathChange,
    PathPart,
    ReactionRow,
    ReactionStudy,
    ReferenceValues,
)


def reaction_view(study: ReactionStudy) -> RenderableType:
    """The values, the forms that count, the path, the phase changes and the tabulated values."""
    return Group(
        heading(str(study.reaction)),
        Text("Values per mole of reaction as written, P° = 1 bar."),
        Text(""),
        _values(study),
        heading("Path by way of 298.15 K"),
        _path(study),
        *sentences("Phase changes on the way", _phase_changes(study)),
        heading("Tabulated values at 298.15 K"),
        _reference(study.reference),
        *sentences("Warnings", study.warnings),
    )


def _values(study: ReactionStudy) -> RenderableType:
    open_forms = [
        k for k, (_, substance) in enumerate(study.reaction.terms) if len(substance.forms) > 1
    ]
    headers = ["T\nK", "T\n°C", "ΔrH\nkJ/mol", "ΔrS\nJ/(mol K)", "ΔrG\nkJ/mol", "log10 K"]
    if open_forms:
        headers.append("stable forms")
    rows = [
        (
            *_temperature(row),
            number(row.enthalpy / 1000, 3),
            number(row.entropy, 3),
            number(row.gibbs_energy / 1000, 3),
            number(row.log10_K, 4),
            *([", ".join(row.forms[k][1] for k in open_forms)] if open_forms else []),
        )
        for row in study.rows
    ]
    return table(headers, rows, words=("stable forms",))


def _temperature(row: ReactionRow) -> tuple[str, str]:
    return number(row.temperature, 2), number(row.temperature - 273.15, 2)


def _path(study: ReactionStudy) -> RenderableType:
    headers = (
        "T\nK",
        "",
        "reactants\nto 298.15 K",
        "reaction\nat 298.15 K",
        "products\nto T",
        "sum",
    )
    rows = []
    for row in study.rows:
        parts = (row.reactants_to_reference, row.reaction_at_reference, row.products_from_reference)
        enthalpies = [part.enthalpy / 1000 for part in parts]
        entropies = [part.entropy for part in parts]
        rows += [
            (_temperature(row)[0], "ΔH, kJ/mol", *_with_sum(enthalpies)),
            ("", "ΔS, J/(mol K)", *_with_sum(entropies)),
        ]
    return table(headers, rows, words=("",))


def _with_sum(values: list[float]) -> list[str]:
    return [number(value, 3) for value in (*values, sum(values))]


def _phase_changes(study: ReactionStudy) -> Iterator[str]:
    """Each change once, whichever of the temperatures it lies before."""
    seen: dict[tuple[str, float], PathChange] = {}
    for row in study.rows:
        for item in row.phase_changes:
            seen[item.substance, item.change.temperature] = item
    for item in seen.values():
        change = item.change
        forms = change.lower
        if change.upper != change.lower:
            forms = f"{change.lower} to {change.upper}"
        yield (
            f"{forms}, {change.kind}: at {number(change.temperature, 2)} K, "
            f"takes up {number(change.enthalpy / 1000, 3)} kJ/mol on heating"
        )


def _reference(reference: ReferenceValues) -> RenderableType:
    rows = [
        (
            written_number(coefficient).replace("-", "−"),
            record.name,
            number(record.dfH298 / 1000, 3),
            uncertainty(record.u_dfH298 / 1000),
            number(record.S298, 3),
            uncertainty(record.u_S298),
            record.source_enthalpy,
        )
        for coefficient, record in reference.records
    ]
    total = (
        "sum",
        "",
        number(reference.enthalpy / 1000, 3),
        "",
        number(reference.entropy, 3),
        "",
        "",
    )
    headers = (
        "ν",
        "record",
        "ΔfH\nkJ/mol",
        "standard\nuncertainty",
        "S\nJ/(mol K)",
        "standard\nuncertainty ",
        "source of ΔfH",
    )
    return table(headers, [*rows, total], words=("record", "source of ΔfH"))


def reaction_document(study: ReactionStudy) -> dict[str, Any]:
    """The study as plain data; units stand in the keys."""
    reference = study.reference
    return {
        "reaction": str(study.reaction),
        "rows": [_row_document(row) for row in study.rows],
        "reference": {
            "temperature_K": REFERENCE_TEMPERATURE,
            "enthalpy_kJ_per_mol": reference.enthalpy / 1000,
            "entropy_J_per_mol_K": reference.entropy,
            "gibbs_energy_kJ_per_mol": reference.gibbs_energy / 1000,
            "log10_K": reference.log10_K,
            "records": [
                {"name": record.name, "coefficient": float(coefficient)}
                for coefficient, record in reference.records
            ],
        },
        "warnings": list(study.warnings),
    }


def _row_document(row: ReactionRow) -> dict[str, Any]:
    return {
        "temperature_K": row.temperature,
        "enthalpy_kJ_per_mol": row.enthalpy / 1000,
        "entropy_J_per_mol_K": row.entropy,
        "gibbs_energy_kJ_per_mol": row.gibbs_energy / 1000,
        "log10_K": row.log10_K,
        "path": {
            "reactants_to_reference": _part_document(row.reactants_to_reference),
            "reaction_at_reference": _part_document(row.reaction_at_reference),
            "products_from_reference": _part_document(row.products_from_reference),
            "phase_changes": [
                {
                    "substance": item.substance,
                    "coefficient": float(item.coefficient),
                    "from": item.change.lower,
                    "to": item.change.upper,
                    "kind": item.change.kind,
                    "temperature_K": item.change.temperature,
                    "enthalpy_kJ_per_mol": item.change.enthalpy / 1000,
                }
                for item in row.phase_changes
            ],
            "forms": dict(row.forms),
        },
    }


def _part_document(part: PathPart) -> dict[str, float]:
    return {"enthalpy_kJ_per_mol": part.enthalpy / 1000, "entropy_J_per_mol_K": part.entropy}
