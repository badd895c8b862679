"""What is printed, and the exit codes."""

from __future__ import annotations

import codecs
import io
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


# A terminal narrower than this breaks lines by itself, which leaves figures legible.
_NARROWEST: Final = 80

_PLAIN: Final = {
    "−": "-", "–": "-", "°": "deg", "Δ": "d", "λ": "lambda", "σ": "sigma", "φ": "phi", "ν": "nu",
    "ξ": "xi", "±": "+-", "×": "x", "·": "*", "≥": ">=", "≤": "<=", "²": "2", "³": "3", "½": "1/2",
    "→": "->", "…": "...", "≈": "~",
}  # fmt: skip
"""What stands for a character that the output's encoding lacks; a lost minus would be a lie."""


def _in_plain_letters(error: UnicodeError) -> tuple[str, int]:
    if not isinstance(error, UnicodeEncodeError):
        raise error
    lacking = error.object[error.start : error.end]
    return "".join(_PLAIN.get(letter, "?") for letter in lacking), error.end


def print_in_plain_letters() -> None:
    """Have standard output and error tell in plain letters what their encoding lacks."""
    codecs.register_error("plain letters", _in_plain_letters)
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, io.TextIOWrapper):
            stream.reconfigure(errors="plain letters")


def print_view(renderable: RenderableType) -> None:
    """A view, as wide as the terminal; plain where it goes elsewhere."""
    from rich.console import Console

    if sys.stdout.isatty():
        width = max(Console().width, _NARROWEST)
        Console(width=width, highlight=False, markup=False).print(renderable)
        return
    console = Console(width=_PIPED_WIDTH, highlight=False, markup=False)
    with console.capture() as capture:
        console.print(renderable)
    typer.echo("\n".join(line.rstrip() for line in capture.get().splitlines()))


def print_json(document: dict[str, Any]) -> None:
    """A document for programs to read."""
    typer.echo(json.dumps(document, ensure_ascii=False, indent=2, allow_nan=False))
