"""Onsets and targets as documents for JSON, and as tables."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING, Any

from gibbsmin.arrays import FloatArray, IntArray
from gibbsmin.jobs.axis import Axis
from gibbsmin.jobs.onset import Onset
from gibbsmin.jobs.target import Target
from gibbsmin.results import CAUTIONS

if TYPE_CHECKING:
    import pandas as pd


def onset_document(found: Onset, uncertainty: FloatArray | None = None) -> dict[str, Any]:
    """The crossings, with their uncertainties if given, and the statement on completeness."""
    document = _onset_document(found)
    if uncertainty is not None:
        for crossing, size in zip(document["crossings"], uncertainty.tolist(), strict=True):
            crossing["uncertainty"] = size if math.isfinite(size) else None
    return document


def _onset_document(found: Onset) -> dict[str, Any]:
    return {
        "phase": found.phase,
        "stage": found.stage,
        "axis": _axis(found.axis),
        "second_axis": None if found.second is None else _axis(found.second),
        "crossings": [
            {
                "value": shown,
                "second_value": _second(found.second, row),
                "forms_as_it_rises": forms,
                "temperature_K": temperature,
                "pressure_bar": pressure / 1e5,
                "certified": certified,
                "driving_force_below": below if math.isfinite(below) else None,
                "driving_force_above": above if math.isfinite(above) else None,
                "gap": gap if math.isfinite(gap) else None,
            }
            for shown, row, forms, temperature, pressure, certified, below, above, gap in zip(
                found.shown.tolist(),
                found.row.tolist(),
                found.forms.tolist(),
                found.temperature.tolist(),
                found.pressure.tolist(),
                found.certified.tolist(),
                *found.driving_force.tolist(),
                found.gap.tolist(),
                strict=True,
            )
        ],
        "there_at_lowest_value": found.there.tolist(),
        "completeness": [
            {"proved": each.proved, "intervals": each.intervals, "text": each.text}
            for each in found.completeness
        ],
        "lost_between": _lost(found.second, found.lost_row, found.lost),
        "points_without_answer": found.unsolved.tolist(),
        "cautions": list(CAUTIONS),
    }


def target_document(found: Target) -> dict[str, Any]:
    """The answers and the range that the result has on the axis."""
    return {
        "result": found.result,
        "stage": found.stage,
        "wanted_SI": found.wanted,
        "axis": _axis(found.axis),
        "second_axis": None if found.second is None else _axis(found.second),
        "answers": [
            {
                "value": shown,
                "second_value": _second(found.second, row),
                "result_rises": rising,
                "reached_SI": reached if math.isfinite(reached) else None,
                "certified": certified,
            }
            for shown, row, rising, reached, certified in zip(
                found.shown.tolist(),
                found.row.tolist(),
                found.rising.tolist(),
                found.reached.tolist(),
                found.certified.tolist(),
                strict=True,
            )
        ],
        "range_SI": [
            [low if math.isfinite(low) else None, high if math.isfinite(high) else None]
            for low, high in zip(found.lowest.tolist(), found.highest.tolist(), strict=True)
        ],
        "lost_between": _lost(found.second, found.lost_row, found.lost),
        "points_without_answer": found.unsolved.tolist(),
        "cautions": list(CAUTIONS),
    }


def search_table(document: dict[str, Any]) -> pd.DataFrame:
    """The crossings or answers of a document, one row each; axes by their names."""
    import pandas as pd

    rows = pd.DataFrame(document.get("crossings", document.get("answers")))
    names = {"value": _column(document["axis"])}
    if document["second_axis"] is None:
        rows = rows.drop(columns="second_value", errors="ignore")
    else:
        names["second_value"] = _column(document["second_axis"])
    return rows.rename(columns=names)


def _axis(axis: Axis) -> dict[str, Any]:
    return {
        "name": axis.name,
        "unit": axis.unit,
        "lowest": float(axis.shown.min()),
        "highest": float(axis.shown.max()),
        "points": int(axis.shown.size),
    }


def _column(axis: dict[str, Any]) -> str:
    return f"{axis['name']}, {axis['unit']}" if axis["unit"] else str(axis["name"])


def _lost(second: Axis | None, row: IntArray, lost: FloatArray) -> list[dict[str, Any]]:
    """Where the axis steps over a crossing or an answer that cannot be closed in on."""
    return [
        {"lowest": low, "highest": high, "second_value": _second(second, k)}
        for k, (low, high) in zip(row.tolist(), lost.T.tolist(), strict=True)
    ]


def _second(second: Axis | None, row: int) -> float | None:
    return None if second is None else float(second.shown[row])
