"""Turns a case's tables of axes into axes in SI units."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.errors import InputError, UnitError
from gibbsmin.jobs.axis import Axis
from gibbsmin.jobs.axis_place import Place, place_of
from gibbsmin.jobs.case_stage import StageCase
from gibbsmin.jobs.feed_parts import item_key, moles_of, placed
from gibbsmin.reactor.streams import Stream, first
from gibbsmin.thermo.library import Library
from gibbsmin.units import (
    Measure,
    read_amount,
    read_amount_unit,
    read_molar_energy,
    read_pressure,
    read_quantity,
    read_share,
    read_temperature,
    read_temperature_difference,
    read_volume,
    shown,
)

if TYPE_CHECKING:
    from gibbsmin.jobs.axis_schema import AxisTable

_Reader = Callable[[object], tuple[float, str]]

_SHARES: Mapping[str, float] = {"": 1.0, "%": 1e-2, "ppm": 1e-6}


@dataclass(frozen=True)
class Holders:
    """What holds the numbers of a case, and what gauge pressures stand on, Pa."""

    streams: Sequence[Stream]
    stages: Sequence[StageCase]
    site_pressure: float
    library: Library


def read_axes(tables: Sequence[AxisTable], holders: Holders) -> tuple[Axis, ...]:
    """The axes in order.

    Raises
    ------
    InputError
        for a name that is no number of the case, values in the wrong unit, or that are no numbers.
    """
    axes = []
    for index, table in enumerate(tables):
        key, name = item_key("axis", index), table.vary or table.ratio or ""
        with placed(f"{key}.vary"):
            read = _reader(name, table.ratio is not None, holders)
        axes.append(_axis(name, table, read, key))
    return tuple(axes)


def axis_of_column(
    name: str, unit: str, scale: str, shown_values: FloatArray, holders: Holders
) -> Axis:
    """An axis whose values (B,) stand in a column, all in one unit.

    Raises
    ------
    InputError
        for a unit that does not fit the number, and values that cannot be.
    """
    read = _reader(name, bool(scale), holders)
    for row in (int(shown_values.argmin()), int(shown_values.argmax())):
        value = float(shown_values[row])
        try:
            _, text = read(f"{value!r} {unit}" if unit else value)
        except InputError as error:
            raise error.at(key=f"row {row + 2}") from None
    unit = unit or text
    factor, offset = _scale(read, unit)
    return Axis(name, shown_values * factor + offset, shown_values, unit, scale)


def _axis(name: str, table: AxisTable, read: _Reader, key: str) -> Axis:
    if table.values is not None:
        with placed(f"{key}.values"):
            readings = [read(value) for value in table.values]
    else:
        readings = []
        for end, value in (("first", table.first), ("last", table.last)):
            with placed(f"{key}.{end}"):
                readings.append(read(value))
    inside, units = zip(*readings, strict=True)
    if len(set(units)) > 1:
        raise UnitError(
            f'found values in "{units[0]}" and in another unit',
            "accepted is one unit in an axis",
            key=f"{key}.{'last' if table.values is None else 'values'}",
        )
    factor, offset = _scale(read, units[0])
    shown_values = _without_rounding((np.array(inside) - offset) / factor)
    if table.count is not None:
        first, last = shown_values.tolist()
        with placed(key):
            spaced = _spaced(first, last, table.count, table.spacing)
        shown_values = _without_rounding(spaced)
    return Axis(name, shown_values * factor + offset, shown_values, units[0], table.scale or "")


def _without_rounding(values: FloatArray) -> FloatArray:
    """Twelve digits: 600, not 599.9999999999999, after the way to SI and back."""
    return np.array([float(f"{value:.12g}") for value in values.tolist()])


def _spaced(first: float, last: float, count: int, spacing: str) -> FloatArray:
    """Values from first to last, in the user's unit."""
    if spacing == "linear":
        return np.linspace(first, last, count)
    if min(first, last) <= 0.0:
        raise InputError(
            "found an end that is not above zero",
            "accepted are ends above zero for a logarithmic axis",
        )
    return np.geomspace(first, last, count)


def _scale(read: _Reader, unit: str) -> tuple[float, float]:
    """Factor and offset of a unit, from two readings; a plain number has 1 and 0."""
    if unit in _SHARES:
        return _SHARES[unit], 0.0
    low, high = read(f"1000 {unit}")[0], read(f"2000 {unit}")[0]
    factor = (high - low) / 1000.0
    # 273.15, not 273.1500000000001
    return factor, round(low - 1000.0 * factor, 10)


def _reader(name: str, is_ratio: bool, holders: Holders) -> _Reader:
    """How the values of an axis are read, by what its name says they are.

    Raises
    ------
    InputError
        for a name that is no number of the case.
    """
    if is_ratio:
        return _plain
    place = place_of(name, holders.streams, holders.stages, holders.library)
    if isinstance(place.holder, Stream) and place.kind in ("amounts", "total"):
        return _amount(place, place.holder, holders.library)
    readers: Mapping[str, _Reader] = {
        **dict.fromkeys(("bypass", "heat_loss", "conversion", "held_fraction", "remove"), _share),
        "approach": lambda given: (read_temperature_difference(given), "K"),
        "offset": lambda given: (read_molar_energy(given), "J/mol"),
        "activity": _plain,
    }
    if place.kind in readers:
        return readers[place.kind]
    kind = place.kind.removeprefix("boundary_")

    def read(given: object) -> tuple[float, str]:
        if kind == "temperature":
            read_temperature(given)
        elif kind == "pressure":
            read_pressure(given, holders.site_pressure)
        elif kind == "volume":
            read_volume(given)
        measure = read_quantity(given, kind, holders.site_pressure)
        stream = holders.streams[0]
        if kind == "heat" and measure.value and measure.unit.dimension.is_flow != stream.is_flow:
            example = "a flow, such as kW" if stream.is_flow else "a quantity, such as kJ"
            raise UnitError(
                f'found a heat in "{measure.unit.text}", while the feeds are in "{stream.unit}"',
                f"accepted is {example}",
            )
        return measure.value, measure.unit.text

    return read


def _plain(given: object) -> tuple[float, str]:
    if isinstance(given, bool) or not isinstance(given, int | float) or not np.isfinite(given):
        raise InputError(f"found {shown(given)}", "accepted is a number, such as 3.0")
    return float(given), ""


def _share(given: object) -> tuple[float, str]:
    unit = next((u for u in _SHARES if u and isinstance(given, str) and u in given), "")
    return read_share(given), unit


def _amount(place: Place, stream: Stream, library: Library) -> _Reader:
    """Of one species, or of the whole stream at the composition that the case gives it."""
    parts = {library[place.which]: 1.0} if place.which else {}
    if place.kind == "total":
        total = float(sum(first(amount) for amount in stream.amounts.values()))
        parts = {library[name]: first(n) / total for name, n in stream.amounts.items()}
    unit = read_amount_unit(stream.unit)

    def read(given: object) -> tuple[float, str]:
        measure: Measure = read_amount(given, unit)
        if measure.unit.dimension.is_flow != stream.is_flow:
            raise UnitError(
                f'found an amount in "{measure.unit.text}", while the feeds are in "{stream.unit}"',
                f"accepted is {'a flow' if stream.is_flow else 'a quantity'}, as the feeds are",
            )
        return sum(moles_of(measure, parts).values()), measure.unit.text

    return read
