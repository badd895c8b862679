"""Scan: a case over a grid or a table of conditions, all states of a block at once."""

from __future__ import annotations

from collections import deque
from collections.abc import Callable, Iterator, Sequence
from concurrent.futures import ThreadPoolExecutor
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from gibbsmin.jobs.axis import Axis
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.conditions import LABEL, Conditions, Grid, conditions_from, conditions_of
from gibbsmin.jobs.scan_columns import UNITS
from gibbsmin.jobs.scan_states import columns_of_states

if TYPE_CHECKING:
    import pandas as pd
    import xarray as xr

_BLOCK = 25_000
_BLOCK_OF_SENSITIVITIES = 1_000
"""States of a stage solved together; fewer where each has its own sensitivities in memory."""

AHEAD = 2
"""Blocks in memory at a time where they are solved here."""


@dataclass(frozen=True, eq=False)
class Scan:
    """A scan's answers.

    Attributes
    ----------
    title : the case's
    axes : what varies
    is_grid : whether the axes are crossed with each other
    table : one row a state: axes, status, certificate, conditions, energy, conversions, fractions
    """

    title: str
    axes: tuple[Axis, ...]
    is_grid: bool
    table: pd.DataFrame

    def to_xarray(self) -> xr.Dataset:
        """The table with a named dimension an axis, and units as attributes.

        Needs the package xarray.  A table of conditions has one dimension, ``state``.
        """
        import xarray as xr

        columns = {column_of(axis): (axis.name, axis.unit) for axis in self.axes}
        shape = [axis.shown.size for axis in self.axes] if self.is_grid else [len(self.table)]
        dims = [axis.name for axis in self.axes] if self.is_grid else ["state"]
        names: list[Any] = [c for c in self.table if not self.is_grid or c not in columns]
        data = {}
        for name in names:
            label, _, unit = str(name).rpartition(", ")
            if unit not in UNITS:
                label, unit = columns.get(name, (name, ""))
            values = self.table[name].to_numpy().reshape(shape)
            data[label] = (dims, values, {"units": unit} if unit else {})
        coordinates = {}
        if self.is_grid:
            for axis in self.axes:
                units = {"units": axis.unit} if axis.unit else {}
                coordinates[axis.name] = (axis.name, axis.shown, units)
        return xr.Dataset(data, coordinates, {"title": self.title})


def scan(case: Case, conditions: pd.DataFrame | None = None, *, uncertainty: bool = False) -> Scan:
    """The case in every state of its axes' grid, or of a table of conditions.

    Parameters
    ----------
    conditions
        One row a state, each column named as an axis: see
        :func:`gibbsmin.jobs.conditions.conditions_from`.
    uncertainty
        Whether error bars stand beside the values.
    """
    import pandas as pd

    states = conditions_of(case) if conditions is None else conditions_from(conditions, case)
    blocks = scan_blocks(case, states, uncertainty=uncertainty)
    table = pd.concat(blocks, ignore_index=True)
    return Scan(case.title, states.axes, isinstance(states, Grid), table)


def scan_blocks(
    case: Case,
    conditions: Conditions | None = None,
    block: int | None = None,
    *,
    uncertainty: bool = False,
) -> Iterator[pd.DataFrame]:
    """The scan's table in blocks of states, one row a state, in order.

    A state that fails is a row with its status and NaN; the others are untouched.

    Raises
    ------
    InputError
        for axes that name nothing, and for what the case itself gets wrong.
    """
    conditions = conditions or conditions_of(case)
    size = block or block_size(case, uncertainty=uncertainty)

    def solve(first: int) -> pd.DataFrame:
        last = min(first + size, conditions.states)
        return scan_block(case, conditions, first, last, uncertainty=uncertainty)

    yield from in_order(solve, range(0, conditions.states, size))


def block_size(case: Case, *, uncertainty: bool) -> int:
    """States solved together: so many that numpy is quick, so few that memory stays small."""
    real = any(stage.chemistry.equation is not None for stage in case.stages)
    size = _BLOCK_OF_SENSITIVITIES if uncertainty and real else _BLOCK
    return max(1, size // len(case.stages))


def in_order(
    solve: Callable[[int], pd.DataFrame], starts: Sequence[int], ahead: int = AHEAD
) -> Iterator[pd.DataFrame]:
    """The blocks in order, ``ahead`` of them under way or waiting at a time.

    One block's tables are laid out while another's states are solved, so that no core waits.
    """
    if len(starts) < 2:
        yield from map(solve, starts)
        return
    with ThreadPoolExecutor(ahead) as pool:
        coming = deque(pool.submit(solve, start) for start in starts[:ahead])
        for start in [*starts[ahead:], *[None] * min(ahead, len(starts))]:
            block = coming.popleft().result()
            if start is not None:
                coming.append(pool.submit(solve, start))
            yield block


def scan_block(
    case: Case, conditions: Conditions, first: int, last: int, *, uncertainty: bool = False
) -> pd.DataFrame:
    """The table of the states from first up to last."""
    import pandas as pd

    axes = conditions.axes
    values = conditions.block(first, last)
    labels = conditions.labels(first, last)
    columns: dict[str, Any] = {} if labels is None else {LABEL: labels}
    for axis, (_, shown) in zip(axes, values, strict=True):
        columns[column_of(axis)] = shown
    answers = columns_of_states(
        case, conditions, [inside for inside, _ in values], uncertainty=uncertainty
    )
    return pd.DataFrame(columns | answers, copy=False)


def column_of(axis: Axis) -> str:
    """The name of an axis's column."""
    return f"{axis.name}, {axis.unit}" if axis.unit else axis.name
