"""gibbsmin scan."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

import typer

from gibbsmin.cli.app import Plot, Stage, app, require_plot_ending_of
from gibbsmin.cli.output import BROKEN_OFF, NOT_CERTIFIED, print_view
from gibbsmin.errors import InputError


@app.command(short_help="Give the outlet over the grid of a case's axes.")
def scan(
    case: Annotated[str, typer.Argument(metavar="CASE", help="A case file with [[axis]] tables.")],
    out: Annotated[
        str, typer.Option(metavar="FILE", help="A .csv, .parquet or .xlsx file to write.")
    ],
    table: Annotated[
        str,
        typer.Option(metavar="FILE", help="A table of conditions, a row a state, for the axes."),
    ] = "",
    uncertainty: Annotated[
        bool, typer.Option("--uncertainty", help="Give error bars beside the values.")
    ] = False,
    cluster: Annotated[
        str,
        typer.Option(metavar="ADDRESS", help='A dask cluster to solve on, or "local" workers.'),
    ] = "",
    plot: Plot = "",
    show: Annotated[
        str, typer.Option(metavar="COLUMN", help='What to plot: "wet", "dry" or a column.')
    ] = "",
    stage: Stage = "",
    log: Annotated[bool, typer.Option("--log", help="Plot on a logarithmic ordinate.")] = False,
) -> None:
    """Give the outlet over the grid of a case's axes: one row a state, each with its status.

    A scan that was broken off goes on where it stopped when it is started again.
    """
    from contextlib import nullcontext
    from importlib.metadata import version

    from gibbsmin.jobs.case import load_case
    from gibbsmin.jobs.conditions import Conditions, conditions_from, conditions_of
    from gibbsmin.jobs.scan_remarks import scan_remarks
    from gibbsmin.present.cluster import connected
    from gibbsmin.present.conditions_file import read_conditions
    from gibbsmin.present.scan_files import require_scan_ending
    from gibbsmin.present.scan_parts import fingerprint_of
    from gibbsmin.present.scan_run import run_scan

    if table and plot:
        raise InputError(
            "found a plot of a table of conditions",
            "accepted is a plot of a grid of one or two axes",
            key="plot",
        )
    path = Path(out)
    require_scan_ending(path)
    require_plot_ending_of(plot, show=show, stage=stage, log=log)
    loaded = load_case(case)
    parts: list[str | bytes] = [version("gibbsmin"), Path(case).read_bytes(), str(uncertainty)]
    # A library file may change while the case that names it does not.
    parts.append(repr(loaded.own_records))
    conditions: Conditions
    if table:
        conditions = conditions_from(read_conditions(Path(table)), loaded, table)
        parts.append(Path(table).read_bytes())
    else:
        conditions = conditions_of(loaded)
    if plot:
        from gibbsmin.present.plots.scan_plots import require_plottable

        require_plottable(loaded, conditions, show, stage=stage, logarithmic=log)
    fingerprint = fingerprint_of(*parts)
    try:
        with connected(cluster) if cluster else nullcontext() as client:
            tally = run_scan(
                loaded, conditions, path, fingerprint, uncertainty=uncertainty, client=client
            )
    except KeyboardInterrupt:
        typer.echo("Broken off; the same command goes on where this stopped.", err=True)
        raise typer.Exit(BROKEN_OFF) from None
    print_view(tally.summary(path))
    for note in scan_remarks(loaded, conditions):
        print_view(note)
    if plot:
        from gibbsmin.jobs.scan import Scan
        from gibbsmin.present.plots.scan_plots import boundary_of, plot_scan
        from gibbsmin.present.plots.style import write_plot

        found = Scan(loaded.title, conditions.axes, is_grid=True, table=read_conditions(path))
        figure = plot_scan(found, show, boundary_of(loaded), stage=stage, logarithmic=log)
        write_plot(figure, Path(plot))
    if tally.uncertified:
        raise typer.Exit(NOT_CERTIFIED)
