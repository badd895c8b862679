"""What is printed, and the exit codes."""

from __future__ import annotations

import json
import sys
from typing import TYPE_CHECKING, Any, Final

import typer

if TYPE_CHECKING:
    from rich.console import RenderableType

NOT_CERTIFIED: Final = 1
INPUT_ERROR: Final = 2
BROKEN_OFF: Final = 130
SOME_NOT_USED: Final = 1

# Wide enough that a table sent to a file or another program is not broken.
_PIPED_WIDTH: Final = 200


def print_view(renderable: RenderableType) -> None:
    """A view, as wide as the terminal; plain where it goes elsewhere."""
    from rich.console import Console

    if sys.stdout.isatty():
        Console(highlight=False, markup=False).print(renderable)
        return
    console = Console(width=_PIPED_WIDTH, highlight=False, markup=False)
    with console.capture() as capture:
        console.print(renderable)
    typer.echo("\n".join(line.rstrip() for line in capture.get().splitlines()))


def print_json(document: dict[str, Any]) -> None:
    """A document for programs to read."""
    typer.echo(json.dumps(document, ensure_ascii=False, indent=2, allow_nan=False))
