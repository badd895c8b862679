"""Registry numbers for the main tables' substances.

The package chemicals lists the same tables with registry numbers, so a number is taken where
composition, enthalpy of formation and entropy of a gas or liquid all agree; isomers cannot be
mixed up.  A crystal takes the number of its own gas or liquid when the substance is written alike,
or that of an inorganic compound whose name and composition both agree.
"""

from __future__ import annotations

import csv
from collections.abc import Iterable
from functools import cache
from importlib.util import find_spec
from pathlib import Path

from gibbsmin.data.build.names import overrides
from gibbsmin.data.build.tables import MainTable

from gibbsmin.errors import FormulaError, GibbsminError
from gibbsmin.thermo.formula import parse_formula

Composition = tuple[tuple[tuple[str, float], ...], float]


def chemicals_folder(*parts: str) -> Path:
    """A path inside the package chemicals, found without importing it."""
    package = find_spec("chemicals")
    if package is None or package.origin is None:
        raise GibbsminError('the package "chemicals" is not installed; install "gibbsmin[build]"')
    return Path(package.origin).parent.joinpath(*parts)


def composition(formula: str) -> Composition:
    parsed = parse_formula(formula)
    return parsed.elements, parsed.charge


def registry_numbers(tables: Iterable[tuple[MainTable, str]]) -> dict[str, str]:
    """Registry numbers by table key, from pairs of a table and its trade formula."""
    found: dict[str, str] = {}
    by_substance: dict[tuple[str, str], str] = {}
    listed = list(tables)
    for table, formula in listed:
        number = overrides().get(table.key, {}).get("cas") or _same_values().get(
            (_phase(table), _code(table), *_values(table))
        )
        if number:
            found[table.key] = number
            if table.state in ("l", "cr"):
                by_substance.setdefault((formula, ""), number)
            by_substance.setdefault((formula, table.words.partition(",")[0]), number)
    for table, formula in listed:
        if table.key in found or formula[-1] in "+-":
            continue
        number = by_substance.get((formula, table.words)) or _by_name().get(
            (table.words.lower(), composition(formula))
        )
        if number:
            found[table.key] = number
    return found


def _phase(table: MainTable) -> str:
    return "g" if table.state in ("g", "ref") else "l"


def _code(table: MainTable) -> Composition:
    return composition("e-" if table.code == "e1-" else table.code)


def _values(table: MainTable) -> tuple[int, int]:
    return round(table.dfH298), round(1000 * table.S298)


@cache
def _same_values() -> dict[tuple[str, Composition, int, int], str]:
    numbers: dict[tuple[str, Composition, int, int], str] = {}
    path = chemicals_folder("Reactions", "JANAF_1998.tsv")
    with path.open(encoding="utf-8", newline="") as file:
        for row in csv.DictReader(file, delimiter="\t"):
            try:
                elements = composition(row["formula"])
            except FormulaError:
                continue
            for phase in "gl":
                enthalpy, entropy = row[f"Hf{phase}"], row[f"S0{phase}"]
                if enthalpy and entropy:
                    values = round(float(enthalpy)), round(1000 * float(entropy))
                    numbers[(phase, elements, *values)] = row["CAS"]
    return numbers


@cache
def _by_name() -> dict[tuple[str, Composition], str]:
    """Inorganic compounds by each of their names, with their composition."""
    numbers: dict[tuple[str, Composition], str] = {}
    path = chemicals_folder("Identifiers", "Inorganic db.tsv")
    for line in path.read_text(encoding="utf-8").splitlines():
        _, cas, formula, _, _, _, _, *names = line.split("\t")
        try:
            elements = composition(formula)
        except FormulaError:
            continue
        for name in names:
            numbers.setdefault((name.strip().lower(), elements), cas)
    return numbers
