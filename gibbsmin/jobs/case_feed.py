"""Turns a feed table into a stream: names into records, the user's units into mol."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from typing import TYPE_CHECKING

from gibbsmin.errors import InputError, UnitError
from gibbsmin.jobs.feed_analysis import analysed_amounts
from gibbsmin.jobs.feed_fuel import FuelFeed, fuel_feed
from gibbsmin.jobs.feed_parts import moles_of, parts_of, placed
from gibbsmin.jobs.feed_water import with_water
from gibbsmin.reactor.streams import Stream
from gibbsmin.thermo.library import Library
from gibbsmin.thermo.species import Species
from gibbsmin.units import Measure, Unit, read_amount, read_amount_unit

if TYPE_CHECKING:
    from gibbsmin.jobs.feed_schema import FeedTable


def read_streams(
    tables: Mapping[str, FeedTable], library: Library
) -> tuple[tuple[Stream, ...], tuple[Species, ...]]:
    """The streams of a case, and the records of those that are fuels.

    The streams are all of them flows, or all quantities, and not all nothing.
    """
    fuels = {
        name: fuel_feed(name, table.fuel, table.total, table.temperature, library)
        for name, table in tables.items()
        if table.fuel is not None and table.total is not None
    }
    streams = tuple(
        _fuel_stream(name, table, fuels[name])
        if name in fuels
        else _read_stream(name, table, library)
        for name, table in tables.items()
    )
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
    return streams, tuple(fuel.record for fuel in fuels.values())


def _fuel_stream(name: str, table: FeedTable, fuel: FuelFeed) -> Stream:
    stream = _stream(name, table, fuel.amounts, fuel.unit, fuel.remarks)
    return replace(stream, warnings=fuel.warnings)


def _read_stream(name: str, table: FeedTable, library: Library) -> Stream:
    if table.analysis is not None and table.total is not None:
        analysed, remarks = analysed_amounts(name, table, table.total, table.analysis, library)
        wet = with_water(name, table, analysed, library)
        return _stream(name, table, wet, table.total.unit, remarks)
    measures = _measures(name, table)
    unit = table.unit or next(iter(measures.values())).unit
    amounts: dict[str, float] = {}
    written: dict[str, str] = {}
    for text, measure in measures.items():
        with placed(f"feed.{name}.amounts.{text}"):
            _check_flow(measure.unit, unit)
            parts = parts_of(text, library)
            if len(parts) == 1:
                _check_new(text, next(iter(parts)).name, written)
            for record, moles in moles_of(measure, parts).items():
                amounts[record.name] = amounts.get(record.name, 0.0) + moles
    return _stream(name, table, with_water(name, table, amounts, library), unit)


def _stream(
    name: str,
    table: FeedTable,
    amounts: Mapping[str, float],
    unit: Unit,
    remarks: tuple[str, ...] = (),
) -> Stream:
    return Stream(
        name=name,
        temperature=table.temperature,
        pressure=table.pressure,
        amounts=amounts,
        unit=unit.text,
        is_flow=unit.dimension.is_flow,
        remarks=remarks,
    )


def _measures(name: str, table: FeedTable) -> dict[str, Measure]:
    """The amounts as written, each with its own unit or in the stream's."""
    given_amounts = table.amounts or {}
    if table.unit is None and not all(isinstance(given, str) for given in given_amounts.values()):
        with placed(f"feed.{name}.unit"):
            read_amount_unit(None)
    measures = {}
    for text, given in given_amounts.items():
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


def _kind(is_flow: bool) -> str:
    return "a flow" if is_flow else "a quantity"
