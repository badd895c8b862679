"""The report of checked samples: one page of HTML that needs no network, made to be printed."""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass
from os import PathLike
from pathlib import Path

import numpy as np

from gibbsmin.errors import OutputError
from gibbsmin.jobs.history import Series, history_of, trend_sentences
from gibbsmin.present.check_table import check_table
from gibbsmin.present.check_view import figures_of
from gibbsmin.present.files import write_text
from gibbsmin.present.quantities import fraction, significant
from gibbsmin.results import CAUTIONS
from gibbsmin.sample.findings import Checks, Measurement, SampleCheck, Stream

_IN_FULL = 5
"""Samples of a history that are shown in full: the last ones that need a look."""


@dataclass(frozen=True)
class _Plot:
    """A figure as SVG text, and what it shows."""

    svg: str
    caption: str


def report_page(checks: Checks) -> str:
    """The page's text; all that comes from files is escaped."""
    from jinja2 import Environment, PackageLoader, StrictUndefined

    environment = Environment(
        loader=PackageLoader("gibbsmin.present", "templates"),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
    )
    series = history_of(checks) if len(checks.samples) > 1 else ()
    return environment.get_template("check.html").render(
        checks=checks,
        shown=_shown(checks),
        counts=Counter(
            sample.judgement.verdict.value.removeprefix("sample ") for sample in checks.samples
        ),
        figures_of=figures_of,
        history=_history(checks),
        trends=trend_sentences(checks, series),
        plots=_plots(checks, series),
        measured=_measured,
        fraction=fraction,
        significant=significant,
        cautions=CAUTIONS,
    )


def write_report(checks: Checks, path: str | PathLike[str]) -> None:
    """Write the page whole.

    Raises
    ------
    OutputError
        for another ending than .html or .htm, or a file that cannot be written.
    """
    path = Path(path)
    require_report_ending(path)
    write_text(path, report_page(checks))


def require_report_ending(path: Path) -> None:
    """Refuse a file that is no page before any work is done."""
    if path.suffix.lower() not in (".html", ".htm"):
        raise OutputError(
            f'found the ending "{path.suffix}"' if path.suffix else "found no ending",
            "accepted is a file that ends in .html",
            file=str(path),
        )


def _shown(checks: Checks) -> tuple[SampleCheck, ...]:
    """The samples that are told in full: the only one, or the last that are off."""
    if len(checks.samples) == 1:
        return checks.samples
    off = [s for s in checks.samples if s.judgement.verdict.value != "at equilibrium within errors"]
    return tuple(off[-_IN_FULL:])


def _history(checks: Checks) -> tuple[list[str], list[list[str]]]:
    """The short table of many samples, as text."""
    if len(checks.samples) < 2:
        return [], []
    table = check_table(checks)
    columns = [str(c) for c in table.columns]
    kept = [c for c in columns if c in ("sample", "label", "row", "verdict", "headline")]
    rows = [[str(cell) for cell in row] for row in table[kept].to_numpy().tolist()]
    return kept, rows


def _plots(checks: Checks, series: tuple[Series, ...]) -> list[_Plot]:
    from gibbsmin.present.plots.history_plots import plot_series
    from gibbsmin.present.plots.style import svg_of

    labels = [sample.label for sample in checks.samples]
    plots = []
    for each in series:
        figure = plot_series(each, labels, checks.title)
        svg = svg_of(figure)
        bars = ", bars at 95 %" if np.isfinite(each.uncertainties).any() else ""
        plots.append(_Plot(svg[svg.index("<svg") :], f"{each.name}{bars}"))
    return plots


def _measured(measurement: Measurement, value: float) -> str:
    if measurement.stream is Stream.FEED:
        return f"{significant(value, 4)} ×"
    return significant(value, 4) if measurement.basis == "ratio" else fraction(value)
