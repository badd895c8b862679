"""Plots of a scan: composition along one axis, lines of equal value over two."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.errors import InputError
from gibbsmin.jobs.axis import Axis
from gibbsmin.jobs.case import Case
from gibbsmin.jobs.onset import Onset, onset
from gibbsmin.jobs.scan import Scan, column_of, scan
from gibbsmin.present.plots.style import label_ends, line_style, name_axes, new_figure, plain

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

_MOST_LINES = 8
_SHOWN_FROM = 1e-4
_WATER = "H2O(g)"
_LEVELS = 9


def plot_scan(found: Scan, show: str = "", boundary: Onset | None = None) -> Figure:
    """The natural plot of a scan by its number of axes.

    Parameters
    ----------
    show
        Along one axis ``wet`` (the default) or ``dry`` composition, or a column of the table; over
        two axes the column.
    boundary
        The onset of a phase over the same two axes, drawn upon the lines.

    Raises
    ------
    InputError
        for a table of conditions or more than two axes, which have no natural plot, and for a
        column that the table does not hold.
    """
    if not found.is_grid or not 1 <= len(found.axes) <= 2:
        what = f"{len(found.axes)} axes" if found.is_grid else "a table of conditions"
        raise InputError(
            f"found {what}", "accepted is a grid of one or two axes to plot", key="plot"
        )
    if len(found.axes) == 1:
        return plot_composition(found, show or "wet")
    return plot_map(found, show, boundary)


def plot_case(case: Case, show: str = "", *, uncertainty: bool = False) -> Figure:
    """The natural plot of a case's axes; over two, with the boundary of its ``[onset]`` phase."""
    boundary = onset(case) if case.onset is not None and len(case.axes) == 2 else None
    return plot_scan(scan(case, uncertainty=uncertainty), show, boundary)


def plot_composition(found: Scan, show: str = "wet") -> Figure:
    """Composition of the gas along an axis, with the amounts of solids and liquids below it."""
    (axis,) = found.axes
    condensed = [] if show not in ("wet", "dry") else _condensed(found)
    figure, panels = new_figure(found.title, (3.0, 1.3) if condensed else (1.0,))
    if show in ("wet", "dry"):
        lines = _fractions(found, dry=show == "dry")
        up = f"{'dry gas' if show == 'dry' else 'gas'}, mol %"
    else:
        lines = [(show, _column(found, show), _band(found, show))]
        up = show
    _draw(panels[0], axis, lines)
    name_axes(panels[0], "" if condensed else column_of(axis), up)
    if condensed:
        _draw(panels[1], axis, condensed)
        unit = next(str(name) for name in found.table if str(name).startswith("amount "))
        name_axes(panels[1], column_of(axis), f"solids, liquids, {unit.rpartition(', ')[2]}")
    return figure


def plot_map(found: Scan, show: str, boundary: Onset | None = None) -> Figure:
    """Lines of equal value over two axes, the first across, with a phase's boundary upon them."""
    across, up = found.axes
    values = _column(found, show).reshape(across.shown.size, up.shown.size)
    figure, (axes,) = new_figure(found.title)
    x, y = across.shown, up.shown
    # Greys rise with the value, so that the map reads without colour; lines carry the figures.
    axes.contourf(x, y, values.T, levels=_LEVELS, cmap="Greys", alpha=0.35)
    lines = axes.contour(x, y, values.T, levels=_LEVELS, colors="black", linewidths=0.9)
    axes.clabel(lines, fontsize=8.0, fmt=lambda value: f"{value:.4g}")
    for each, scale in ((across, axes.set_xscale), (up, axes.set_yscale)):
        if _is_logarithmic(each):
            scale("log")
    name_axes(axes, column_of(across), column_of(up))
    axes.set_title(plain(f"{found.title}: {show}"), fontsize=10.5, loc="left")
    if boundary is not None:
        draw_boundary(axes, boundary)
    return figure


def draw_boundary(axes: Axes, boundary: Onset) -> None:
    """The crossings of a phase as a thick line, with what is on either side of it."""
    second = boundary.second
    if second is None or not boundary.row.size:
        return
    for points in _branches(boundary):
        x, y = boundary.shown[points], second.shown[boundary.row[points]]
        axes.plot(x, y, color="#D55E00", linewidth=2.4, marker="o", markersize=2.5)
    middle = int(
        np.argsort(second.shown[boundary.row], kind="stable")[int(0.8 * boundary.row.size)]
    )
    to_the_right = bool(boundary.forms[middle])
    at = (boundary.shown[middle], second.shown[boundary.row[middle]])
    for side, text in ((1, "with"), (-1, "without")):
        right = (side > 0) == to_the_right
        axes.annotate(
            plain(f"{text} {boundary.phase}"),
            xy=at,
            xytext=(9 if right else -9, 0),
            textcoords="offset points",
            fontsize=9.0,
            color="#9C4400",
            ha="left" if right else "right",
            va="center",
            bbox={"facecolor": "white", "edgecolor": "none", "alpha": 0.95, "pad": 1.0},
            zorder=5,
        )


def plot_boundary(boundary: Onset, title: str) -> Figure:
    """The onset of a phase over two axes.

    Raises
    ------
    InputError
        for an onset along a single axis.
    """
    if boundary.second is None:
        raise InputError(
            "found an onset along one axis", "accepted are two axes to plot", key="plot"
        )
    figure, (axes,) = new_figure(title)
    draw_boundary(axes, boundary)
    for each, limits, scale in (
        (boundary.axis, axes.set_xlim, axes.set_xscale),
        (boundary.second, axes.set_ylim, axes.set_yscale),
    ):
        if _is_logarithmic(each):
            scale("log")
        limits(float(each.shown.min()), float(each.shown.max()))
    name_axes(axes, column_of(boundary.axis), column_of(boundary.second))
    return figure


def _branches(boundary: Onset) -> list[np.ndarray]:
    """Crossings that belong together: the k-th of each row, where they run the same way."""
    order = np.zeros(boundary.row.size, dtype=int)
    for row in np.unique(boundary.row):
        places = np.flatnonzero(boundary.row == row)
        order[places] = np.arange(places.size)
    keys = order * 2 + boundary.forms
    return [np.flatnonzero(keys == key) for key in np.unique(keys)]


def _draw(axes: Axes, axis: Axis, lines: list[tuple[str, FloatArray, FloatArray | None]]) -> None:
    ends = []
    for index, (name, values, band) in enumerate(lines):
        style = line_style(index)
        axes.plot(axis.shown, values, **style)
        if band is not None:
            low, high = values - band, values + band
            axes.fill_between(axis.shown, low, high, color=style["color"], alpha=0.2, linewidth=0)
        seen = np.flatnonzero(np.isfinite(values))
        if seen.size:
            ends.append(
                (float(axis.shown[seen[-1]]), float(values[seen[-1]]), name, style["color"])
            )
    if _is_logarithmic(axis):
        axes.set_xscale("log")
    axes.set_xlim(float(axis.shown.min()), float(axis.shown.max()))
    axes.set_ylim(bottom=min(0.0, axes.get_ylim()[0]) if _all_positive(lines) else None)
    label_ends(axes, ends)


def _all_positive(lines: list[tuple[str, FloatArray, FloatArray | None]]) -> bool:
    return all(np.nanmin(values) >= 0.0 for _, values, _ in lines if np.isfinite(values).any())


def _fractions(found: Scan, dry: bool) -> list[tuple[str, FloatArray, FloatArray | None]]:
    """The most abundant gases in mol %, the largest first."""
    names = [str(c) for c in found.table if str(c).startswith("y ")]
    if not names:
        raise InputError(
            "found a train of stages, whose gases stand in columns of their own",
            "accepted is a column to show, such as "
            + next((f'"{c}"' for c in found.table if ": y " in str(c)), "its name"),
            key="show",
        )
    share: FloatArray = np.ones(len(found.table))
    if dry and f"y {_WATER}" in names:
        share = 1.0 - found.table[f"y {_WATER}"].to_numpy()
        names.remove(f"y {_WATER}")
    lines: list[tuple[str, FloatArray, FloatArray | None]] = []
    for name in names:
        values = 100.0 * found.table[name].to_numpy() / share
        if np.nanmax(values) >= 100.0 * _SHOWN_FROM:
            band = None if dry else _band(found, name)
            lines.append((name.removeprefix("y "), values, None if band is None else 100.0 * band))
    lines.sort(key=lambda line: -float(np.nanmax(line[1])))
    return lines[:_MOST_LINES]


def _condensed(found: Scan) -> list[tuple[str, FloatArray, FloatArray | None]]:
    lines: list[tuple[str, FloatArray, FloatArray | None]] = []
    for name in found.table:
        label = str(name)
        if label.startswith("amount ") and np.nanmax(found.table[name].to_numpy()) > 0.0:
            text = label.removeprefix("amount ").rpartition(", ")[0]
            lines.append((text, found.table[name].to_numpy(), _band(found, label)))
    return lines


def _band(found: Scan, name: str) -> FloatArray | None:
    """The standard uncertainty that stands beside a column, if one does."""
    label, _, unit = name.partition(", ")
    beside = f"u({label}), {unit}" if unit else f"u({label})"
    return found.table[beside].to_numpy() if beside in found.table else None


def _column(found: Scan, name: str) -> FloatArray:
    axes = {column_of(axis) for axis in found.axes}
    numbers = [str(c) for c in found.table.select_dtypes("number") if c not in axes]
    if name not in numbers:
        raise InputError(
            f'found "{name}" to show, which is no column' if name else "found nothing to show",
            f"accepted is one of {', '.join(numbers)}",
            key="show",
        )
    return found.table[name].to_numpy()


def _is_logarithmic(axis: Axis) -> bool:
    """Whether an axis's values rise by a factor rather than by a step."""
    values = axis.shown
    if values.size < 3 or values.min() <= 0.0 or values.max() / values.min() < 5.0:
        return False
    return bool(np.ptp(np.diff(np.log(values))) < 1e-6)
