"""Plots of a train: which one is natural, and which one a user asks for."""

from __future__ import annotations

from typing import TYPE_CHECKING

from gibbsmin.errors import InputError
from gibbsmin.jobs.case import Case
from gibbsmin.present.plots.converter_plot import beds_of, plot_beds
from gibbsmin.present.plots.cooling_plot import plot_cooling
from gibbsmin.present.plots.lost_work_plot import plot_lost_work

if TYPE_CHECKING:
    from matplotlib.figure import Figure

BEDS, COOLING, LOST_WORK = "beds", "cooling", "lost work"
KINDS = (BEDS, COOLING, LOST_WORK)


def plot_train(case: Case, show: str = "", stage: str = "") -> Figure:
    """A plot of a case's train.

    Parameters
    ----------
    show
        ``beds``: conversion against temperature through adiabatic beds; ``cooling``: temperature
        against heat removed from an outlet; ``lost work``: by stage.  Unless it is named, beds
        where there are several, else cooling.
    stage
        For cooling, the stage whose outlet cools; the last, unless it is named.

    Raises
    ------
    InputError
        for another plot, a stage that is not there, and a case that the plot does not suit.
    """
    require_kind(show)
    kind = show or (BEDS if len(beds_of(case)) > 1 and not stage else COOLING)
    if stage and kind != COOLING:
        raise InputError(
            f'found a stage beside "{kind}"', "accepted is one for cooling alone", key="stage"
        )
    if kind == COOLING:
        return plot_cooling(case, stage)
    return plot_beds(case) if kind == BEDS else plot_lost_work(case)


def require_kind(show: str) -> None:
    """Refuse a plot that there is none of, before any work is done.

    Raises
    ------
    InputError
        for another word than those of ``KINDS``.
    """
    if show and show not in KINDS:
        raise InputError(
            f'found "{show}" to show', f"accepted is one of {', '.join(KINDS)}", key="show"
        )
