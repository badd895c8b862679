"""Counts a scan's states as its blocks pass by, with a bar on a terminal."""

from __future__ import annotations

from collections.abc import Iterator
from pathlib import Path
from typing import TYPE_CHECKING

from rich.console import Console, RenderableType
from rich.progress import (
    BarColumn,
    MofNCompleteColumn,
    Progress,
    ProgressColumn,
    Task,
    TextColumn,
    TimeRemainingColumn,
)
from rich.text import Text

if TYPE_CHECKING:
    import pandas as pd


class _Rate(ProgressColumn):
    """States a second."""

    def render(self, task: Task) -> Text:
        speed = task.finished_speed or task.speed
        return Text("" if speed is None else f"{speed:,.0f} states/s".replace(",", " "))


class Tally:
    """Passes blocks on and remembers how many states there were and how many failed."""

    def __init__(self, blocks: Iterator[pd.DataFrame], total: int) -> None:
        self._blocks = blocks
        self._total = total
        self.states = 0
        self.uncertified = 0

    def __iter__(self) -> Iterator[pd.DataFrame]:
        bar = Progress(
            TextColumn("states"),
            BarColumn(),
            MofNCompleteColumn(),
            _Rate(),
            TimeRemainingColumn(),
            console=Console(stderr=True),
            transient=True,
            disable=not Console(stderr=True).is_terminal,
        )
        with bar:
            task = bar.add_task("scan", total=self._total)
            for block in self._blocks:
                statuses = block.filter(regex="status$")
                self.states += len(block)
                self.uncertified += int((statuses != "certified").any(axis=1).sum())
                bar.advance(task, len(block))
                yield block

    def summary(self, path: Path) -> RenderableType:
        """What was written, in a sentence or two."""
        text = f"{self.states} states written to {path}"
        if self.uncertified:
            verbs = ("is", "carries its") if self.uncertified == 1 else ("are", "carry their")
            text += f"; {self.uncertified} of them {verbs[0]} not certified and {verbs[1]} reason"
        return Text(f"{text}.")
