"""Turns a case's tables of axes into axes in SI units."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import TYPE_CHECKING

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.errors import InputError, UnitError
from gibbsmin.jobs.axis import Axis
from gibbsmin.jobs.feed_parts import moles_of, placed, resolve
from gibbsmin.reactor.streams import Stream
from gibbsmin.thermo.library import Library
from gibbsmin.units import (
    Measure,
    read_amount,
    read_amount_unit,
    read_quantity,
    read_share,
    read_temperature_difference,
    shown,
)

if TYPE_CHECKING:
    from gibbsmin.jobs.axis_schema import AxisTable

_Reader = Callable[[object], tuple[float, str]]


def read_axes(
    tables: Sequence[AxisTable],
    streams: Sequence[Stream],
    site_pressure: float,
    library: Library,
) -> tuple[Axis, ...]:
    """The axes in order.

    Raises
    ------
    InputError
        for values in the wrong unit, or that are no numbers.
    """
    axes = []
    for index, table in enumerate(tables):
        name = table.vary or table.ratio or ""
        read = _reader(name, table.ratio is not None, streams, site_pressure, library)
        with placed(f"axis.{index}.values"):
            axes.append(_axis(name, table, read))
    return tuple(axes)


def axis_of_column(
    name: str,
    unit: str,
    scale: str,
    shown_values: FloatArray,
    streams: Sequence[Stream],
    site_pressure: float,
    library: Library,
) -> Axis:
    """An axis whose values (B,) stand in a column, all in one unit.

    Raises
    ------
    InputError
        for a unit that does not fit the number, and values that cannot be.
    """
    read = _reader(name, bool(scale), streams, site_pressure, library)
    for value in (float(shown_values.min()), float(shown_values.max())):
        _, text = read(f"{value!r} {unit}" if unit else value)
    factor, offset = _scale(read, text)
    return Axis(name, shown_values * factor + offset, shown_values, text, scale)


def _axis(name: str, table: AxisTable, read: _Reader) -> Axis:
    given = table.values if table.values is not None else (table.first, table.last)
    inside, units = zip(*(read(value) for value in given), strict=True)
    if len(set(units)) > 1:
        raise UnitError(
            f'found values in "{units[0]}" and in another unit', "accepted is one unit in an axis"
        )
    factor, offset = _scale(read, units[0])
    shown_values = _without_rounding((np.array(inside) - offset) / factor)
    if table.count is not None:
        first, last = shown_values.tolist()
        shown_values = _without_rounding(_spaced(first, last, table.count, table.spacing))
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
    if not unit:
        return 1.0, 0.0
    low, high = read(f"1000 {unit}")[0], read(f"2000 {unit}")[0]
    factor = (high - low) / 1000.0
    return factor, low - 1000.0 * factor


def _reader(
    name: str, is_ratio: bool, streams: Sequence[Stream], site_pressure: float, library: Library
) -> _Reader:
    """How the values of an axis are read, by what its name says they are."""
    if is_ratio:
        return _plain
    if name.startswith("feed.") and ".amounts." in name:
        return _amount(name, streams, library)
    if any(f".{kind}." in name for kind in ("conversion", "held_fraction", "remove")):
        return _share
    if ".approach." in name:
        return _difference
    field = name.rpartition(".")[2]
    if field in ("bypass", "heat_loss"):
        return _share
    if field == "boundary_temperature":
        field = "temperature"

    def read(given: object) -> tuple[float, str]:
        measure = read_quantity(given, field, site_pressure)
        return measure.value, measure.unit.text

    return read


def _plain(given: object) -> tuple[float, str]:
    if isinstance(given, bool) or not isinstance(given, int | float) or not np.isfinite(given):
        raise InputError(f"found {shown(given)}", "accepted is a number, such as 3.0")
    return float(given), ""


def _share(given: object) -> tuple[float, str]:
    return read_share(given), ""


def _difference(given: object) -> tuple[float, str]:
    return read_temperature_difference(given), "K"


def _amount(name: str, streams: Sequence[Stream], library: Library) -> _Reader:
    _, stream_name, _, species = name.split(".", 3)
    unit_text = next((s.unit for s in streams if s.name == stream_name), "mol")
    record = resolve(species, library)

    def read(given: object) -> tuple[float, str]:
        measure: Measure = read_amount(given, read_amount_unit(unit_text))
        return moles_of(measure, {record: 1.0})[record], measure.unit.text

    return read
