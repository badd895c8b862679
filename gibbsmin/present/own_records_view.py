"""Records of a user's own library file, with what was worked out and what looks wrong."""

from __future__ import annotations

import math
import re
from typing import Any, Final

from rich.console import Group, RenderableType

from gibbsmin.arrays import FloatArray
from gibbsmin.jobs.own_library import OwnRecords
from gibbsmin.present.layout import MINUS, sentences
from gibbsmin.present.species_view import species_document, species_view, usual_temperatures
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.measured_constants import LawComparison
from gibbsmin.thermo.record_checks import check_record
from gibbsmin.thermo.species import Species
from gibbsmin.thermo.third_law import ThirdLawEntropy

_NEGATIVE: Final = re.compile(r"(?<!\S)-(?=\d)")


def own_records_view(own: OwnRecords, temperatures: FloatArray, library: Library) -> RenderableType:
    """Each record in full, then how it came about and how it stands to the library's."""
    extended = library.overruled(own.records, own.sources)
    parts: list[RenderableType] = []
    for record in own.records:
        parts.append(species_view(record, _shown(record, temperatures), extended))
        parts += sentences(
            "How it came about", map(_with_minus, own.evaluated[record.name].findings)
        )
        parts += sentences("Checks", map(_with_minus, check_record(record, library)))
    return Group(*parts)


def _with_minus(sentence: str) -> str:
    """The sentence with the minus sign of the figures above it."""
    return _NEGATIVE.sub(MINUS, sentence)


def own_records_document(
    own: OwnRecords, temperatures: FloatArray, library: Library
) -> dict[str, Any]:
    """The same for JSON."""
    extended = library.overruled(own.records, own.sources)
    return {
        "species": [
            {
                **species_document(record, _shown(record, temperatures), extended),
                "findings": list(own.evaluated[record.name].findings),
                "third_law": _third_law(own.evaluated[record.name].third_law),
                "measured_constants": _laws(own.evaluated[record.name].laws),
                "checks": list(check_record(record, library)),
            }
            for record in own.records
        ]
    }


def _shown(record: Species, temperatures: FloatArray) -> FloatArray:
    if temperatures.size:
        return temperatures
    return usual_temperatures(record.T_low, record.T_high)


def _third_law(found: ThirdLawEntropy | None) -> dict[str, Any] | None:
    if found is None:
        return None
    return {
        "entropy_J_per_mol_K": found.entropy,
        "uncertainty_J_per_mol_K": found.uncertainty,
        "contributions": [
            {
                "name": part.name,
                "value_J_per_mol_K": float(part.value),
                "uncertainty_J_per_mol_K": float(part.uncertainty),
            }
            for part in found.contributions
        ],
    }


def _laws(found: LawComparison | None) -> dict[str, Any] | None:
    if found is None:
        return None
    figures = {
        "second_law_enthalpy_kJ_per_mol": found.second_law_enthalpy / 1e3,
        "u_second_law_enthalpy_kJ_per_mol": found.u_second_law_enthalpy / 1e3,
        "second_law_entropy_J_per_mol_K": found.second_law_entropy,
        "u_second_law_entropy_J_per_mol_K": found.u_second_law_entropy,
        "second_law_correlation": found.second_law_correlation,
        "third_law_enthalpy_kJ_per_mol": found.third_law_enthalpy / 1e3,
        "u_third_law_enthalpy_kJ_per_mol": found.u_third_law_enthalpy / 1e3,
        "third_law_correlation": found.third_law_correlation,
        "drift_kJ_per_mol_in_1000_K": found.drift,
        "u_drift_kJ_per_mol_in_1000_K": found.u_drift,
    }
    known = {name: None if math.isnan(value) else value for name, value in figures.items()}
    return {**known, "laws_agree": None if math.isnan(found.drift) else found.consistent}
