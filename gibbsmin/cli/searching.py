"""gibbsmin onset, for phases and targets."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

import typer

from gibbsmin.cli.app import AsJson, Plot, app, require_plot_ending_of
from gibbsmin.cli.output import NOT_CERTIFIED, print_json, print_view
from gibbsmin.errors import InputError


@app.command(short_help="Find where a phase first forms, or where a target is met.")
def onset(
    case: Annotated[
        str, typer.Argument(metavar="CASE", help="A case file with [onset] or [target].")
    ],
    as_json: AsJson = False,
    out: Annotated[
        str, typer.Option(metavar="FILE", help="Write a .csv, .xlsx, .parquet or .json file.")
    ] = "",
    uncertainty: Annotated[
        bool, typer.Option("--uncertainty", help="Tell how sure each onset is.")
    ] = False,
    plot: Plot = "",
) -> None:
    """Find where along an axis a phase first forms or vanishes, or a result meets a target.

    A second axis gives the boundary curve.  Exit code 1 means that an answer is not certified.
    """
    from gibbsmin.jobs.case import load_case
    from gibbsmin.jobs.conditions import conditions_of
    from gibbsmin.jobs.onset import onset as onset_of
    from gibbsmin.jobs.onset_uncertainty import onset_uncertainty
    from gibbsmin.jobs.scan_remarks import scan_remarks
    from gibbsmin.jobs.target import target as target_of
    from gibbsmin.present.search_document import onset_document, target_document
    from gibbsmin.present.search_files import require_search_ending, write_search
    from gibbsmin.present.search_view import onset_view, target_view

    if out:
        require_search_ending(Path(out))
    require_plot_ending_of(plot)
    loaded = load_case(case)
    if loaded.onset is None and loaded.target is not None:
        if uncertainty:
            raise InputError(
                "found --uncertainty beside a target", "accepted is it with an [onset] table"
            )
        answers = target_of(loaded)
        document, view = target_document(answers), target_view(answers, loaded.title)
        certified = bool(answers.certified.all())
        if plot:
            from gibbsmin.present.plots.map_plots import plot_target
            from gibbsmin.present.plots.style import write_plot

            figure = plot_target(answers, loaded.target.value, loaded.title)
            write_plot(figure, Path(plot))
    else:
        crossings = onset_of(loaded)
        sizes = onset_uncertainty(loaded, crossings) if uncertainty else None
        document = onset_document(crossings, sizes)
        view = onset_view(crossings, loaded.title, sizes)
        certified = bool(crossings.certified.all())
        if plot:
            from gibbsmin.present.plots.scan_plots import plot_onset
            from gibbsmin.present.plots.style import write_plot

            write_plot(plot_onset(loaded, crossings), Path(plot))
    notes = scan_remarks(loaded, conditions_of(loaded))
    if notes:
        document["notes"] = list(notes)
    if out:
        write_search(document, Path(out))
    if as_json:
        print_json(document)
    else:
        print_view(view)
        for note in notes:
            print_view(note)
    if not certified:
        raise typer.Exit(NOT_CERTIFIED)
