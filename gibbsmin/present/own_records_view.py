"""Records of a user's own library file, with what was worked out and what looks wrong."""

from __future__ import annotations

import re
from typing import Any, Final

from rich.console import Group, RenderableType

from gibbsmin.arrays import FloatArray
from gibbsmin.jobs.own_library import OwnRecords
from gibbsmin.present.layout import MINUS, sentences
from gibbsmin.present.species_view import species_document, species_view, usual_temperatures
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.record_checks import check_record
from gibbsmin.thermo.species import Species

_NEGATIVE: Final = re.compile(r"(?<!\S)-(?=\d)")


def own_records_view(own: OwnRecords, temperatures: FloatArray, library: Library) -> RenderableType:
    """Each record in full, then how it came about and how it stands to the library's."""
    extended = library.overruled(own.records, own.sources)
    parts: list[RenderableType] = []
    for record in own.records:
        parts.append(species_view(record, _shown(record, temperatures), extended))
        parts += sentences("How it came about", map(_with_minus, own.findings[record.name]))
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
                "findings": list(own.findings[record.name]),
                "checks": list(check_record(record, library)),
            }
            for record in own.records
        ]
    }


def _shown(record: Species, temperatures: FloatArray) -> FloatArray:
    if temperatures.size:
        return temperatures
    return usual_temperatures(record.T_low, record.T_high)
