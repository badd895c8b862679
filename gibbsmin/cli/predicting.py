"""gibbsmin predict."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

import typer

from gibbsmin.cli.app import AsJson, Plot, Stage, app, require_plot_ending_of
from gibbsmin.cli.output import NOT_CERTIFIED, print_json, print_view
from gibbsmin.errors import InputError


@app.command(short_help="Give the outlet of a case at equilibrium.")
def predict(
    case: Annotated[str, typer.Argument(metavar="CASE", help="A case file in TOML.")],
    as_json: AsJson = False,
    out: Annotated[
        str, typer.Option(metavar="FILE", help="Write to a .csv, .xlsx or .json file as well.")
    ] = "",
    uncertainty: Annotated[
        bool, typer.Option("--uncertainty", help="Give error bars and what makes them.")
    ] = False,
    draws: Annotated[
        int | None,
        typer.Option(
            "--monte-carlo", metavar="N", help="Draw the unsure numbers N times, and solve each."
        ),
    ] = None,
    seed: Annotated[
        int | None, typer.Option(metavar="K", help="Where the random draws start; else 1.")
    ] = None,
    plot: Plot = "",
    show: Annotated[
        str, typer.Option(metavar="WORD", help='What to plot: "beds", "cooling" or "lost work".')
    ] = "",
    stage: Stage = "",
) -> None:
    """Give the outlet of a case at equilibrium, with its certificate and audit.

    Exit code 1 means that the state could not be certified.
    """
    from gibbsmin.jobs.case import load_case
    from gibbsmin.jobs.monte_carlo import monte_carlo
    from gibbsmin.jobs.predict import predict as predict_case
    from gibbsmin.jobs.uncertainty import uncertainty as error_bars_of
    from gibbsmin.present.monte_carlo_view import monte_carlo_view
    from gibbsmin.present.outlet_document import outlet_document
    from gibbsmin.present.outlet_files import require_ending, write_outlet
    from gibbsmin.present.outlet_view import outlet_view
    from gibbsmin.present.uncertainty_view import uncertainty_view

    if out:
        require_ending(Path(out))
    if seed is not None and draws is None:
        raise InputError("found --seed without draws", "accepted is --monte-carlo N beside it")
    require_plot_ending_of(plot, show=show, stage=stage)
    if plot:
        from gibbsmin.present.plots.train_plots import require_kind

        require_kind(show)
    loaded = load_case(case)
    outlet = predict_case(loaded)
    spread = None
    if draws is not None:
        spread = monte_carlo(loaded, draws) if seed is None else monte_carlo(loaded, draws, seed)
    bars = () if spread is None and not uncertainty else error_bars_of(loaded)
    if out:
        write_outlet(outlet, Path(out), bars, spread)
    if as_json:
        print_json(outlet_document(outlet, bars, spread))
    else:
        print_view(outlet_view(outlet))
        if uncertainty:
            print_view(uncertainty_view(outlet, bars))
        if spread is not None:
            print_view(monte_carlo_view(outlet, bars, spread))
    if not outlet.certified:
        if plot:
            typer.echo("No plot was drawn: the outlet is not certified.", err=True)
        raise typer.Exit(NOT_CERTIFIED)
    if plot:
        from gibbsmin.present.plots.style import write_plot
        from gibbsmin.present.plots.train_plots import plot_train

        write_plot(plot_train(loaded, show, stage), Path(plot))
