"""gibbsmin check."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated

import typer

from gibbsmin.cli.app import AsJson, app
from gibbsmin.cli.output import SOME_NOT_USED, print_json, print_view


@app.command(short_help="Check plant samples against equilibrium.")
def check(
    case: Annotated[str, typer.Argument(metavar="CASE", help="A case file with [sample].")],
    samples: Annotated[
        str, typer.Option(metavar="FILE", help="A .csv, .xlsx or .parquet file, a row a sample.")
    ] = "",
    as_json: AsJson = False,
    out: Annotated[
        str,
        typer.Option(metavar="FILE", help="Write a .csv, .xlsx, .parquet or .json file as well."),
    ] = "",
    report: Annotated[
        str, typer.Option(metavar="FILE", help="Write a page to print or send, .html.")
    ] = "",
) -> None:
    """Say whether plant samples are believable and how far they are from equilibrium.

    Exit code 1 means that a row of the samples could not be used.
    """
    from gibbsmin.jobs.case import load_case
    from gibbsmin.jobs.check import check as check_samples
    from gibbsmin.present.check_document import check_document
    from gibbsmin.present.check_files import require_check_ending, write_checks
    from gibbsmin.present.check_view import check_view
    from gibbsmin.present.conditions_file import read_conditions
    from gibbsmin.present.report import require_report_ending, write_report

    if out:
        require_check_ending(Path(out))
    if report:
        require_report_ending(Path(report))
    loaded = load_case(case)
    table = read_conditions(Path(samples)) if samples else None
    checks = check_samples(loaded, table, samples)
    if out:
        write_checks(checks, Path(out))
    if report:
        write_report(checks, Path(report))
    if as_json:
        print_json(check_document(checks))
    else:
        print_view(check_view(checks))
    if checks.faults:
        raise typer.Exit(SOME_NOT_USED)
