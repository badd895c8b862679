"""The command line: arguments, exit codes, and everything that is printed.

Bad input ends with one sentence on standard error and exit code 2.  Commands import what they
need when they run, so that help and errors come at once.
"""

from __future__ import annotations

import json
import sys
from pathlib import Path
from typing import TYPE_CHECKING, Annotated, Any, Final

import typer
from typer.core import TyperGroup

from gibbsmin.errors import GibbsminError, InputError, UnknownSpeciesError

if TYPE_CHECKING:
    from rich.console import RenderableType

    from gibbsmin.arrays import FloatArray
    from gibbsmin.thermo.library import Library
    from gibbsmin.thermo.species import Species

NOT_CERTIFIED: Final = 1
INPUT_ERROR: Final = 2
BROKEN_OFF: Final = 130
SOME_NOT_USED: Final = 1

# Wide enough that a table sent to a file or another program is not broken.
_PIPED_WIDTH: Final = 200


class _Commands(TyperGroup):
    """Turns the project's own errors into one sentence and an exit code."""

    def invoke(self, ctx: Any) -> Any:  # the context's class differs between versions of typer
        try:
            return super().invoke(ctx)
        except GibbsminError as error:
            typer.echo(str(error), err=True)
            raise typer.Exit(INPUT_ERROR) from None


app = typer.Typer(
    cls=_Commands,
    add_completion=False,
    no_args_is_help=True,
    rich_markup_mode=None,
    pretty_exceptions_enable=False,
    help="Chemical equilibrium for process and plant engineers.",
)

Temperatures = Annotated[
    list[str] | None,
    typer.Option(
        "--temperature",
        "-t",
        metavar="TEXT",
        help='"850 degC", "600, 700, 800 K" or "300 K to 1500 K step 100 K"; may be repeated.',
    ),
]
Plot = Annotated[
    str, typer.Option("--plot", metavar="FILE", help="Draw a .png or .svg file as well.")
]
Stage = Annotated[
    str, typer.Option("--stage", metavar="NAME", help="Whose outlet to plot; else the last stage.")
]
AsJson = Annotated[bool, typer.Option("--json", help="Print JSON for programs to read.")]


@app.callback()
def commands() -> None:
    """Chemical equilibrium for process and plant engineers."""


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
    from gibbsmin.jobs.predict import predict as predict_case
    from gibbsmin.jobs.uncertainty import uncertainty as error_bars_of
    from gibbsmin.present.outlet_document import outlet_document
    from gibbsmin.present.outlet_files import require_ending, write_outlet
    from gibbsmin.present.outlet_view import outlet_view
    from gibbsmin.present.uncertainty_view import uncertainty_view

    if out:
        require_ending(Path(out))
    _require_plot_ending(plot)
    if plot:
        from gibbsmin.present.plots.train_plots import require_kind

        require_kind(show)
    loaded = load_case(case)
    outlet = predict_case(loaded)
    bars = error_bars_of(loaded) if uncertainty else ()
    if out:
        write_outlet(outlet, Path(out), bars)
    if as_json:
        _print_json(outlet_document(outlet, bars))
    else:
        _print(outlet_view(outlet))
        if bars:
            _print(uncertainty_view(outlet, bars))
    if not outlet.certified:
        if plot:
            typer.echo("No plot was drawn: the outlet is not certified.", err=True)
        raise typer.Exit(NOT_CERTIFIED)
    if plot:
        from gibbsmin.present.plots.style import write_plot
        from gibbsmin.present.plots.train_plots import plot_train

        write_plot(plot_train(loaded, show, stage), Path(plot))


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
    from gibbsmin.jobs.remarks import own_records_notes
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
    _require_plot_ending(plot)
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
    _print(tally.summary(path))
    for note in own_records_notes(loaded.own_records):
        _print(note)
    if plot:
        from gibbsmin.jobs.scan import Scan
        from gibbsmin.present.plots.scan_plots import boundary_of, plot_scan
        from gibbsmin.present.plots.style import write_plot

        found = Scan(loaded.title, conditions.axes, is_grid=True, table=read_conditions(path))
        figure = plot_scan(found, show, boundary_of(loaded), stage=stage, logarithmic=log)
        write_plot(figure, Path(plot))
    if tally.uncertified:
        raise typer.Exit(NOT_CERTIFIED)


@app.command(short_help="Find where a phase first forms, or where a target is met.")
def onset(
    case: Annotated[
        str, typer.Argument(metavar="CASE", help="A case file with [onset] or [target].")
    ],
    as_json: AsJson = False,
    out: Annotated[
        str, typer.Option(metavar="FILE", help="Write a .csv, .xlsx or .json file as well.")
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
    from gibbsmin.jobs.onset import onset as onset_of
    from gibbsmin.jobs.onset_uncertainty import onset_uncertainty
    from gibbsmin.jobs.remarks import own_records_notes
    from gibbsmin.jobs.target import target as target_of
    from gibbsmin.present.outlet_files import require_ending
    from gibbsmin.present.search_document import onset_document, target_document
    from gibbsmin.present.search_files import write_search
    from gibbsmin.present.search_view import onset_view, target_view

    if out:
        require_ending(Path(out))
    _require_plot_ending(plot)
    loaded = load_case(case)
    if loaded.onset is None and loaded.target is not None:
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
    notes = own_records_notes(loaded.own_records)
    if notes:
        document["notes"] = list(notes)
    if out:
        write_search(document, Path(out))
    if as_json:
        _print_json(document)
    else:
        _print(view)
        for note in notes:
            _print(note)
    if not certified:
        raise typer.Exit(NOT_CERTIFIED)


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
        _print_json(check_document(checks))
    else:
        _print(check_view(checks))
    if checks.faults:
        raise typer.Exit(SOME_NOT_USED)


@app.command(short_help="Find species records, and show one in full.")
def species(
    text: Annotated[
        str, typer.Argument(metavar="TEXT", help="A record, formula, name or CAS number.")
    ] = "",
    name: Annotated[str, typer.Option(help="A common name or a part of one.")] = "",
    cas: Annotated[str, typer.Option("--cas", help="A CAS registry number.")] = "",
    elements: Annotated[
        str, typer.Option(help='Records made of these elements alone, such as "C,H,O".')
    ] = "",
    temperature: Temperatures = None,
    file: Annotated[
        str, typer.Option("--file", metavar="FILE", help="A library file of your own to check.")
    ] = "",
    as_json: AsJson = False,
) -> None:
    """Find species records, and show one in full: values, uncertainties, range, sources.

    With --file show and check the records of a library file.
    """
    from gibbsmin.present.species_view import (
        species_document,
        species_list_view,
        species_view,
        usual_temperatures,
    )
    from gibbsmin.thermo.library import load_library
    from gibbsmin.thermo.temperatures import read_temperatures

    if file:
        _show_own(Path(file), read_temperatures(temperature or ()), as_json)
        return
    if not (text or name or cas or elements):
        raise InputError(
            "found nothing to look for",
            'accepted is a formula, a name or a CAS number, or --elements "C,H,O"',
        )
    library = load_library()
    temperatures = read_temperatures(temperature or ())
    records = library.find(
        text, name=name, cas=cas, elements=elements.split(",") if elements else ()
    )
    if not records:
        raise _nothing_found(library, text, name, cas)
    if as_json:
        chosen = [
            temperatures if temperature else usual_temperatures(r.T_low, r.T_high) for r in records
        ]
        documents = [
            species_document(record, T, library) for record, T in zip(records, chosen, strict=True)
        ]
        _print_json({"species": documents})
    elif len(records) > 1:
        _print(species_list_view(records))
    else:
        (record,) = records
        chosen_T = temperatures if temperature else usual_temperatures(record.T_low, record.T_high)
        _print(species_view(record, chosen_T, library))


@app.command(short_help="Show a reaction's enthalpy, entropy and constant.")
def reaction(
    text: Annotated[
        str, typer.Argument(metavar="REACTION", help='Such as "CH4 + 2 H2O = CO2 + 4 H2".')
    ],
    temperature: Temperatures = None,
    file: Annotated[
        str, typer.Option("--file", metavar="FILE", help="A library file of your own to use.")
    ] = "",
    as_json: AsJson = False,
) -> None:
    """Show ΔrH, ΔrS, ΔrG and log10 K of a reaction, and its path by way of 298.15 K.

    H2O(g) means that form at all temperatures, H2O whichever form is stable.
    """
    from gibbsmin.jobs.remarks import own_records_notes
    from gibbsmin.present.reaction_view import reaction_document, reaction_view
    from gibbsmin.present.species_view import usual_temperatures
    from gibbsmin.thermo.library import load_library
    from gibbsmin.thermo.reaction import Reaction
    from gibbsmin.thermo.reaction_path import study_reaction
    from gibbsmin.thermo.temperatures import read_temperatures

    temperatures = (
        read_temperatures(temperature) if temperature else usual_temperatures(298.15, 1500.0)
    )
    library = load_library()
    own: tuple[Species, ...] = ()
    if file:
        from gibbsmin.jobs.own_library import read_library_file

        own = read_library_file(Path(file), library).records
    chosen = Reaction.read(text, library.overruled(own))
    study = study_reaction(chosen, temperatures)
    taking_part = [form for _, substance in chosen.terms for form in substance.forms]
    notes = own_records_notes(record for record in own if record in taking_part)
    if as_json:
        _print_json({**reaction_document(study), **({"notes": list(notes)} if notes else {})})
    else:
        _print(reaction_view(study))
        for note in notes:
            _print(note)


def _show_own(path: Path, temperatures: FloatArray, as_json: bool) -> None:
    from gibbsmin.jobs.own_library import read_library_file
    from gibbsmin.present.own_records_view import own_records_document, own_records_view
    from gibbsmin.thermo.library import load_library

    library = load_library()
    own = read_library_file(path, library)
    if as_json:
        _print_json(own_records_document(own, temperatures, library))
    else:
        _print(own_records_view(own, temperatures, library))


def _nothing_found(library: Library, text: str, name: str, cas: str) -> UnknownSpeciesError:
    """Blames the first condition that no record meets by itself, or all of them together."""
    if text and not library.find(text):
        return library.unknown(text)
    if name and not library.find(name=name):
        return library.unknown(name)
    if cas and not library.find(cas=cas):
        return library.unknown(cas)
    return UnknownSpeciesError(
        "found no record that meets all the conditions", "accepted are fewer conditions"
    )


def _require_plot_ending(plot: str) -> None:
    """Refuse a plot that could not be written before any work is done."""
    if plot:
        from gibbsmin.present.plots.style import require_plot_ending

        require_plot_ending(Path(plot))


def _print(renderable: RenderableType) -> None:
    from rich.console import Console

    if sys.stdout.isatty():
        Console(highlight=False, markup=False).print(renderable)
        return
    console = Console(width=_PIPED_WIDTH, highlight=False, markup=False)
    with console.capture() as capture:
        console.print(renderable)
    typer.echo("\n".join(line.rstrip() for line in capture.get().splitlines()))


def _print_json(document: dict[str, Any]) -> None:
    typer.echo(json.dumps(document, ensure_ascii=False, indent=2, allow_nan=False))


def main() -> None:
    """Entry point of the console command."""
    app()
