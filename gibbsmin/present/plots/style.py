"""What all plots share: size, colours that grey keeps apart, labels at the lines' ends, files."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np

from gibbsmin.arrays import FloatArray
from gibbsmin.present.files import output_suffix, write_whole

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

ENDINGS = (".png", ".svg")

COLOURS = ("#000000", "#D55E00", "#0072B2", "#009E73", "#CC79A7", "#7F4F00", "#56B4E9", "#E69F00")
"""Colours that the colour-blind tell apart (M. Okabe, K. Ito, 2008), in an order that alternates
dark and light, so that neighbours differ in grey too."""

DASHES: tuple[Any, ...] = ("-", (0, (6, 2)), (0, (2, 1.5)), (0, (7, 2, 1.5, 2)))
"""Line styles that tell lines apart where colour does not."""

_SIZE = (6.9, 4.3)
_TEXT = 9.0
_LINE_SPACING = 1.25


def new_figure(title: str, panels: Sequence[float] = (1.0,)) -> tuple[Figure, list[Axes]]:
    """A figure with panels above one another, of these relative heights, sharing their abscissa."""
    from matplotlib import rcParams
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from matplotlib.figure import Figure

    rcParams["svg.hashsalt"] = "gibbsmin"
    figure = Figure(figsize=_SIZE, layout="constrained", dpi=150)
    FigureCanvasAgg(figure)
    grid = figure.subplots(len(panels), 1, sharex=True, squeeze=False, height_ratios=list(panels))
    axes: list[Axes] = list(grid[:, 0])
    for each in axes:
        each.spines[["top", "right"]].set_visible(False)
        each.tick_params(labelsize=_TEXT)
        each.grid(visible=True, color="0.9", linewidth=0.6)
        each.set_axisbelow(True)
    axes[0].set_title(plain(title), fontsize=_TEXT + 1.5, loc="left")
    return figure, axes


def name_axes(axes: Axes, across: str, up: str) -> None:
    """Names of both axes, with their units."""
    axes.set_xlabel(plain(across), fontsize=_TEXT)
    axes.set_ylabel(plain(up), fontsize=_TEXT)


def line_style(index: int) -> dict[str, Any]:
    """Colour and dashes of the line of that number."""
    return {
        "color": COLOURS[index % len(COLOURS)],
        "linestyle": DASHES[index % len(DASHES)],
        "linewidth": 1.7,
    }


def label_ends(axes: Axes, ends: Sequence[tuple[float, float, str, str]]) -> None:
    """Names beside the right ends (x, y, text, colour) of lines, moved apart where they meet."""
    if not ends:
        return
    figure: Any = axes.figure
    figure.canvas.draw()
    height = axes.get_window_extent().height
    least = _TEXT * _LINE_SPACING * figure.dpi / 72.0 / height
    order = sorted(range(len(ends)), key=lambda k: _share_of_height(axes, ends[k][1]))
    wanted = np.array([_share_of_height(axes, ends[k][1]) for k in order])
    for place, k in zip(_apart(wanted, least), order, strict=True):
        _, y, text, colour = ends[k]
        axes.annotate(
            plain(text),
            xy=(1.0, _share_of_height(axes, y)),
            xycoords="axes fraction",
            xytext=(1.03, place),
            textcoords="axes fraction",
            fontsize=_TEXT,
            color=colour,
            va="center",
            annotation_clip=False,
            arrowprops={"arrowstyle": "-", "color": colour, "linewidth": 0.6, "shrinkB": 0.0},
        )


def _share_of_height(axes: Axes, y: float) -> float:
    """Where a value stands on the ordinate, 0 at its foot and 1 at its head."""
    point = axes.transData.transform((axes.get_xlim()[1], y))
    return float(axes.transAxes.inverted().transform(point)[1])


def _apart(wanted: FloatArray, least: float) -> FloatArray:
    """Places in rising order, at least that far apart and as near to the wanted ones as may be.

    Neighbours that meet are pooled, each pool centred on the mean of what its members want
    (isotonic regression by pooling; R. E. Barlow et al., 1972).
    """
    shifted = wanted - least * np.arange(wanted.size)
    pools: list[list[float]] = []
    for value in shifted.tolist():
        pools.append([value, 1.0])
        while len(pools) > 1 and pools[-2][0] >= pools[-1][0]:
            mean, count = pools.pop()
            before, others = pools.pop()
            whole = count + others
            pools.append([(mean * count + before * others) / whole, whole])
    levels = np.concatenate([np.full(int(count), mean) for mean, count in pools])
    return np.asarray(levels + least * np.arange(wanted.size))


def plain(text: str) -> str:
    """Text in which no sign starts a formula."""
    return text.replace("$", r"\$")


def require_plot_ending(path: Path) -> str:
    """The file's ending, refused before any work is done where no plot can be written so."""
    return output_suffix(path, ENDINGS)


def write_plot(figure: Figure, path: Path) -> None:
    """Write a figure whole, the same bytes each time.

    Raises
    ------
    OutputError
        for another ending or a file that cannot be written.
    """
    suffix = require_plot_ending(path)
    metadata = {"Date": None} if suffix == ".svg" else {"Software": "gibbsmin"}
    kind = suffix.removeprefix(".")
    write_whole(path, lambda scratch: figure.savefig(scratch, format=kind, metadata=metadata))
