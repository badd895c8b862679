"""Scan: a case over a grid of conditions, all states of a block at once."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.errors import InputError
from gibbsmin.jobs.axes import applied
from gibbsmin.jobs.axis import Axis
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.train import Step, run_train
from gibbsmin.minimise import Status
from gibbsmin.thermo.species import Phase

if TYPE_CHECKING:
    import pandas as pd

_BLOCK = 50_000


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


def scan_blocks(case: Case, block: int = _BLOCK) -> Iterator[pd.DataFrame]:
    """The scan's table in blocks of states, one row a state, in the order of the grid.

    A state that fails is a row with its status and NaN; the others are untouched.

    Raises
    ------
    InputError
        for axes that name nothing, and for what the case itself gets wrong.
    """
    import pandas as pd

    axes = case.axes
    if not axes:
        raise InputError(
            "found no axis", "accepted is at least one [[axis]] table", key="axis", file=case.file
        )
    library = case.library
    grid = Grid(tuple(axes))
    for first in range(0, grid.states, block):
        values = grid.block(first, min(first + block, grid.states))
        columns = {
            f"{axis.name}, {axis.unit}" if axis.unit else axis.name: shown
            for axis, (_, shown) in zip(axes, values, strict=True)
        }
        varied = applied(case, axes, [inside for inside, _ in values], library)
        for step in run_train(varied, library):
            columns |= _columns(step, values[0][0].size, prefix=len(case.stages) > 1)
        yield pd.DataFrame(columns)


def scan(case: Case) -> pd.DataFrame:
    """The whole table of a scan; see :func:`scan_blocks`."""
    import pandas as pd

    return pd.concat(scan_blocks(case), ignore_index=True)


def _columns(step: Step, states: int, prefix: bool) -> dict[str, FloatArray]:
    """A stage's columns, SI units but for the names that say otherwise."""
    found, energy, model = step.states.equilibria, step.states.energy, step.states.model
    columns: dict[str, FloatArray] = {
        "status": np.array([status.name.lower() for status in Status])[found.solution.status],
        "gap": found.solution.certificate.gap,
        "temperature, K": found.temperature,
        "pressure, bar": found.pressure / 1e5,
        "heat, kW" if step.streams[0].is_flow else "heat, kJ": energy.heat / 1e3,
        "entropy generation, kW/K"
        if step.streams[0].is_flow
        else "entropy generation, kJ/K": energy.entropy_generation / 1e3,
    }
    total = found.amounts[:, model.gas].sum(axis=1)
    total = np.where(total > 0.0, total, np.nan)
    for column, record in enumerate(model.records):
        if record.phase is Phase.GAS:
            columns[f"y {record.name}"] = found.amounts[:, column] / total
        else:
            columns[f"amount {record.name}, mol"] = found.amounts[:, column]
    columns |= {f"conversion {fed}": share for fed, share in _conversions(step).items()}
    name = f"{step.stage.name}: " if prefix else ""
    return {f"{name}{key}": np.broadcast_to(v, (states,)) for key, v in columns.items()}


def _conversions(step: Step) -> dict[str, FloatArray]:
    """Share of each substance of the feed that is used up, all its forms counted together."""
    inlet, model, amounts = step.states.inlet, step.states.model, step.states.equilibria.amounts
    conversions = {}
    for record in inlet.records:
        fed = inlet.amounts[:, [r.formula == record.formula for r in inlet.records]].sum(axis=1)
        left = amounts[:, [r.formula == record.formula for r in model.records]].sum(axis=1)
        left = np.where(np.isnan(amounts).any(axis=1), np.nan, left)
        with np.errstate(divide="ignore", invalid="ignore"):
            conversions[record.name] = np.where(fed > 0.0, 1.0 - left / fed, np.nan)
    return conversions
