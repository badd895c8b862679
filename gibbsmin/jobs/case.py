"""The case: what a case file describes, in SI units and library records."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from os import PathLike
from typing import Any

from gibbsmin.errors import InputError
from gibbsmin.jobs.axis import Axis
from gibbsmin.jobs.case_axis import read_axes
from gibbsmin.jobs.case_feed import read_streams
from gibbsmin.jobs.case_stage import StageCase, read_stages
from gibbsmin.jobs.case_text import read_tables
from gibbsmin.jobs.case_uncertainty import read_correlations, read_uncertainties
from gibbsmin.jobs.stated import Correlation, StatedUncertainty
from gibbsmin.reactor.streams import Stream
from gibbsmin.thermo.library import load_library


@dataclass(frozen=True)
class Case:
    """Streams and the stages they enter.

    ``file`` is the case file's path, empty where the case came as a mapping; ``site_pressure``
    in Pa is what gauge pressures stand on.  The streams are all flows or all quantities.
    """

    title: str
    file: str
    site_pressure: float
    feeds: tuple[Stream, ...]
    stages: tuple[StageCase, ...]
    axes: tuple[Axis, ...] = ()
    uncertainties: tuple[StatedUncertainty, ...] = ()
    correlations: tuple[Correlation, ...] = ()


def load_case(source: str | PathLike[str] | Mapping[str, Any]) -> Case:
    """Read a case from a TOML file, or from a mapping of the same shape.

    A feed species need not be among the records to consider: it then reacts away.

    Raises
    ------
    InputError
        for the first fault; the sentence names the file and the key, what was found and what is
        accepted.
    """
    file = "" if isinstance(source, Mapping) else str(source)
    tables = source if isinstance(source, Mapping) else read_tables(source)
    # pydantic takes a tenth of a second to load, which other commands need not wait for.
    from gibbsmin.jobs.case_schema import validate

    library = load_library()
    try:
        table = validate(tables)
        feeds = read_streams(table.feed, library)
        stages = read_stages(table, feeds, library)
        axes = read_axes(table.axis, feeds, table.site_pressure, library)
        uncertainties = read_uncertainties(table.uncertainty, feeds, stages, library)
        correlations = read_correlations(table.correlation, feeds, stages, library)
    except InputError as error:
        raise error.at(file=file) from None
    return Case(
        table.title,
        file,
        table.site_pressure,
        feeds,
        stages,
        axes,
        uncertainties=uncertainties,
        correlations=correlations,
    )
