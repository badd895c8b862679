"""Samples from a table: a row a sample, a column a measurement.

Columns are named with their units: ``temperature, degC``; ``pressure, barg``; ``H2, %`` or
``CO, ppm dry``; ``CO+CO2, %``; ``inlet CH4, %``; ``feed.steam, t/h``.  ``u`` before any of these
gives its standard uncertainty.  ``label`` or ``time`` names the sample; ``basis`` (dry or wet) and
``normalised`` (yes or no) say how the row was analysed.  A blank cell was not measured.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import replace
from functools import partial
from typing import TYPE_CHECKING, Any

import numpy as np

from gibbsmin.errors import InputError, UnitError
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.sample import PlantSample, SampleRules
from gibbsmin.jobs.sample_columns import Column, read_column, refuse_doubles
from gibbsmin.jobs.sample_reading import (
    STEAM_RATIO,
    GasReading,
    UncertaintyRules,
    read_reading,
)
from gibbsmin.sample.findings import SampleFault
from gibbsmin.units import shown

if TYPE_CHECKING:
    import pandas as pd

_YES = {"yes": True, "true": True, "1": True, "no": False, "false": False, "0": False}
FIRST_ROW = 2
"""Of a table's rows, as a spreadsheet numbers them: the first below the header."""


def samples_from(
    table: pd.DataFrame, case: Case, rules: SampleRules, file: str = ""
) -> tuple[list[PlantSample], list[SampleFault]]:
    """The samples of a table, and those that cannot be used.

    Raises
    ------
    InputError
        for a table without rows, and a column that means nothing.
    """
    if table.empty:
        raise InputError("found no rows", "accepted is a table with a row a sample", file=file)
    columns = []
    for title in table.columns:
        try:
            columns.append(read_column(str(title), case))
        except InputError as error:
            raise error.at(key=f'column "{title}"', file=file) from None
    refuse_doubles(columns, file)
    samples: list[PlantSample] = []
    faults: list[SampleFault] = []
    cells = [table[title].tolist() for title in table.columns]
    for index, row in enumerate(zip(*cells, strict=True)):
        number = index + FIRST_ROW
        label = _label(columns, row) or f"row {number}"
        try:
            samples.append(_sample(label, number, columns, row, rules))
        except InputError as error:
            faults.append(SampleFault(label, number, str(error.at(file=file))))
    return samples, faults


def _label(columns: Sequence[Column], row: Sequence[Any]) -> str:
    cells = [cell for column, cell in zip(columns, row, strict=True) if column.kind == "label"]
    return " ".join(str(cell) for cell in cells if not _blank(cell))


def _blank(cell: Any) -> bool:
    return cell is None or cell != cell or (isinstance(cell, str) and not cell.strip())


def _sample(
    label: str, number: int, columns: Sequence[Column], row: Sequence[Any], rules: SampleRules
) -> PlantSample:
    """One row; the error of a cell names row and column."""
    filled = [
        (column, cell)
        for column, cell in zip(columns, row, strict=True)
        if not _blank(cell) and column.kind != "label"
    ]

    def at(column: Column) -> str:
        return f'row {number}, column "{column.title}"'

    def each(kind: str, is_uncertainty: bool, read: Callable[[Column, Any], Any]) -> dict[str, Any]:
        values = {}
        for column, cell in filled:
            if (column.kind, column.is_uncertainty) == (kind, is_uncertainty):
                try:
                    values[column.name] = read(column, cell)
                except InputError as error:
                    raise error.at(key=at(column)) from None
        return values

    def gas(kind: str) -> dict[str, GasReading]:
        readings = each(kind, False, partial(_reading, rules=own))
        given = each(kind, True, lambda c, cell: _positive(cell) * c.scale)
        return {
            name: replace(reading, uncertainty=given[name])
            if name in given and not reading.below
            else reading
            for name, reading in readings.items()
        }

    own = rules.uncertainty
    conditions: dict[str, float] = {}
    spread: dict[str, float] = {}
    for name in ("temperature", "pressure"):
        conditions |= each(name, False, _in_si)
        spread |= each(name, True, lambda c, cell: _positive(cell) * c.scale)
    for name in ("temperature", "pressure"):
        if name not in conditions:
            raise InputError(
                f"found no {name}",
                f"accepted is the {name} at the sampling point in each row",
                key=f"row {number}",
            )
    outlet, inlet = gas("outlet"), gas("inlet")
    if not outlet:
        raise InputError(
            "found no reading of the outlet",
            "accepted is at least one that is not blank",
            key=f"row {number}",
        )
    normalised = each("normalised", False, lambda _, cell: _yes_or_no(cell))
    flows = each("feed", False, lambda c, cell: _positive(cell) * c.scale)
    u_flows = each("feed", True, lambda c, cell: (_positive(cell) * c.scale, c.unit == "%"))
    return PlantSample(
        label=label,
        row=number,
        temperature=conditions["temperature"],
        u_temperature=spread.get("temperature", own.temperature),
        pressure=conditions["pressure"],
        u_pressure=spread.get("pressure", own.pressure * conditions["pressure"]),
        dry=_is_dry(filled, "outlet", rules.outlet.dry, number),
        normalised=normalised.get("", rules.outlet.normalised),
        outlet=outlet,
        inlet=inlet,
        inlet_dry=_is_dry(filled, "inlet", rules.inlet.dry, number),
        inlet_normalised=rules.inlet.normalised,
        feeds={
            name: (flows.get(name, 1.0), _spread(flows.get(name, 1.0), u_flows.get(name)))
            for name in {*flows, *u_flows}
        },
    )


def _spread(flow: float, given: tuple[float, bool] | None) -> float:
    """Standard uncertainty of a ratio of flows, NaN where the case's holds."""
    if given is None:
        return float("nan")
    value, is_share = given
    return value * flow if is_share else value


def _is_dry(filled: Sequence[tuple[Column, Any]], kind: str, default: bool, number: int) -> bool:
    """Whether a gas was analysed dry, from its columns, then the row, then the case.

    Raises
    ------
    InputError
        where they contradict each other.
    """
    stated: dict[str, str] = {}
    for column, cell in filled:
        if column.kind == kind and column.basis:
            stated.setdefault(column.basis, column.title)
        if column.kind == "basis" and kind == "outlet":
            word = str(cell).strip().casefold()
            if word not in ("dry", "wet"):
                raise InputError(
                    f"found {shown(cell)}",
                    'accepted is "dry" or "wet"',
                    key=f'row {number}, column "{column.title}"',
                )
            stated.setdefault(word, column.title)
    if len(stated) > 1:
        raise InputError(
            f'found a dry analysis in column "{stated["dry"]}" and a wet one in column '
            f'"{stated["wet"]}"',
            "accepted is one basis in a row",
            key=f"row {number}",
        )
    return "dry" in stated if stated else default


def _reading(column: Column, cell: Any, rules: UncertaintyRules) -> GasReading:
    if column.name == STEAM_RATIO:
        ratio = _positive(cell)
        return GasReading(ratio, rules.steam_ratio * ratio)
    return read_reading(_number_or_text(cell), column.name, rules, column.unit)


def _in_si(column: Column, cell: Any) -> float:
    return _positive(_number(cell) * column.scale + column.offset)


def _number(cell: Any) -> float:
    cell = _number_or_text(cell)
    if isinstance(cell, str) or not np.isfinite(cell):
        raise UnitError(f"found {shown(cell)}", "accepted is a number")
    return float(cell)


def _positive(cell: Any) -> float:
    number = _number(cell)
    if number <= 0.0:
        raise UnitError(f"found {shown(cell)}", "accepted is a number above zero")
    return number


def _number_or_text(cell: Any) -> Any:
    """A number where the cell holds one, be it as text among others such as "<0.05"."""
    if isinstance(cell, str):
        try:
            return float(cell)
        except ValueError:
            return cell
    if isinstance(cell, bool) or not isinstance(cell, int | float | np.integer | np.floating):
        return str(cell)
    return float(cell)


def _yes_or_no(cell: Any) -> bool:
    text = str(cell).strip().casefold().removesuffix(".0")
    if text not in _YES:
        raise InputError(f"found {shown(cell)}", 'accepted is "yes" or "no"')
    return _YES[text]
