"""The library: every species record, found by name, formula, registry number or elements."""

from __future__ import annotations

import re
from collections.abc import Collection, Iterable, Mapping, Sequence
from dataclasses import dataclass, field, replace
from functools import cache, cached_property
from importlib.resources import files
from importlib.resources.abc import Traversable
from typing import Final, Self

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.errors import InputError, UnknownSpeciesError
from gibbsmin.thermo.elements import SYMBOLS, atomic_weights
from gibbsmin.thermo.formula import plain_text
from gibbsmin.thermo.index import Index, current, split_name
from gibbsmin.thermo.properties import Deviations, PropertyTable
from gibbsmin.thermo.species import Phase, Species
from gibbsmin.thermo.tables import Source, read_sources, read_species

_CAS: Final = re.compile(r"\d{2,7}-\d\d-\d")


@dataclass(frozen=True, eq=False)
class Library:
    """All records and their sources; ``library["CO2(g)"]`` is the record of that exact name.

    Raises
    ------
    InputError
        If two records bear the same name.
    """

    records: tuple[Species, ...]
    sources: tuple[Source, ...] = ()
    deviations: Mapping[str, tuple[FloatArray, FloatArray]] = field(default_factory=dict)
    """By record name, how far its H and S stand off in each of B states, each (B,)."""

    def __post_init__(self) -> None:
        if len(self._index.by_name) < len(self.records):
            names = [record.name for record in self.records]
            double = next(name for k, name in enumerate(names) if name in names[:k])
            raise InputError(f'found the name "{double}" twice', "accepted is one record of a name")

    @classmethod
    def read(cls, folder: Traversable) -> Self:
        """The library whose tables stand in a folder; a row that cannot be used raises."""
        return cls(read_species(folder), read_sources(folder))

    def extended(self, records: Iterable[Species], sources: Iterable[Source] = ()) -> Self:
        """This library with further records and their sources."""
        return replace(self, records=(*self.records, *records), sources=(*self.sources, *sources))

    def overruled(self, records: Iterable[Species], sources: Iterable[Source] = ()) -> Self:
        """This library with records that take the place of those of the same name."""
        records = tuple(records)
        names = {record.name for record in records}
        kept = tuple(record for record in self.records if record.name not in names)
        return replace(self, records=(*kept, *records), sources=(*self.sources, *sources))

    @cached_property
    def _index(self) -> Index:
        return Index(self.records)

    @cached_property
    def _source_by_key(self) -> Mapping[str, Source]:
        return {source.key: source for source in self.sources}

    @property
    def atomic_weights(self) -> Mapping[str, float]:
        """Atomic weights in kg/mol by symbol."""
        return atomic_weights()

    def source(self, key: str) -> Source:
        """The source of that key; an unknown key raises :class:`InputError`."""
        if key not in self._source_by_key:
            raise InputError(
                f'found the source key "{key}", which the library does not list',
                "accepted is a key of its table of sources",
            )
        return self._source_by_key[key]

    def __getitem__(self, name: str) -> Species:
        """The record of that exact name; any other raises :class:`UnknownSpeciesError`."""
        record = self._index.by_name.get(plain_text(name))
        if record is None:
            raise self.unknown(name)
        return record

    def deviating(self, deviations: Mapping[str, tuple[FloatArray, FloatArray]]) -> Self:
        """This library with other numbers of some records in each state of a batch."""
        return replace(self, deviations=deviations)

    def properties(self, records: Sequence[Species]) -> PropertyTable:
        """Standard properties of some of its records."""
        table = PropertyTable.of(records)
        if not self.deviations:
            return table
        states = next(iter(self.deviations.values()))[0].size
        nothing = (np.zeros(states), np.zeros(states))
        parts = [self.deviations.get(record.name, nothing) for record in records]
        H, S = (
            np.stack(kind, axis=1) if kind else np.zeros((states, 0))
            for kind in ([part[k] for part in parts] for k in range(2))
        )
        return table.deviating(Deviations(H, S))

    def forms(self, formula: str) -> tuple[Species, ...]:
        """All records of a formula, superseded ones too; empty where there is none.

        The formula is compared as it is written in the library, so that isomers stay apart.
        """
        return self._index.by_formula.get(plain_text(formula), ())

    def resolve(self, text: str) -> Species:
        """The one record that a text names.

        Parameters
        ----------
        text
            A record's name; a bare formula, which means the gas if there is one and else the
            only condensed form; a formula with "(s)", which means its only solid form; or a
            common name or registry number that only one record bears.  A superseded record
            counts only where nothing else is left.

        Raises
        ------
        UnknownSpeciesError
            If the text names no record, with the nearest ones, or several, with those.
        """
        wanted = plain_text(text)
        if wanted in self._index.by_name:
            return self._index.by_name[wanted]
        formula, state = split_name(wanted)
        if state == "s" and self.forms(formula):
            hits = self._solids(formula)
        elif self.forms(wanted):
            forms = current(self.forms(wanted))
            hits = tuple(record for record in forms if record.phase is Phase.GAS) or forms
        else:
            hits = current(self._index.called(wanted))
        if not hits:
            raise self.unknown(text)
        if len(hits) > 1:
            raise UnknownSpeciesError(
                f'found "{text}", which names several records', f"accepted is one of {_names(hits)}"
            )
        return hits[0]

    def substance(self, text: str) -> tuple[Species, ...]:
        """The forms that a text leaves open: one where it names a state, else all of a formula.

        Parameters
        ----------
        text
            A record's name, a formula, or a common name or registry number.  Superseded forms
            are left out unless nothing else is there or one is named.

        Raises
        ------
        UnknownSpeciesError
            If nothing answers to the text, or records of several formulas do.
        """
        wanted = plain_text(text)
        if split_name(wanted)[1]:
            return (self.resolve(text),)
        forms = self.forms(wanted)
        if not forms:
            formulas = sorted({record.formula for record in self._index.called(wanted)})
            if not formulas:
                raise self.unknown(text)
            if len(formulas) > 1:
                raise UnknownSpeciesError(
                    f'found "{text}", which names several substances',
                    f"accepted is one of {', '.join(formulas)}",
                )
            forms = self.forms(formulas[0])
        return current(forms)

    def of_elements(self, symbols: Iterable[str], *, ions: bool = False) -> tuple[Species, ...]:
        """The candidates that consist of the given elements alone, in the library's order.

        Parameters
        ----------
        symbols
            Element symbols; an unknown one raises :class:`InputError`.
        ions
            Whether charged records, the electron among them, are included.
        """
        return tuple(
            record
            for record in _made_of(self.records, symbols)
            if record.proposed and (ions or record.charge == 0)
        )

    def find(
        self,
        text: str = "",
        *,
        name: str = "",
        cas: str = "",
        elements: Collection[str] = (),
    ) -> tuple[Species, ...]:
        """All records that meet every condition given, superseded ones and ions too.

        Parameters
        ----------
        text
            A record's name, a formula, a registry number or a common name; failing these, a
            formula of the same composition or a part of a common name.
        name
            A common name; failing that, a part of one.
        cas
            A registry number.
        elements
            Element symbols; a record may hold no others.
        """
        hits: Collection[Species] = self._find_text(plain_text(text)) if text else self.records
        if name:
            named = {record.name for record in self._find_name(name)}
            hits = [record for record in hits if record.name in named]
        if cas:
            hits = [record for record in hits if record.cas == cas.strip()]
        if elements:
            hits = _made_of(hits, elements)
        return tuple(hits)

    def _find_text(self, wanted: str) -> tuple[Species, ...]:
        if wanted in self._index.by_name:
            return (self._index.by_name[wanted],)
        formula, state = split_name(wanted)
        if state == "s" and self.forms(formula):
            return self._solids(formula)
        return self.forms(wanted) or self._index.same_composition(wanted) or self._find_name(wanted)

    def _find_name(self, name: str) -> tuple[Species, ...]:
        return self._index.called(name) or self._index.name_contains(name)

    def _solids(self, formula: str) -> tuple[Species, ...]:
        return current(r for r in self.forms(formula) if r.phase is Phase.SOLID)

    def nearest(self, text: str, count: int = 3) -> tuple[Species, ...]:
        """The records whose names are most like the text, one of each formula, best first."""
        return self._index.nearest(plain_text(text), count)

    def unknown(self, text: str) -> UnknownSpeciesError:
        """The error for a text that names no record, with those that it might mean."""
        if not text.strip():
            return UnknownSpeciesError(
                "found an empty name", "accepted is a library record such as CO2(g)"
            )
        if _CAS.fullmatch(text.strip()):
            return UnknownSpeciesError(
                f'found "{text}", a CAS number that no record bears',
                "accepted is the number, name or formula of a library record",
            )
        formula, state = split_name(plain_text(text))
        forms = self.forms(formula)
        if forms:
            problem = (
                "a form that the library does not hold" if state else "which leaves its form open"
            )
            return UnknownSpeciesError(
                f'found "{text}", {problem}',
                f"accepted is {' or '.join(record.name for record in forms)}",
            )
        return UnknownSpeciesError(
            f'found "{text}", which names no species',
            f"accepted is a library record, the nearest are {_names(self.nearest(text))}",
        )


@cache
def load_library() -> Library:
    """The library that is installed with the package, read once in a process."""
    return Library.read(files("gibbsmin.data"))


def _names(records: Iterable[Species]) -> str:
    return ", ".join(record.name for record in records)


def _made_of(records: Iterable[Species], symbols: Iterable[str]) -> list[Species]:
    allowed = {symbol.strip() for symbol in symbols}
    for symbol in sorted(allowed - SYMBOLS):
        raise InputError(
            f'found "{symbol}", which is no element', "accepted are element symbols such as C, H, O"
        )
    return [r for r in records if all(symbol in allowed for symbol, _ in r.elements)]
