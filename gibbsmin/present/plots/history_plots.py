"""Plots of a history of samples: approach and closure with their intervals."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from gibbsmin.jobs.history import SIGNIFICANCE, Series
from gibbsmin.present.plots.style import COLOURS, name_axes, new_figure, plain

if TYPE_CHECKING:
    from matplotlib.figure import Figure

_COVERAGE = 1.96


def plot_series(series: Series, labels: list[str], title: str) -> Figure:
    """One figure of every sample with its 95 % interval; a change point as a line across."""
    figure, (axes,) = new_figure(title)
    x = np.arange(series.values.size)
    known = np.isfinite(series.values)
    half = np.where(np.isfinite(series.uncertainties), _COVERAGE * series.uncertainties, 0.0)
    axes.errorbar(
        x[known],
        series.values[known],
        yerr=half[known],
        fmt="o",
        markersize=3.5,
        color=COLOURS[2],
        ecolor="0.6",
        elinewidth=0.8,
    )
    trend = series.trend
    clearer = trend is not None and trend.change_probability <= trend.drift_probability
    if trend is not None and clearer and trend.changes(SIGNIFICANCE):
        axes.axvline(trend.change - 0.5, color=COLOURS[1], linestyle=(0, (4, 2)), linewidth=1.4)
        axes.annotate(
            plain(f"change at {labels[trend.change]}"),
            xy=(trend.change - 0.5, 1.0),
            xycoords=("data", "axes fraction"),
            xytext=(4, -10),
            textcoords="offset points",
            fontsize=9.0,
            color=COLOURS[1],
        )
    elif trend is not None and trend.drifts(SIGNIFICANCE):
        middle = float(np.median(series.values[known])) - trend.slope * float(np.median(x[known]))
        axes.plot(x, middle + trend.slope * x, color=COLOURS[0], linewidth=1.2)
    every = max(1, len(labels) // 8)
    axes.set_xticks(x[::every], [plain(label) for label in labels[::every]])
    axes.tick_params(axis="x", labelrotation=30)
    name_axes(axes, "sample", f"{series.name}, {series.unit}" if series.unit else series.name)
    return figure
