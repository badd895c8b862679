"""Turns a case's stated uncertainties into SI, each with the name of its input."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from typing import TYPE_CHECKING, Any

from gibbsmin.errors import InputError, UnitError
from gibbsmin.jobs.case_stage import StageCase
from gibbsmin.jobs.feed_parts import item_key, moles_of, placed, resolve
from gibbsmin.jobs.stated import Correlation, StatedUncertainty
from gibbsmin.reactor.streams import Stream
from gibbsmin.thermo.library import Library
from gibbsmin.units import (
    read_amount,
    read_amount_unit,
    read_molar_energy,
    read_molar_entropy,
    read_quantity,
    read_share,
    read_temperature_difference,
    shown,
)

if TYPE_CHECKING:
    from gibbsmin.jobs.uncertainty_schema import CorrelationTable

_Reader = Callable[[object], float]
_OF_RECORDS: Mapping[str, _Reader] = {
    "enthalpy": read_molar_energy,
    "entropy": read_molar_entropy,
}


def read_uncertainties(
    table: Mapping[str, Any],
    streams: Sequence[Stream],
    stages: Sequence[StageCase],
    library: Library,
) -> tuple[StatedUncertainty, ...]:
    """Standard uncertainties of the case's numbers and of records.

    Raises
    ------
    InputError
        for a name that is no number of the case, and for what is no uncertainty of that kind.
    """
    stated = []
    for key, given in table.items():
        with placed(f"uncertainty.{key}"):
            name = input_name(key, streams, stages, library)
            stated.append(_stated(name, given, streams, library))
    return tuple(stated)


def read_correlations(
    tables: Sequence[CorrelationTable],
    streams: Sequence[Stream],
    stages: Sequence[StageCase],
    library: Library,
) -> tuple[Correlation, ...]:
    """Correlations between numbers of the case and of records."""
    found = []
    for index, table in enumerate(tables):
        with placed(f"{item_key('correlation', index)}.between"):
            first, second = (input_name(key, streams, stages, library) for key in table.between)
            found.append(Correlation(first, second, table.coefficient))
    return tuple(found)


def input_name(
    key: str, streams: Sequence[Stream], stages: Sequence[StageCase], library: Library
) -> str:
    """The input that a key means, its species by the library's name.

    Raises
    ------
    InputError
        for a key that means none.
    """
    place, _, field = key.rpartition(".")
    if field in _OF_RECORDS and not place.startswith(("feed.", "stage.", "outlet")):
        return f"{resolve(place, library).name}.{field}"
    for stream in streams:
        start = f"feed.{stream.name}"
        if key in (start, f"{start}.temperature", f"{start}.pressure"):
            return key
        if key.startswith(f"{start}.amounts."):
            record = resolve(key.removeprefix(f"{start}.amounts."), library)
            if record.name in stream.amounts:
                return f"{start}.amounts.{record.name}"
    for stage in stages:
        given = getattr(stage.specification, field, None)
        if place == stage.key and isinstance(given, float):
            return key
    places = [*(f"feed.{s.name}" for s in streams), *(stage.key for stage in stages)]
    raise InputError(
        f'found "{key}", which names no number that the case gives',
        f"accepted is a number of {', '.join(places)}, or of a record, such as "
        f'"feed.{streams[0].name}.temperature" or "CO(g).enthalpy"',
    )


def _stated(
    name: str, given: object, streams: Sequence[Stream], library: Library
) -> StatedUncertainty:
    place, _, field = name.rpartition(".")
    is_share = isinstance(given, str) and given.strip().endswith("%")
    if field in _OF_RECORDS and not place.startswith("feed."):
        value = _OF_RECORDS[field](given)
        is_share = False
    elif field == "temperature":
        value, is_share = read_temperature_difference(given), False
    elif name in [f"feed.{stream.name}" for stream in streams]:
        value, is_share = read_share(given), True
    elif is_share:
        value = read_share(given)
    elif ".amounts." in name:
        stream = next(s for s in streams if name.startswith(f"feed.{s.name}.amounts."))
        record = library[name.removeprefix(f"feed.{stream.name}.amounts.")]
        measure = read_amount(given, read_amount_unit(stream.unit))
        value = moles_of(measure, {record: 1.0})[record]
    else:
        value = read_quantity(given, "pressure_drop" if field == "pressure" else field).value
    if not value >= 0.0:
        raise UnitError(f"found {shown(given)}, which is negative", "accepted is 0 or more")
    return StatedUncertainty(name, value, is_share)
