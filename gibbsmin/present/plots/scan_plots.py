"""Plots of a scan: composition or a result along one axis, with the onsets of a phase."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.errors import InputError
from gibbsmin.jobs.axis import Axis
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.conditions import Conditions, Grid
from gibbsmin.jobs.onset import Onset, onset
from gibbsmin.jobs.scan import Scan, scan, scan_block
from gibbsmin.present.plots.labels import End, Placer, Spot, label_ends, settle, way_of
from gibbsmin.present.plots.map_plots import plot_boundary, plot_map
from gibbsmin.present.plots.quantity import (
    Quantity,
    axis_name,
    condensed,
    gases,
    highest,
    prefix,
    quantity,
    remarks,
    sides,
    unit,
)
from gibbsmin.present.plots.style import (
    COLOURS,
    foot,
    line_style,
    name_axes,
    new_figure,
    plain_decades,
    scale_axis,
)
from gibbsmin.present.quantities import significant

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

COMPOSITIONS = ("wet", "dry")

_MOST_GASES = 9
_MOST_GASES_LOGARITHMIC = 14
_MOST_CONDENSED = 4
_SHOWN_FROM = 0.05
_TRACES_FROM = 1e-4
"""mol % from which a gas is drawn: 500 ppm on a linear ordinate, 1 ppm on a logarithmic one."""

_LOWEST = 1e-5
"""Where a logarithmic ordinate ends, mol %."""

_HEIGHTS = (0.94, 0.85, 0.75, 0.65, 0.55, 0.45, 0.35, 0.25, 0.15, 0.06)


def plot_scan(
    found: Scan,
    show: str = "",
    boundary: Onset | None = None,
    *,
    stage: str = "",
    logarithmic: bool = False,
) -> Figure:
    """The natural plot of a scan by its number of axes.

    Parameters
    ----------
    show
        Along one axis ``wet`` (the default) or ``dry`` composition, or a result; over two axes
        the result: a column of the table, or in words such as ``dry fraction CH4``.
    boundary
        The onset of a phase over the same axes, drawn upon the lines.
    stage
        The stage of a train; the last, unless it is named.
    logarithmic
        Whether the ordinate along one axis is logarithmic, which shows traces.

    Raises
    ------
    InputError
        for a table of conditions or more than two axes, which have no natural plot, and for a
        result or a stage that the scan does not tell.
    """
    require_grid(found)
    if len(found.axes) == 2:
        _require_linear(logarithmic)
        return plot_map(found, show, boundary, stage=stage)
    if show and show not in COMPOSITIONS:
        return plot_result(found, show, boundary, stage=stage, logarithmic=logarithmic)
    return plot_composition(found, show or "wet", boundary, stage=stage, logarithmic=logarithmic)


def plot_onset(case: Case, found: Onset) -> Figure:
    """An onset: its boundary over two axes, or its places upon the composition along one."""
    if found.second is not None:
        return plot_boundary(found, case.title)
    stage = found.stage if len(case.stages) > 1 else ""
    return plot_composition(scan(case), boundary=found, stage=stage)


def require_plottable(
    case: Case, conditions: Conditions, show: str, *, stage: str, logarithmic: bool
) -> None:
    """Refuse what could not be plotted, by a scan's first state, before the others are solved.

    Raises
    ------
    InputError
        as :func:`plot_scan`.
    """
    first = scan_block(case, conditions, 0, 1)
    found = Scan(case.title, conditions.axes, isinstance(conditions, Grid), first)
    require_grid(found)
    if len(found.axes) == 2:
        _require_linear(logarithmic)
        quantity(found, show, stage)
    elif show and show not in COMPOSITIONS:
        quantity(found, show, stage)
    else:
        prefix(found, stage)


def _require_linear(logarithmic: bool) -> None:
    if logarithmic:
        raise InputError(
            "found two axes to plot with a logarithmic ordinate", "accepted is one axis", key="log"
        )


def require_grid(found: Scan) -> None:
    """Refuse what has no natural plot.

    Raises
    ------
    InputError
        for a table of conditions or more than two axes.
    """
    if not found.is_grid or not 1 <= len(found.axes) <= 2:
        what = f"{len(found.axes)} axes" if found.is_grid else "a table of conditions"
        raise InputError(
            f"found {what}", "accepted is a grid of one or two axes to plot", key="plot"
        )


def plot_case(
    case: Case,
    show: str = "",
    *,
    stage: str = "",
    logarithmic: bool = False,
    uncertainty: bool = False,
) -> Figure:
    """The natural plot of a case's axes, with the onsets of its ``[onset]`` phase upon it."""
    found = scan(case, uncertainty=uncertainty)
    return plot_scan(found, show, boundary_of(case), stage=stage, logarithmic=logarithmic)


def boundary_of(case: Case) -> Onset | None:
    """The onsets that belong upon the plot of a case's scan, if it names a phase."""
    return onset(case) if case.onset is not None and 1 <= len(case.axes) <= 2 else None


def plot_composition(
    found: Scan,
    show: str = "wet",
    boundary: Onset | None = None,
    *,
    stage: str = "",
    logarithmic: bool = False,
) -> Figure:
    """Composition of the gas along an axis, with the amounts of solids and liquids below it."""
    (axis,) = found.axes
    least, most = _SHOWN_FROM, _MOST_GASES
    if logarithmic:
        least, most = _TRACES_FROM, _MOST_GASES_LOGARITHMIC
    shown = [g for g in gases(found, stage, dry=show == "dry") if highest(g) >= least]
    shown = sorted(shown, key=highest, reverse=True)[:most]
    below = sorted(condensed(found, stage), key=highest, reverse=True)[:_MOST_CONDENSED]
    figure, panels = new_figure(found.title, (3.0, 1.3) if below else (1.0,))
    of = prefix(found, stage)
    gas = f"{of}{'dry gas' if show == 'dry' else 'gas'}, mol %"
    foot(figure, remarks(found, [*shown, *below]))
    name_axes(panels[0], "" if below else axis_name(axis), gas)
    if below:
        unit = below[0].name.rpartition(", ")[2]
        name_axes(panels[1], axis_name(axis), f"solids,\nliquids, {unit}")
    _draw(panels[0], axis, shown, logarithmic=logarithmic, from_zero=True)
    if below:
        _draw(panels[1], axis, below, logarithmic=False, from_zero=True)
    _mark_onsets(figure, panels, boundary, axis, shown)
    return figure


def plot_result(
    found: Scan,
    show: str,
    boundary: Onset | None = None,
    *,
    stage: str = "",
    logarithmic: bool = False,
) -> Figure:
    """One result along an axis, with its standard uncertainty where it is known."""
    (axis,) = found.axes
    shown = quantity(found, show, stage)
    figure, panels = new_figure(found.title)
    foot(figure, remarks(found, [shown]))
    name_axes(panels[0], axis_name(axis), shown.name)
    _draw(panels[0], axis, [shown], logarithmic=logarithmic, from_zero=False)
    _mark_onsets(figure, panels, boundary, axis, [shown])
    return figure


def _draw(
    axes: Axes, axis: Axis, lines: Sequence[Quantity], *, logarithmic: bool, from_zero: bool
) -> None:
    """Lines with their bands, named at their right ends where there are several."""
    order = np.argsort(axis.shown, kind="stable")
    x = axis.shown[order]
    ends = []
    for index, line in enumerate(lines):
        style = line_style(index)
        values = line.values[order]
        axes.plot(x, values, **style)
        if line.band is not None:
            low, high = values - line.band[order], values + line.band[order]
            axes.fill_between(x, low, high, color=style["color"], alpha=0.2, linewidth=0)
        seen = np.flatnonzero(np.isfinite(values) & ((values > 0.0) | (not logarithmic)))
        if seen.size:
            ends.append(
                End(float(x[seen[-1]]), float(values[seen[-1]]), line.short, style["color"])
            )
    scale_axis(axes, axis)
    known = sides(lines)
    if logarithmic:
        _scale_logarithmic(axes, known)
    elif from_zero:
        axes.set_ylim(0.0, 1.04 * float(known.max()) if known.size and known.max() > 0.0 else 1.0)
    if from_zero:
        label_ends(axes, ends)


def _scale_logarithmic(axes: Axes, known: FloatArray) -> None:
    positive = known[known > 0.0]
    if not positive.size:
        raise InputError(
            "found no value above zero",
            "accepted is a linear ordinate where all is zero or negative",
            key="log",
        )
    high = float(positive.max())
    low = max(float(positive.min()), _LOWEST)
    axes.set_yscale("log")
    plain_decades(axes.yaxis, low, high)
    axes.set_ylim(low / 1.3, high * 1.6)


def _mark_onsets(
    figure: Figure,
    panels: Sequence[Axes],
    boundary: Onset | None,
    axis: Axis,
    lines: Sequence[Quantity],
) -> None:
    """A line across the panels at each onset along the axis, with its place in words."""
    if boundary is None or boundary.second is not None or not boundary.row.size:
        return
    settle(figure)
    for panel in panels:
        for position in boundary.shown:
            panel.axvline(position, color="0.35", linewidth=0.9, linestyle=(0, (1, 1.5)))
    top = panels[0]
    placer = Placer(top, [way_of(top, axis.shown, line.values) for line in lines])
    page = top.transAxes.transform([(0.0, share) for share in _HEIGHTS])
    heights = top.transData.inverted().transform(page)[:, 1].tolist()
    for position, forms in zip(boundary.shown.tolist(), boundary.forms.tolist(), strict=True):
        text = f"{boundary.phase} {'from' if forms else 'up to'} {significant(position, 4)}"
        text = f"{text} {unit(axis)}".rstrip()
        spots = [Spot(position, y, side) for y in heights for side in (5.0, -5.0)]
        placer.place(text, spots, COLOURS[1])
