"""Plots over two axes: lines of equal value, and the boundary where a phase forms."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import replace
from itertools import pairwise
from typing import TYPE_CHECKING, Any

import numpy as np

from gibbsmin.arrays import BoolArray, FloatArray, IntArray
from gibbsmin.errors import InputError
from gibbsmin.jobs.axis import Axis
from gibbsmin.jobs.onset import Onset
from gibbsmin.jobs.scan import Scan
from gibbsmin.jobs.target import Target
from gibbsmin.present.plots.labels import Placer, Spot, settle, way_of
from gibbsmin.present.plots.quantity import axis_name, prefix, quantity, remarks
from gibbsmin.present.plots.style import TEXT, foot, name_axes, new_figure, plain, scale_axis

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

_LEVELS = 9
_SPAN_OF_DECADES = 300.0
"""Ratio of a result's ends from which its lines stand at 1, 2 and 5 of each decade."""

_BOUNDARY = "#D55E00"
_BOUNDARY_TEXT = "#9C4400"
_LINE = "0.25"
_SPOTS = 31
_SPOTS_INSIDE = 99


def plot_map(found: Scan, show: str, boundary: Onset | None = None, *, stage: str = "") -> Figure:
    """Lines of equal value over two axes, the first across, with the phases' boundaries upon them.

    The boundary of an onset is drawn as it was solved; those of other solids and liquids dashed,
    as far as the grid tells them apart.
    """
    across, up = found.axes
    shown = quantity(found, show, stage)
    rows, columns = np.argsort(up.shown), np.argsort(across.shown)
    x, y = across.shown[columns], up.shown[rows]
    values = _grid(found, shown.values)[np.ix_(rows, columns)]
    figure, (axes,) = new_figure(found.title)
    title = axes.get_title(loc="left")
    axes.set_title(f"{title}\n{plain(shown.name)}", fontsize=TEXT + 1.5, loc="left")
    name_axes(axes, axis_name(across), axis_name(up))
    drawn = "" if boundary is None else boundary.phase
    presences = {
        name: there[np.ix_(rows, columns)]
        for name, there in _presences(found, prefix(found, shown.stage)).items()
        if name != drawn
    }
    dashed = [f"Dashed: where {', '.join(presences)} ends, to the grid."] if presences else []
    foot(figure, [*dashed, *remarks(found, [])])
    levels = _levels(values)
    lines = _draw_lines(axes, x, y, values, levels)
    scale_axis(axes, across)
    scale_axis(axes, up, upright=True)
    settle(figure)
    borders = [_draw_border(axes, x, y, there) for there in presences.values()]
    ways = [way for border in borders for way in border]
    second = None if boundary is None else boundary.second
    if boundary is not None and second is not None:
        ways += _curves(axes, boundary.row, boundary.shown, boundary.forms, second)
    placer = Placer(axes, ways)
    if boundary is not None and second is not None:
        _name_sides(placer, boundary, second)
    for name, there in presences.items():
        for text, where in ((f"with {name}", there), (f"without {name}", ~there)):
            placer.place(text, _inner_spots(x, y, where), _BOUNDARY_TEXT)
    if not lines:
        axes.text(
            0.5, 0.5, _all_equal(values), transform=axes.transAxes, fontsize=TEXT, ha="center"
        )
    _name_lines(axes, placer, ways, levels, lines)
    return figure


def plot_boundary(boundary: Onset, title: str) -> Figure:
    """The onset of a phase over two axes.

    Raises
    ------
    InputError
        for an onset along a single axis.
    """
    second = _second(boundary.second, "an onset")
    figure, axes = _over_two(boundary.axis, second, title)
    ways = list(_curves(axes, boundary.row, boundary.shown, boundary.forms, second))
    _name_sides(Placer(axes, ways), boundary, second)
    return figure


def plot_target(answers: Target, value: float | str, title: str) -> Figure:
    """The curve over two axes on which a result has its value, as the user wrote it.

    Raises
    ------
    InputError
        for a target along a single axis.
    """
    second = _second(answers.second, "a target")
    figure, axes = _over_two(answers.axis, second, title)
    ways = list(_curves(axes, answers.row, answers.shown, answers.rising, second))
    text = f"{answers.result} {value}"
    if not ways:
        axes.text(0.5, 0.5, plain(f"nowhere: {text}"), transform=axes.transAxes, ha="center")
        return figure
    x, y = answers.shown, second.shown[answers.row]
    spots = [
        Spot(float(x[k]), float(y[k]), side, side)
        for k in np.argsort(np.abs(y - np.median(y)), kind="stable")
        for side in (6.0, -6.0)
    ]
    Placer(axes, ways).place(text, spots, _BOUNDARY_TEXT)
    return figure


def _second(axis: Axis | None, what: str) -> Axis:
    if axis is None:
        raise InputError(
            f"found {what} along one axis", "accepted are two axes to plot", key="plot"
        )
    return axis


def _over_two(axis: Axis, second: Axis, title: str) -> tuple[Figure, Axes]:
    """An empty plot over two axes, settled."""
    figure, (axes,) = new_figure(title)
    name_axes(axes, axis_name(axis), axis_name(second))
    foot(figure)
    scale_axis(axes, axis)
    scale_axis(axes, second, upright=True)
    settle(figure)
    return figure, axes


def _curves(
    axes: Axes, row: IntArray, shown: FloatArray, rising: BoolArray, second: Axis
) -> Iterator[FloatArray]:
    """Draw crossings as thick lines, those joined that are alike in neighbouring rows."""
    order = np.argsort(second.shown)
    rank = np.argsort(order)[row]
    number = np.zeros(row.size, dtype=int)
    for each in np.unique(row):
        places = np.flatnonzero(row == each)
        number[places[np.argsort(shown[places])]] = np.arange(places.size)
    keys = number * 2 + rising
    for key in np.unique(keys):
        points = np.flatnonzero(keys == key)
        points = points[np.argsort(rank[points])]
        for part in np.split(points, np.flatnonzero(np.diff(rank[points]) > 1) + 1):
            x, y = shown[part], second.shown[row[part]]
            axes.plot(x, y, color=_BOUNDARY, linewidth=2.4, marker="o", markersize=2.5, zorder=3)
            yield way_of(axes, x, y)


def _name_sides(placer: Placer, boundary: Onset, second: Axis) -> None:
    """What is on either side of a boundary, in the widest room that is free."""
    low, high = boundary.axis.shown.min(), boundary.axis.shown.max()
    rooms: dict[bool, list[tuple[float, Spot]]] = {True: [], False: []}
    for row, y in enumerate(second.shown.tolist()):
        edges = [low, *np.sort(boundary.shown[boundary.row == row]), high]
        there = bool(boundary.there[row])
        for left, right in pairwise(edges):
            spots = [Spot(left + share * (right - left), y) for share in (0.5, 0.35, 0.65)]
            rooms[there] += [(right - left, spot) for spot in spots]
            there = not there
    for there, text in ((True, "with"), (False, "without")):
        spots = [spot for _, spot in sorted(rooms[there], key=lambda room: -room[0])]
        spots += [replace(spot, turned=True) for spot in spots]
        placer.place(f"{text} {boundary.phase}", spots, _BOUNDARY_TEXT)


def _grid(found: Scan, values: Any) -> Any:
    """A column (states,) as (values of the second axis, values of the first)."""
    return np.asarray(values).reshape([axis.shown.size for axis in found.axes]).T


def _presences(found: Scan, before: str) -> dict[str, BoolArray]:
    """Where each solid or liquid is there, of those that are not there everywhere."""
    phases = _grid(found, found.table[f"{before}phases"].astype(str))
    parts = {name for text in np.unique(phases) for name in text.split(" + ")} - {"gas", "", "nan"}
    presences = {
        name: np.vectorize(lambda text, name=name: name in text.split(" + "))(phases)
        for name in sorted(parts)
    }
    return {name: there for name, there in presences.items() if not there.all()}


def _levels(values: FloatArray) -> FloatArray:
    """Round levels between the ends of the values; none where they have no range."""
    from matplotlib.ticker import LogLocator, MaxNLocator

    known = values[np.isfinite(values)]
    if not known.size or np.ptp(known) <= 1e-9 * np.abs(known).max():
        return np.zeros(0)
    low, high = float(known.min()), float(known.max())
    if low > 0.0 and high > _SPAN_OF_DECADES * low:
        subs = (1.0, 2.0, 5.0) if high < 1e4 * low else (1.0,)
        levels = np.asarray(LogLocator(subs=subs, numticks=30).tick_values(low, high))
    else:
        levels = np.asarray(MaxNLocator(_LEVELS, steps=[1, 2, 5, 10]).tick_values(low, high))
    return np.asarray(levels[(levels > low) & (levels < high)])


def _draw_lines(
    axes: Axes, x: FloatArray, y: FloatArray, values: FloatArray, levels: FloatArray
) -> list[list[FloatArray]]:
    """Lines of equal value over greys that rise with it: their parts in data, level by level."""
    if not levels.size:
        return []
    known = values[np.isfinite(values)]
    bounds = [min(float(known.min()), levels[0]), *levels, max(float(known.max()), levels[-1])]
    shades = [str(shade) for shade in np.linspace(0.98, 0.72, len(bounds) - 1)]
    axes.contourf(x, y, values, levels=bounds, colors=shades)
    drawn = axes.contour(x, y, values, levels=levels, colors=_LINE, linewidths=0.9, linestyles="-")
    return [[np.asarray(part) for part in parts] for parts in drawn.allsegs]


def _name_lines(
    axes: Axes,
    placer: Placer,
    ways: Sequence[FloatArray],
    levels: FloatArray,
    lines: Sequence[Sequence[FloatArray]],
) -> None:
    """The value of each line upon its longest part, near the middle, off all other lines."""
    paths = [[way_of(axes, part[:, 0], part[:, 1]) for part in parts] for parts in lines]
    for k, level in enumerate(levels.tolist()):
        longest = max(paths[k], key=len, default=np.zeros((0, 2)))
        if len(longest) < 2:
            continue
        shares = np.linspace(0.05, 0.95, _SPOTS)
        shares = shares[np.argsort(np.abs(shares - 0.5), kind="stable")]
        points = longest[(shares * (len(longest) - 1)).astype(int)]
        spots = [Spot(x, y) for x, y in axes.transData.inverted().transform(points).tolist()]
        others = [way for j, parts in enumerate(paths) if j != k for way in parts]
        placer.avoiding([*ways, *others]).place(f"{level:g}", spots, "black", needed=False)


def _draw_border(axes: Axes, x: FloatArray, y: FloatArray, there: BoolArray) -> list[FloatArray]:
    """A dashed line half way between the states with a phase and those without."""
    drawn = axes.contour(
        x, y, there.astype(float), levels=[0.5], colors=_BOUNDARY, linestyles="--", linewidths=1.8
    )
    return [way_of(axes, part[:, 0], part[:, 1]) for part in drawn.allsegs[0] if len(part)]


def _inner_spots(x: FloatArray, y: FloatArray, where: BoolArray) -> list[Spot]:
    """The states of a region, those nearest to its middle first."""
    rows, columns = np.nonzero(where)
    if not rows.size:
        return []
    apart = np.hypot(
        (rows - rows.mean()) / where.shape[0], (columns - columns.mean()) / where.shape[1]
    )
    order = np.argsort(apart, kind="stable")
    some = order[:: max(1, len(order) // _SPOTS_INSIDE)]
    spots = [Spot(float(x[columns[k]]), float(y[rows[k]])) for k in some]
    return [*spots, *(replace(spot, turned=True) for spot in spots)]


def _all_equal(values: FloatArray) -> str:
    known = values[np.isfinite(values)]
    return f"{known[0]:.4g} everywhere" if known.size else "no state has an answer"
