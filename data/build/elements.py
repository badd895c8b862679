"""Writes ``elements.csv``: atomic weights and the forms that make up each reference state."""

from __future__ import annotations

import csv
from collections.abc import Iterable, Sequence
from importlib.resources import files
from typing import Final

from gibbsmin.data.build.record import BuildRecord
from gibbsmin.data.build.write import table_text

from gibbsmin.thermo.formula import parse_formula
from gibbsmin.thermo.species import Phase

HEADER = ["symbol", "name", "atomic_weight", "reference_forms", "source"]
SOURCE: Final = "IUPAC-2021"

# Allotropes that are no reference state, although they are forms of the element: the reference
# of phosphorus is the white form, and carbon has no gas as its reference.
_NO_REFERENCE: Final = frozenset({"P(red)", "P(red-iv)", "P(black)", "C(diamond)"})
_GAS_OF: Final = {"P": "P2", "S": "S2"}
_WITHOUT_GAS: Final = frozenset({"C", "W"})
_DIATOMIC: Final = frozenset(["H", "D", "N", "O", "F", "Cl", "Br", "I"])


def elements_table(records: Sequence[BuildRecord]) -> str:
    """Text of ``elements.csv`` for the elements that occur in the records."""
    occurring = {
        symbol for record in records for symbol, _ in parse_formula(record.formula).elements
    }
    text = files("gibbsmin.data.build").joinpath("atomic_weights.csv").read_text(encoding="utf-8")
    return table_text(
        HEADER,
        (
            (row["symbol"], row["name"], row["atomic_weight"], forms, SOURCE)
            for row in csv.DictReader(text.splitlines())
            if row["symbol"] in occurring
            for forms in [";".join(_reference_forms(row["symbol"], records))]
        ),
    )


def _reference_forms(symbol: str, records: Iterable[BuildRecord]) -> list[str]:
    """Crystals and liquids from the lowest entropy up, then the gas, as the usual molecule."""
    molecule = f"{symbol}2" if symbol in _DIATOMIC else symbol
    forms = [
        record
        for record in records
        if record.phase is not Phase.GAS
        and record.formula == molecule
        and record.name not in _NO_REFERENCE
    ]
    gas = f"{_GAS_OF.get(symbol, molecule)}(g)"
    names = [form.name for form in sorted(forms, key=_from_cold)]
    if symbol not in _WITHOUT_GAS and any(record.name == gas for record in records):
        names.append(gas)
    return names


def _from_cold(form: BuildRecord) -> tuple[bool, float, str]:
    return form.phase is Phase.LIQUID, form.S298, form.name
