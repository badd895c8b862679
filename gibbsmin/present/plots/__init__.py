"""Plots: figures of scans, onsets and trains, for the page and the screen.

Each function gives a matplotlib figure; :func:`write_plot` writes one to a file.
"""

from gibbsmin.present.plots.converter_plot import plot_beds
from gibbsmin.present.plots.cooling_plot import plot_cooling
from gibbsmin.present.plots.lost_work_plot import plot_lost_work
from gibbsmin.present.plots.map_plots import plot_boundary, plot_map, plot_target
from gibbsmin.present.plots.scan_plots import plot_case, plot_composition, plot_result, plot_scan
from gibbsmin.present.plots.style import write_plot
from gibbsmin.present.plots.train_plots import plot_train

__all__ = [
    "plot_beds",
    "plot_boundary",
    "plot_case",
    "plot_composition",
    "plot_cooling",
    "plot_lost_work",
    "plot_map",
    "plot_result",
    "plot_scan",
    "plot_target",
    "plot_train",
    "write_plot",
]
