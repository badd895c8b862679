"""Plain building blocks of what is shown on a terminal: headings, tables, sentences."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from rich.console import RenderableType
from rich.padding import Padding
from rich.table import Table
from rich.text import Text

# For figures: a minus sign that lines up with digits and reads as one.
MINUS = "\N{MINUS SIGN}"


def heading(text: str) -> Text:
    """A line that begins a part."""
    return Text(text, style="bold")


def table(
    headers: Sequence[str], rows: Iterable[Sequence[str]], *, words: Sequence[str] = ()
) -> RenderableType:
    """Columns of figures under their headings, indented.

    Parameters
    ----------
    headers
        Headings; each names its column's unit.
    rows
        Cells as text; square brackets have no special meaning.
    words
        Headings of the columns that hold words and stand to the left.
    """
    grid = Table(box=None, pad_edge=False, padding=(0, 3, 0, 0), header_style="")
    for header in headers:
        left = header in words
        grid.add_column(Text(header), justify="left" if left else "right", overflow="fold")
    for row in rows:
        grid.add_row(*(Text(cell) for cell in row))
    return Padding(grid, (0, 0, 1, 2), expand=False)


def pairs(rows: Iterable[tuple[str, str]]) -> RenderableType:
    """What and its value, line by line, indented."""
    grid = Table(box=None, pad_edge=False, padding=(0, 3, 0, 0), show_header=False)
    grid.add_column(overflow="fold")
    grid.add_column(overflow="fold")
    for what, value in rows:
        grid.add_row(Text(what), Text(value))
    return Padding(grid, (0, 0, 1, 2), expand=False)


def sentences(title: str, lines: Iterable[str]) -> list[RenderableType]:
    """A heading and indented lines, or nothing where there is no line."""
    shown = [Padding(Text(line), (0, 0, 0, 2), expand=False) for line in lines]
    return [heading(title), *shown, Text("")] if shown else []


def number(value: float, decimals: int) -> str:
    """A figure with so many decimals, a dash where it is unknown, and no negative zero."""
    if value != value:
        return "–"
    return f"{round(value, decimals) + 0.0:.{decimals}f}".replace("-", MINUS)


def uncertainty(value: float) -> str:
    """Two digits of a standard uncertainty, a dash where it is unknown."""
    return f"{value:.2g}" if value == value else "–"


def short(value: float) -> str:
    """A temperature or coefficient with the digits it has and no more."""
    return f"{value:.9g}".replace("-", MINUS)
