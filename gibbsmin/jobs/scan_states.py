"""The states of a scan, solved together, each as if it were predicted alone.

States are solved apart where one batch would not do: where a number shapes the equations, where
different records go on from a stage (a record that enters is a candidate of a stage in which
nothing reacts), and where an input is refused in some states, which then carry the reason.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from gibbsmin.arrays import FloatArray, IntArray
from gibbsmin.errors import InputError
from gibbsmin.jobs.axes import applied
from gibbsmin.jobs.axis import Axis
from gibbsmin.jobs.axis_place import place_of
from gibbsmin.jobs.axis_stage import shapes_equations
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.conditions import Conditions
from gibbsmin.jobs.error_bars import error_bars
from gibbsmin.jobs.scan_columns import columns_of, named, reasons_of, row_numbers
from gibbsmin.jobs.scan_layout import layouts_of
from gibbsmin.jobs.train import Step, run_train

Columns = dict[str, Any]

_PROBES = 16
"""States that are tried, when an input is refused, to see whether any is accepted."""

_REFUSED = "refused"


@dataclass(frozen=True)
class _Part:
    """Columns of some rows of a block; None where their input is refused."""

    rows: IntArray
    columns: Columns | None
    reason: str = ""


def columns_of_states(
    case: Case, conditions: Conditions, values: Sequence[FloatArray], *, uncertainty: bool
) -> Columns:
    """What the table tells of some of a scan's states, column by column.

    ``values`` are those of each axis, in SI.

    Raises
    ------
    InputError
        where none of a sample of the scan's states is accepted: then the case or its axes are at
        fault.
    """

    def solve(values: Sequence[FloatArray]) -> tuple[list[Step], Columns]:
        return _solved(case, conditions.axes, values, uncertainty)

    parts: list[_Part] = []
    for rows in of_one_equation(case, conditions.axes, values):
        try:
            parts += _parts(solve, values, rows)
        except InputError:
            _require_some_state(solve, conditions)
            parts += _parts_but_refused(solve, values, rows)
    if len(parts) == 1 and parts[0].columns is not None:
        return parts[0].columns
    template = next((part.columns for part in parts if part.columns is not None), None)
    return _together(parts, template or _require_some_state(solve, conditions), values[0].size)


_Solve = Callable[[Sequence[FloatArray]], tuple[list[Step], Columns]]


def _solved(
    case: Case, axes: Sequence[Axis], values: Sequence[FloatArray], uncertainty: bool
) -> tuple[list[Step], Columns]:
    library = case.library
    varied = applied(case, axes, values, library)
    steps = list(run_train(varied, library))
    bars: Sequence[Any] = [None] * len(steps)
    if uncertainty:
        bars = error_bars(varied, steps, library)
    columns: Columns = {}
    layouts = layouts_of(varied, steps, library)
    for step, layout, bar in zip(steps, layouts, bars, strict=True):
        before = f"{step.stage.name}: " if len(case.stages) > 1 else ""
        columns |= columns_of(step, layout, values[0].size, bar, before)
    columns["reason"] = reasons_of(steps)
    return steps, columns


def of_one_equation(
    case: Case, axes: Sequence[Axis], values: Sequence[FloatArray]
) -> Iterator[IntArray]:
    """Rows that share what shapes their equations."""
    places = [
        None if axis.scale else place_of(axis.name, case.feeds, case.stages, case.library)
        for axis in axes
    ]
    shaping = [k for k, place in enumerate(places) if place and shapes_equations(place)]
    if not shaping:
        yield np.arange(values[0].size)
        return
    keys = np.stack([values[k] for k in shaping], axis=1)
    _, kind = np.unique(keys, axis=0, return_inverse=True)
    yield from _by_kind(kind.reshape(-1))


def _by_kind(kind: IntArray) -> Iterator[IntArray]:
    for which in np.unique(kind):
        yield np.flatnonzero(kind == which)


def _parts(solve: _Solve, values: Sequence[FloatArray], rows: IntArray) -> list[_Part]:
    """The rows, split where different records go on from a stage."""
    steps, columns = solve([value[rows] for value in values])
    kind = _going_on(steps)
    if kind is None:
        return [_Part(rows, columns)]
    return [part for index in _by_kind(kind) for part in _parts(solve, values, rows[index])]


def _going_on(steps: Sequence[Step]) -> IntArray | None:
    """A number for each set of records that go on through the train; None where all are alike."""
    if len(steps) == 1:
        return None
    leaving = np.concatenate([_leaving(step) for step in steps[:-1]], axis=1)
    present, solved = leaving > 0.0, ~np.isnan(leaving).any(axis=1)
    varying = present[solved].any(axis=0) & ~present[solved].all(axis=0)
    if not varying.any():
        return None
    # States without an answer pass nothing on, and may stand with any others.
    kind = row_numbers(present[:, varying])
    return np.where(solved, kind, kind[solved][0])


def _leaving(step: Step) -> FloatArray:
    removed = step.stage.removed
    shares = [1.0 - np.asarray(removed.get(r.name, 0.0)) for r in step.states.model.records]
    found = step.states.equilibria.amounts
    return np.stack([found[:, k] * share for k, share in enumerate(shares)], axis=1)


def _parts_but_refused(solve: _Solve, values: Sequence[FloatArray], rows: IntArray) -> list[_Part]:
    """The rows halved until those whose input is refused stand alone."""
    try:
        return _parts(solve, values, rows)
    except InputError as error:
        if rows.size == 1:
            error.file = ""
            return [_Part(rows, None, str(error))]
    half = rows.size // 2
    return [
        *_parts_but_refused(solve, values, rows[:half]),
        *_parts_but_refused(solve, values, rows[half:]),
    ]


def _require_some_state(solve: _Solve, conditions: Conditions) -> Columns:
    """The columns of a state of the scan that is accepted; the first refusal where none is."""
    refusals: list[InputError] = []
    for state in np.unique(np.linspace(0, conditions.states - 1, _PROBES).astype(int)).tolist():
        try:
            return solve([inside for inside, _ in conditions.block(state, state + 1)])[1]
        except InputError as error:
            refusals.append(error)
    raise refusals[0]


def _together(parts: Sequence[_Part], template: Columns, states: int) -> Columns:
    """The parts' columns in the order of the rows; NaN and the reason where input is refused."""
    whole: Columns = {}
    for name, like in template.items():
        if isinstance(like, np.ndarray):
            values: Any = np.full(states, False if like.dtype == bool else np.nan)
        else:
            values = np.full(states, _REFUSED if name.endswith("status") else "", dtype=object)
        for part in parts:
            if part.columns is not None:
                values[part.rows] = np.asarray(part.columns[name])
            elif name == "reason":
                values[part.rows] = part.reason
        if not isinstance(like, np.ndarray):
            texts, codes = np.unique(values.astype(str), return_inverse=True)
            values = named(codes, texts.tolist())
        whole[name] = values
    return whole
