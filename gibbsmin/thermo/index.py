"""Indices of the records: by name, formula, composition, common name and registry number."""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from functools import cached_property
from typing import Final

from gibbsmin.errors import FormulaError
from gibbsmin.thermo.formula import parse_formula
from gibbsmin.thermo.nearest import nearest_formulas
from gibbsmin.thermo.species import Phase, Species
from gibbsmin.thermo.spelling import folded

_NAME: Final = re.compile(r"(?P<formula>.+)\((?P<state>[a-z][a-z0-9 ,-]*)\)$")


@dataclass(frozen=True, eq=False)
class Index:
    """Looks records up; each method gives an empty answer where nothing fits."""

    records: tuple[Species, ...]

    @cached_property
    def by_name(self) -> Mapping[str, Species]:
        """Records by their exact name."""
        return {record.name: record for record in self.records}

    @cached_property
    def by_formula(self) -> Mapping[str, tuple[Species, ...]]:
        """All forms of each formula, in the library's order."""
        return _grouped((record.formula, record) for record in self.records)

    @cached_property
    def _by_common_name(self) -> Mapping[str, tuple[Species, ...]]:
        return _grouped((folded(record.common_name), record) for record in self.records)

    @cached_property
    def by_cas(self) -> Mapping[str, tuple[Species, ...]]:
        """Records by their registry number."""
        return _grouped((record.cas, record) for record in self.records)

    def called(self, text: str) -> tuple[Species, ...]:
        """Records of that registry number or common name."""
        return self.by_cas.get(text) or self._by_common_name.get(folded(text), ())

    def name_contains(self, text: str) -> tuple[Species, ...]:
        """Records whose common name contains the text."""
        part = folded(text)
        return tuple(record for record in self.records if part in folded(record.common_name))

    def same_composition(self, text: str) -> tuple[Species, ...]:
        """Records made of what the formula is made of, isomers too."""
        try:
            formula = parse_formula(text)
        except FormulaError:
            return ()
        wanted = (formula.elements, formula.charge)
        return tuple(r for r in self.records if (r.elements, r.charge) == wanted)

    def nearest(self, text: str, count: int) -> tuple[Species, ...]:
        """Records most like the text, one of each formula; the forms of a formula that is there."""
        formula, state = split_name(text)
        if state and formula in self.by_formula:
            return self.by_formula[formula][:count]
        near = nearest_formulas(formula, self.by_formula, count)
        return tuple(_usual_form(forms, state or "g") for forms in near)


def split_name(text: str) -> tuple[str, str]:
    """Formula and state of a name such as ``CO2(g)``; the state is empty where none is named."""
    stated = _NAME.match(text)
    return (stated["formula"], stated["state"]) if stated else (text, "")


def current(records: Iterable[Species]) -> tuple[Species, ...]:
    """The records that are not superseded, or all where every one is."""
    records = tuple(records)
    return tuple(record for record in records if not record.superseded) or records


def _usual_form(forms: tuple[Species, ...], state: str) -> Species:
    return min(current(forms), key=lambda r: (r.state != state, r.phase is not Phase.GAS))


def _grouped(pairs: Iterable[tuple[str, Species]]) -> dict[str, tuple[Species, ...]]:
    groups: dict[str, list[Species]] = {}
    for key, record in pairs:
        if key:
            groups.setdefault(key, []).append(record)
    return {key: tuple(group) for key, group in groups.items()}
