"""Turns a feed table into a stream: names into records, the user's units into mol."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from contextlib import contextmanager
from typing import TYPE_CHECKING

from gibbsmin.errors import InputError, UnitError, UnknownSpeciesError
from gibbsmin.jobs.compositions import compositions
from gibbsmin.reactor.streams import Stream
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Phase, Species
from gibbsmin.units import Dimension, Measure, Unit, read_amount, read_amount_unit, shown

if TYPE_CHECKING:
    from gibbsmin.jobs.case_schema import FeedTable

_MASS = (Dimension.MASS, Dimension.MASS_FLOW)
_NORMAL_VOLUME = (Dimension.NORMAL_VOLUME, Dimension.NORMAL_VOLUME_FLOW)


@contextmanager
def placed(key: str) -> Iterator[None]:
    """Adds the key to the errors of what stands under it."""
    try:
        yield
    except InputError as error:
        raise error.at(key=key) from None


def read_streams(tables: Mapping[str, FeedTable], library: Library) -> tuple[Stream, ...]:
    """The streams of a case: all of them flows, or all quantities, and not all nothing."""
    streams = tuple(_read_stream(name, table, library) for name, table in tables.items())
    first = streams[0]
    for stream in streams:
        if stream.is_flow != first.is_flow:
            raise UnitError(
                f'found "{stream.unit}", which is {_kind(stream.is_flow)}, '
                f'while feed.{first.name} is {_kind(first.is_flow)} in "{first.unit}"',
                "accepted are flows in all streams or quantities in all",
                key=f"feed.{stream.name}.unit",
            )
    if not any(amount for stream in streams for amount in stream.amounts.values()):
        raise InputError(
            "found amounts that are all zero", "accepted is at least one above zero", key="feed"
        )
    return streams


def resolve(text: str, library: Library) -> Species:
    """The record of a name, where a bare element such as C could not be its lone atom by mistake.

    Raises
    ------
    UnknownSpeciesError
        as the library does, and for a bare element symbol whose gas record is the single atom
        though the element has liquid or solid records.
    """
    record = library.resolve(text)
    forms = library.forms(record.formula)
    if (
        record.phase is Phase.GAS
        and record.atoms == 1
        and record.formula == text.strip()
        and any(form.phase is not Phase.GAS for form in forms)
    ):
        raise UnknownSpeciesError(
            f"found {shown(text)}, which could be single atoms in the gas or a condensed form",
            f"accepted is one of {', '.join(form.name for form in forms)}",
        )
    return record


def _read_stream(name: str, table: FeedTable, library: Library) -> Stream:
    measures = _measures(name, table)
    unit = table.unit or next(iter(measures.values())).unit
    amounts: dict[str, float] = {}
    written: dict[str, str] = {}
    for text, measure in measures.items():
        with placed(f"feed.{name}.amounts.{text}"):
            _check_flow(measure.unit, unit)
            parts = _parts(text, library)
            if len(parts) == 1:
                _check_new(text, next(iter(parts)).name, written)
            for record, moles in moles_of(measure, parts).items():
                amounts[record.name] = amounts.get(record.name, 0.0) + moles
    return Stream(
        name=name,
        temperature=table.temperature,
        pressure=table.pressure,
        amounts=amounts,
        unit=unit.text,
        is_flow=unit.dimension.is_flow,
    )


def _measures(name: str, table: FeedTable) -> dict[str, Measure]:
    """The amounts as written, each with its own unit or in the stream's."""
    if table.unit is None and not all(isinstance(given, str) for given in table.amounts.values()):
        with placed(f"feed.{name}.unit"):
            read_amount_unit(None)
    measures = {}
    for text, given in table.amounts.items():
        with placed(f"feed.{name}.amounts.{text}"):
            measures[text] = read_amount(given, table.unit)
    return measures


def _check_flow(found: Unit, unit: Unit) -> None:
    if found.dimension.is_flow != unit.dimension.is_flow:
        raise UnitError(
            f'found "{found.text}", which is {_kind(found.dimension.is_flow)}, '
            f'in a stream in "{unit.text}"',
            f"accepted is {_kind(unit.dimension.is_flow)}",
        )


def _check_new(text: str, name: str, written: dict[str, str]) -> None:
    if name in written:
        raise InputError(
            f'found {name} a second time, first written "{written[name]}"',
            "accepted is one amount of each record",
        )
    written[name] = text


def _parts(text: str, library: Library) -> dict[Species, float]:
    """Mole fractions of what a name stands for: a record, or the parts of a mixture."""
    mixture = compositions().get(text.strip().casefold())
    if mixture is None:
        return {resolve(text, library): 1.0}
    return {library[name]: fraction for name, fraction in mixture.items()}


def moles_of(measure: Measure, parts: Mapping[Species, float]) -> dict[Species, float]:
    """Moles of each part of a measured amount, whose mole fractions are given."""
    total = measure.value
    if measure.unit.dimension in _MASS:
        total /= sum(fraction * record.molar_mass for record, fraction in parts.items())
    if measure.unit.dimension in _NORMAL_VOLUME:
        for record in parts:
            if record.phase is not Phase.GAS:
                raise UnitError(
                    f'found "{measure.unit.text}" for {record.name}, which is a {record.phase}',
                    "accepted is a molar amount or a mass",
                )
    return {record: total * fraction for record, fraction in parts.items()}


def _kind(is_flow: bool) -> str:
    return "a flow" if is_flow else "a quantity"
