"""Direct labels: beside the ends of lines, or within the axes where nothing is in the way."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.present.plots.style import TEXT, plain

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure
    from matplotlib.transforms import Bbox

_LINE_SPACING = 1.25
_BETWEEN_POINTS = 4.0
"""Dots between the points that stand for a line where labels must not cover it."""

_ROOM = 2.0
_POINTS_OF_LEAD = 20
_LED_FROM = 15.0
"""Points from its place at which a label is led to it by a thin line."""


@dataclass(frozen=True)
class End:
    """The right end of a line, in data, and what it is called."""

    x: float
    y: float
    text: str
    colour: str


@dataclass(frozen=True)
class Spot:
    """A place for a label: a point in data, where the text stands from it in points, and whether
    it is turned to be read from the right."""

    x: float
    y: float
    right: float = 0.0
    above: float = 0.0
    turned: bool = False

    @property
    def is_far(self) -> bool:
        """Whether a thin line leads from the text to the point."""
        return max(abs(self.right), abs(self.above)) > _LED_FROM

    @property
    def alignment(self) -> tuple[str, str]:
        """Which side of the text faces the point."""
        across = "left" if self.right > 0 else "right" if self.right < 0 else "center"
        up = "bottom" if self.above > 0 else "top" if self.above < 0 else "center"
        return across, up


def around(x: float, y: float, by: float = 7.0) -> list[Spot]:
    """Places about a point: right, left, then above and below, then the corners."""
    sides = [(1, 0), (-1, 0), (0, 1), (0, -1), (1, -1), (-1, 1), (1, 1), (-1, -1)]
    return [Spot(x, y, by * right, by * above) for right, above in sides]


def settle(figure: Figure) -> None:
    """Fix the layout, so that labels within the axes can be measured and stay where they are."""
    canvas: Any = figure.canvas
    canvas.draw()
    figure.set_layout_engine("none")


def label_ends(axes: Axes, ends: Sequence[End]) -> None:
    """Names beside the right ends of lines, moved apart where they would meet.

    The axes must have their limits, scales and names already.
    """
    if not ends:
        return
    figure: Any = axes.figure
    figure.canvas.draw()
    least = TEXT * _LINE_SPACING * figure.dpi / 72.0 / axes.get_window_extent().height
    order = sorted(range(len(ends)), key=lambda k: _share_of_height(axes, ends[k].y))
    wanted = np.array([_share_of_height(axes, ends[k].y) for k in order])
    for place, k in zip(apart(wanted, least), order, strict=True):
        end = ends[k]
        axes.annotate(
            plain(end.text),
            xy=(1.0, _share_of_height(axes, end.y)),
            xycoords="axes fraction",
            xytext=(1.03, place),
            textcoords="axes fraction",
            fontsize=TEXT,
            color=end.colour,
            va="center",
            annotation_clip=False,
            arrowprops={"arrowstyle": "-", "color": end.colour, "linewidth": 0.6, "shrinkB": 0.0},
        )


def apart(wanted: FloatArray, least: float) -> FloatArray:
    """Places in rising order, at least that far apart, as near to the wanted ones as may be.

    Neighbours that meet are pooled, each pool centred on the mean of what its members want
    (isotonic regression by pooling; R. E. Barlow et al., 1972); all stay between 0 and 1 where
    there is room for them.
    """
    steps = least * np.arange(wanted.size)
    pools: list[list[float]] = []
    for value in (wanted - steps).tolist():
        pools.append([value, 1.0])
        while len(pools) > 1 and pools[-2][0] >= pools[-1][0]:
            mean, count = pools.pop()
            before, others = pools.pop()
            whole = count + others
            pools.append([(mean * count + before * others) / whole, whole])
    levels = np.concatenate([np.full(int(count), mean) for mean, count in pools])
    room = 1.0 - steps[-1]
    return np.asarray(np.clip(levels, min(0.0, room / 2), max(room, room / 2)) + steps)


def way_of(axes: Axes, x: FloatArray, y: FloatArray) -> FloatArray:
    """A line in data as points on the page (k, 2), close enough that no label slips between."""
    known = np.isfinite(x) & np.isfinite(y)
    corners = axes.transData.transform(np.column_stack([x[known], y[known]]))
    if len(corners) < 2:
        return np.asarray(corners)
    lengths = np.hypot(*np.diff(corners, axis=0).T)
    along = np.concatenate([[0.0], np.cumsum(lengths)])
    steps = np.linspace(0.0, along[-1], max(2, int(along[-1] / _BETWEEN_POINTS)))
    return np.column_stack([np.interp(steps, along, corners[:, k]) for k in (0, 1)])


class Placer:
    """Places labels within settled axes, each where it covers neither another nor a line."""

    def __init__(self, axes: Axes, ways: Sequence[FloatArray] = ()) -> None:
        self._axes = axes
        self._points = np.concatenate([np.zeros((0, 2)), *ways])
        self._taken: list[Bbox] = []

    def avoiding(self, ways: Sequence[FloatArray]) -> Placer:
        """Another for the same page, kept off other lines and off all labels of this one."""
        other = Placer(self._axes, ways)
        other._taken = self._taken
        return other

    def place(self, text: str, spots: Sequence[Spot], colour: str, *, needed: bool = True) -> None:
        """Put the text at the first spot that is free; at the freest, or nowhere, if none is."""
        best, fewest = None, np.inf
        for spot in spots:
            label = self._write(text, spot, colour)
            conflicts = self._conflicts(_box(label), self._lead(spot, _box(label)))
            label.remove()
            if conflicts < fewest:
                best, fewest = spot, conflicts
            if fewest == 0:
                break
        if best is not None and (needed or fewest == 0):
            label = self._write(text, best, colour)
            self._taken.append(_box(label))
            self._points = np.concatenate([self._points, self._lead(best, _box(label))])

    def _write(self, text: str, spot: Spot, colour: str) -> Any:
        across, up = spot.alignment
        return self._axes.annotate(
            plain(text),
            xy=(spot.x, spot.y),
            xytext=(spot.right, spot.above),
            textcoords="offset points",
            fontsize=TEXT,
            color=colour,
            ha=across,
            va=up,
            rotation=90.0 if spot.turned else 0.0,
            zorder=5,
            bbox={"facecolor": "white", "edgecolor": "none", "alpha": 0.8, "pad": 0.8},
            arrowprops={"arrowstyle": "-", "color": colour, "linewidth": 0.6}
            if spot.is_far
            else None,
        )

    def _lead(self, spot: Spot, box: Bbox) -> FloatArray:
        """The thin line that leads from a far label to its place, as points on the page."""
        if not spot.is_far:
            return np.zeros((0, 2))
        middle = [0.5 * (box.x0 + box.x1), 0.5 * (box.y0 + box.y1)]
        place = self._axes.transData.transform((spot.x, spot.y))
        return np.asarray(np.linspace(place, middle, _POINTS_OF_LEAD))

    def _conflicts(self, box: Bbox, lead: FloatArray) -> float:
        """Labels and points of lines under a box or its lead; leaving the axes weighs most."""
        frame = self._axes.get_window_extent()
        outside = box.x0 < frame.x0 or box.x1 > frame.x1 or box.y0 < frame.y0 or box.y1 > frame.y1
        padded = box.padded(_ROOM)
        covered = np.all(
            (self._points > [padded.x0, padded.y0]) & (self._points < [padded.x1, padded.y1]),
            axis=1,
        )
        labels = len(
            [
                other
                for other in self._taken
                if padded.overlaps(other) or any(other.contains(x, y) for x, y in lead)
            ]
        )
        return 1000.0 * float(outside) + 100.0 * labels + float(covered.sum())


def _box(label: Any) -> Bbox:
    """Where a label's text stands on the page, without the line that leads to it."""
    from matplotlib.text import Text

    label.update_positions(label.figure.canvas.get_renderer())
    return Text.get_window_extent(label)


def _share_of_height(axes: Axes, y: float) -> float:
    """Where a value stands on the ordinate, 0 at its foot or below and 1 at its head or above."""
    point = axes.transData.transform((axes.get_xlim()[1], y))
    share = float(axes.transAxes.inverted().transform(point)[1])
    return min(1.0, max(0.0, share))
