"""Lost work by stage, as bars."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from gibbsmin.jobs.case import Case
from gibbsmin.jobs.predict import predict
from gibbsmin.present.plots.quantity import prefixed
from gibbsmin.present.plots.style import COLOURS, TEXT, foot, name_axes, new_figure, plain
from gibbsmin.present.quantities import significant

if TYPE_CHECKING:
    from matplotlib.figure import Figure

_LONGEST_REMARK = 60


def plot_lost_work(case: Case) -> Figure:
    """A bar a stage, in the order of the train, with its share of the whole.

    A stage without a figure, as where a compressor is missing, has the reason in its place.
    """
    outlet = predict(case)
    lost = np.array([stage.entropy.lost_work for stage in outlet.stages])
    whole = float(np.nansum(lost))
    factor, unit = prefixed(float(np.nanmax(np.abs(lost), initial=0.0)), outlet.is_flow)
    figure, (axes,) = new_figure(case.title)
    places = np.arange(lost.size)
    axes.barh(places, np.nan_to_num(lost) / factor, height=0.6, color=COLOURS[2])
    axes.set_yticks(places, [plain(stage.name) for stage in outlet.stages])
    axes.set_ylim(lost.size - 0.4, -0.6)
    axes.grid(visible=False, axis="y")
    for place, stage in zip(places.tolist(), outlet.stages, strict=True):
        value = stage.entropy.lost_work
        if np.isnan(value):
            text = stage.entropy.remark or stage.status.sentence
            text = text if len(text) <= _LONGEST_REMARK else f"{text[:_LONGEST_REMARK]} …"
        else:
            share = f", {100.0 * value / whole:.0f} %" if whole > 0.0 and lost.size > 1 else ""
            text = f"{significant(value / factor, 3)}{share}"
        axes.annotate(
            plain(text),
            xy=(max(0.0, float(np.nan_to_num(value))) / factor, place),
            xytext=(5, 0),
            textcoords="offset points",
            fontsize=TEXT,
            va="center",
        )
    low = min(0.0, float(np.nanmin(lost, initial=0.0))) / factor
    axes.set_xlim(low * 1.1, max(1.22 * float(np.nanmax(lost, initial=0.0)) / factor, 1e-9))
    surroundings = outlet.final.entropy.surroundings_temperature
    name_axes(axes, f"lost work, {unit} (surroundings at {significant(surroundings)} K)", "")
    figures = significant(whole / factor, 4)
    foot(figure, [f"All stages together: {figures} {unit}."] if lost.size > 1 else [])
    return figure
