"""The application: how errors end, and the options that several commands share."""

from __future__ import annotations

from errno import EPIPE
from pathlib import Path
from typing import Annotated, Any

import typer
from typer.core import TyperGroup

from gibbsmin.cli.output import INPUT_ERROR
from gibbsmin.errors import GibbsminError, InputError


class _Commands(TyperGroup):
    """Turns the project's own errors into one sentence and an exit code."""

    def invoke(self, ctx: Any) -> Any:  # the context's class differs between versions of typer
        try:
            return super().invoke(ctx)
        except GibbsminError as error:
            typer.echo(str(error), err=True)
            raise typer.Exit(INPUT_ERROR) from None
        except OSError as error:
            # Where the reader of a pipe has gone, typer ends in silence.
            if error.errno == EPIPE:
                raise
            reason = (error.strerror or str(error)).lower()
            typer.echo(f"The output cannot be written: {reason}.", err=True)
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


def require_plot_ending_of(plot: str, **choices: object) -> None:
    """Refuse a plot that could not be written, and choices for a plot that is not asked for."""
    if plot:
        from gibbsmin.present.plots.style import require_plot_ending

        require_plot_ending(Path(plot))
        return
    for name in (name for name, choice in choices.items() if choice):
        raise InputError(f"found --{name} without a plot", "accepted is --plot FILE beside it")
