"""Onsets and targets on the terminal."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from rich.console import Group, RenderableType
from rich.padding import Padding
from rich.text import Text

from gibbsmin.arrays import FloatArray
from gibbsmin.jobs.axis import Axis
from gibbsmin.jobs.onset import Onset
from gibbsmin.jobs.target import Target
from gibbsmin.present.layout import heading, sentences, table
from gibbsmin.present.quantities import significant
from gibbsmin.results import CAUTIONS


def onset_view(found: Onset, title: str, uncertainty: FloatArray | None = None) -> RenderableType:
    """Each crossing in a line, with its uncertainty if given; then what is known of others."""
    parts: list[RenderableType] = [
        heading(title),
        Text(f"Onset of {found.phase} in {found.stage}"),
        Text(""),
    ]
    if found.row.size:
        rows = [_crossing(found, k, uncertainty) for k in range(found.row.size)]
        parts.append(
            table(
                (
                    *_axis_headers(found.axis, found.second),
                    *(() if uncertainty is None else ("uncertainty",)),
                    "as it rises, the phase",
                    "temperature, K",
                    "pressure, bar",
                    "both sides",
                ),
                rows,
                words=("as it rises, the phase", "both sides"),
            )
        )
    parts += [Padding(Text(line), (0, 0, 0, 2)) for line in _onset_sentences(found)]
    return Group(*parts, Text(""), *sentences("Cautions", CAUTIONS))


def target_view(found: Target, title: str) -> RenderableType:
    """Each answer in a line; where there is none, what the grid reaches."""
    parts: list[RenderableType] = [
        heading(title),
        Text(f"Target: {found.result} of {found.stage}"),
        Text(""),
    ]
    if found.row.size:
        rows = [
            (
                *_axis_cells(found.second, found.row[k], found.shown[k]),
                f"{'rising' if found.rising[k] else 'falling'}",
                "certified" if found.certified[k] else "NOT CERTIFIED",
            )
            for k in range(found.row.size)
        ]
        headers = (*_axis_headers(found.axis, found.second), "the result is", "state")
        parts.append(table(headers, rows, words=("the result is", "state")))
    parts += [Padding(Text(line), (0, 0, 0, 2)) for line in _target_sentences(found)]
    return Group(*parts, Text(""), *sentences("Cautions", CAUTIONS))


def _crossing(found: Onset, k: int, uncertainty: FloatArray | None) -> tuple[str, ...]:
    return (
        *_axis_cells(found.second, found.row[k], found.shown[k]),
        *(() if uncertainty is None else (f"± {significant(float(uncertainty[k]), 2)}",)),
        "forms" if found.forms[k] else "vanishes",
        f"{found.temperature[k]:.2f}",
        significant(float(found.pressure[k]) / 1e5),
        f"certified, gap {found.gap[k]:.0e}" if found.certified[k] else "NOT CERTIFIED",
    )


def _axis_headers(axis: Axis, second: Axis | None) -> tuple[str, ...]:
    return tuple(
        f"{each.name}, {each.unit}" if each.unit else each.name
        for each in ((second, axis) if second is not None else (axis,))
    )


def _axis_cells(second: Axis | None, row: int, shown: float) -> tuple[str, ...]:
    of_axis = significant(float(shown), 8)
    return (of_axis,) if second is None else (f"{second.shown[row]:.9g}", of_axis)


def _onset_sentences(found: Onset) -> Iterator[str]:
    crossed = set(found.row.tolist())
    for row in range(found.there.size):
        prefix = _row_name(found.second, row)
        if row not in crossed:
            state = "there" if found.there[row] else "absent"
            yield f"{prefix}{found.phase} is {state} all along the axis."
    texts = dict.fromkeys(each.text for each in found.completeness)
    for text in texts:
        rows = [r for r, each in enumerate(found.completeness) if each.text == text]
        prefix = "" if len(rows) == found.there.size else _row_name(found.second, *rows)
        yield f"{prefix}{text}"
    for row, (low, high) in zip(found.lost_row.tolist(), found.lost.T.tolist(), strict=True):
        yield (
            f"{_row_name(found.second, row)}{found.phase} forms or vanishes between {low:.9g} and "
            f"{high:.9g} {found.axis.unit}".rstrip()
            + ", where no state could be certified."
        )
    if found.unsolved.any():
        yield f"{int(found.unsolved.sum())} points of the grid have no certified answer."


def _target_sentences(found: Target) -> Iterator[str]:
    answered = set(found.row.tolist())
    for row in range(found.lowest.size):
        lost = row in found.lost_row
        if row not in answered and not lost and np.isfinite(found.lowest[row]):
            ends = (found.lowest[row], found.highest[row], found.wanted)
            low, high, wanted = (
                f"{significant(float(end) / found.per_unit)} {found.unit}".rstrip() for end in ends
            )
            yield (
                f"{_row_name(found.second, row)}no answer: on the axis the result runs from "
                f"{low} to {high}, and {wanted} is wanted."
            )
    for row, (low, high) in zip(found.lost_row.tolist(), found.lost.T.tolist(), strict=True):
        yield (
            f"{_row_name(found.second, row)}between {low:.9g} and {high:.9g} {found.axis.unit}"
        ).rstrip() + (
            " the result passes the value without meeting it: it jumps there, or no state could "
            "be certified."
        )
    yield f"Complete to the grid used: {found.axis.values.size} values of {found.axis.name}."
    if found.unsolved.any():
        yield f"{int(found.unsolved.sum())} points of the grid have no certified answer."


def _row_name(second: Axis | None, *rows: int) -> str:
    """The value of the second axis that a sentence is about."""
    if second is None:
        return ""
    values = ", ".join(f"{second.shown[row]:.6g}" for row in rows)
    return f"At {second.name} {values} {second.unit}".rstrip() + ": "
