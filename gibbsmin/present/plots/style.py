"""What all plots share: size, colours that grey keeps apart, titles and axes, files."""

from __future__ import annotations

import io
import textwrap
from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np

from gibbsmin.jobs.axis import Axis
from gibbsmin.present.files import output_suffix, write_text, write_whole

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

ENDINGS = (".png", ".svg")

COLOURS = ("#000000", "#D55E00", "#0072B2", "#009E73", "#CC79A7", "#7F4F00", "#56B4E9", "#E69F00")
"""Colours that the colour-blind tell apart (M. Okabe, K. Ito, 2008), in an order that alternates
dark and light, so that neighbours differ in grey too."""

DASHES: tuple[Any, ...] = ("-", (0, (6, 2)), (0, (2, 1.5)), (0, (7, 2, 1.5, 2)))
"""Line styles that tell lines apart where colour does not."""

TEXT = 9.0
"""Size of text in points, on a page of about 175 mm by 110 mm."""

CAUTION = "Equilibrium is a limit, not a rate."

_SIZE = (6.9, 4.3)
_DOTS_PER_INCH = 150
_TITLE_WIDTH = 76
_TITLE_LINES = 2
_LOGARITHMIC_FROM = 5.0
_PLAIN_FROM, _PLAIN_TO = 1e-6, 1e6


def new_figure(title: str, panels: Sequence[float] = (1.0,)) -> tuple[Figure, list[Axes]]:
    """A figure with panels above one another, of these relative heights, sharing their abscissa."""
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from matplotlib.figure import Figure

    figure = Figure(figsize=_SIZE, layout="constrained", dpi=_DOTS_PER_INCH)
    FigureCanvasAgg(figure)
    grid = figure.subplots(len(panels), 1, sharex=True, squeeze=False, height_ratios=list(panels))
    axes: list[Axes] = list(grid[:, 0])
    for each in axes:
        each.spines[["top", "right"]].set_visible(False)
        each.tick_params(labelsize=TEXT)
        each.grid(visible=True, color="0.9", linewidth=0.6)
        each.set_axisbelow(True)
    axes[0].set_title(plain(shortened(title)), fontsize=TEXT + 1.5, loc="left")
    return figure, axes


def shortened(title: str) -> str:
    """A title in two lines at most, which fit the figure's width."""
    return "\n".join(textwrap.wrap(title, _TITLE_WIDTH, max_lines=_TITLE_LINES, placeholder=" …"))


def foot(figure: Figure, sentences: Sequence[str] = ()) -> None:
    """Small sentences at the foot of the page, the caution last."""
    figure.supxlabel(
        plain("   ".join([*sentences, CAUTION])), fontsize=7.0, color="0.35", x=0.995, ha="right"
    )


def name_axes(axes: Axes, across: str, up: str) -> None:
    """Names of both axes, with their units."""
    axes.set_xlabel(plain(across), fontsize=TEXT)
    axes.set_ylabel(plain(up), fontsize=TEXT)


def scale_axis(axes: Axes, axis: Axis, *, upright: bool = False) -> None:
    """Limits, scale and ticks of the abscissa (or the ordinate) for an axis of a scan."""
    low, high = float(axis.shown.min()), float(axis.shown.max())
    if is_logarithmic(axis):
        (axes.set_yscale if upright else axes.set_xscale)("log")
        plain_decades(axes.yaxis if upright else axes.xaxis, low, high)
    if high > low:
        (axes.set_ylim if upright else axes.set_xlim)(low, high)


def is_logarithmic(axis: Axis) -> bool:
    """Whether an axis's values rise by a factor rather than by a step."""
    values = np.sort(axis.shown)
    if values.size < 3 or values[0] <= 0.0 or values[-1] < _LOGARITHMIC_FROM * values[0]:
        return False
    steps, factors = np.diff(values), np.diff(np.log(values))
    return bool(np.ptp(factors) / factors.mean() < np.ptp(steps) / steps.mean())


def plain_decades(axis: Any, low: float, high: float) -> None:
    """Ticks of a logarithmic axis as numbers to read aloud: 1, 2, 5, 10, or decades alone."""
    from matplotlib.ticker import FuncFormatter, LogLocator, NullFormatter

    few = high < 500.0 * low
    axis.set_major_locator(LogLocator(subs=(1.0, 2.0, 5.0) if few else (1.0,), numticks=30))
    axis.set_major_formatter(FuncFormatter(lambda value, _: _read_aloud(value)))
    axis.set_minor_formatter(NullFormatter())


def _read_aloud(value: float) -> str:
    if not _PLAIN_FROM <= abs(value) < _PLAIN_TO:
        return f"{value:g}"
    return np.format_float_positional(value, precision=8, trim="-")


def line_style(index: int) -> dict[str, Any]:
    """Colour and dashes of the line of that number; the first 32 are all different."""
    return {
        "color": COLOURS[index % len(COLOURS)],
        "linestyle": DASHES[(index + index // len(COLOURS)) % len(DASHES)],
        "linewidth": 1.7,
    }


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
    if require_plot_ending(path) == ".svg":
        write_text(path, svg_of(figure))
    else:
        metadata = {"Software": "gibbsmin"}
        write_whole(path, lambda scratch: figure.savefig(scratch, format="png", metadata=metadata))


def svg_of(figure: Figure) -> str:
    """The figure as the text of an SVG document, the same each time."""
    from matplotlib import rc_context

    text = io.StringIO()
    with rc_context({"svg.hashsalt": "gibbsmin"}):
        figure.savefig(text, format="svg", metadata={"Date": None})
    return text.getvalue()
