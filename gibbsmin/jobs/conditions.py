"""The states of a scan: axes crossed with each other, or a table with a row a state."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Protocol

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.errors import InputError
from gibbsmin.jobs.axis import Axis
from gibbsmin.jobs.axis_place import place_of
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.case_axis import Holders, axis_of_column
from gibbsmin.units import shown

if TYPE_CHECKING:
    import pandas as pd

LABEL = "label"
"""A column of a table of conditions that is passed on as it is."""

_BY = " by "


class Conditions(Protocol):
    """States in order, each with a value on every axis."""

    @property
    def axes(self) -> tuple[Axis, ...]:
        """What varies."""

    @property
    def states(self) -> int:
        """Number of states."""

    def block(self, first: int, last: int) -> list[tuple[FloatArray, FloatArray]]:
        """Each axis's values in SI and as shown, for the states from first up to last."""

    def labels(self, first: int, last: int) -> list[str] | None:
        """The states' own names, where they have any."""


@dataclass(frozen=True)
class Grid:
    """Axes crossed with each other; the last varies fastest."""

    axes: tuple[Axis, ...]

    @property
    def states(self) -> int:
        """Number of states."""
        return int(np.prod([axis.values.size for axis in self.axes]))

    def block(self, first: int, last: int) -> list[tuple[FloatArray, FloatArray]]:
        """Each axis's values in SI and as shown, for the states from first up to last."""
        index = np.arange(first, last)
        picks = np.unravel_index(index, [axis.values.size for axis in self.axes])
        return [
            (axis.values[pick], axis.shown[pick])
            for axis, pick in zip(self.axes, picks, strict=True)
        ]

    def labels(self, first: int, last: int) -> list[str] | None:  # noqa: ARG002
        """A grid's states have no names."""
        return None


@dataclass(frozen=True)
class Rows:
    """A row a state: every axis has a value for each."""

    axes: tuple[Axis, ...]
    names: tuple[str, ...] | None

    @property
    def states(self) -> int:
        """Number of states."""
        return int(self.axes[0].values.size)

    def block(self, first: int, last: int) -> list[tuple[FloatArray, FloatArray]]:
        """Each axis's values in SI and as shown, for the states from first up to last."""
        return [(axis.values[first:last], axis.shown[first:last]) for axis in self.axes]

    def labels(self, first: int, last: int) -> list[str] | None:
        """What stands in the table's label column."""
        return None if self.names is None else list(self.names[first:last])


def conditions_of(case: Case) -> Grid:
    """The grid of a case's own axes.

    Raises
    ------
    InputError
        for a case without any.
    """
    if not case.axes:
        raise InputError(
            "found no axis", "accepted is at least one [[axis]] table", key="axis", file=case.file
        )
    return Grid(case.axes)


def conditions_from(table: pd.DataFrame, case: Case, file: str = "") -> Rows:
    """A table of conditions: each column named as an axis, with its unit.

    ``outlet.temperature, degC`` is a number with its unit; ``H2O/C by steam`` a ratio and the
    stream that is scaled to meet it; ``label`` names the states.

    Raises
    ------
    InputError
        for a column that names no number, a unit that does not fit, and a cell that is empty or
        no number, each told by its row (2 is the first below the header) and column.
    """
    axes = []
    names: tuple[str, ...] | None = None
    if table.empty:
        raise InputError("found no rows", "accepted is a table with a row a state", file=file)
    for column in table.columns:
        if str(column) == LABEL:
            names = tuple("" if cell != cell else str(cell) for cell in table[column])
            continue
        try:
            axes.append(_axis(str(column), table[column].tolist(), case))
        except InputError as error:
            error.key = f'column "{column}"' + (f", {error.key}" if error.key else "")
            raise error.at(file=file) from None
    if not axes:
        raise InputError(
            "found no column but the labels",
            'accepted is at least one number, such as "outlet.temperature, degC"',
            file=file,
        )
    return Rows(tuple(axes), names)


def _axis(column: str, cells: Sequence[object], case: Case) -> Axis:
    name, _, unit = column.partition(",")
    name, _, scale = name.strip().partition(_BY)
    if not scale and "/" in name and "." not in name:
        raise InputError(
            "found a ratio without the stream that is scaled to meet it",
            f'accepted is "{name} by {case.feeds[-1].name}"',
        )
    if not scale:
        # A column that is something else altogether is told before what stands in it.
        place_of(name, case.feeds, case.stages, case.library)
    values = np.empty(len(cells))
    for row, cell in enumerate(cells):
        values[row] = _number(cell)
        if not np.isfinite(values[row]):
            empty = cell is None or cell != cell
            raise InputError(
                f"found {'an empty cell' if empty else shown(cell)}",
                "accepted is a number",
                key=f"row {row + 2}",
            )
    holders = Holders(case.feeds, case.stages, case.site_pressure, case.library)
    return axis_of_column(name, unit.strip(), scale.strip(), values, holders)


def _number(cell: object) -> float:
    """A cell's number, NaN where it has none.

    Where one cell of a column is a word, a file's other cells arrive as text, too.
    """
    if isinstance(cell, bool) or not isinstance(cell, int | float | str):
        return math.nan
    try:
        return float(cell)
    except ValueError:
        return math.nan
