"""The case: what a case file describes, in SI units and library records."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from functools import lru_cache
from os import PathLike
from pathlib import Path
from typing import Any

from gibbsmin.errors import InputError
from gibbsmin.jobs.axis import Axis, SoughtPhase, SoughtValue
from gibbsmin.jobs.case_axis import Holders, read_axes
from gibbsmin.jobs.case_feed import read_streams
from gibbsmin.jobs.case_sample import read_rules, read_sample
from gibbsmin.jobs.case_stage import StageCase, read_stages
from gibbsmin.jobs.case_text import read_tables
from gibbsmin.jobs.case_uncertainty import read_correlations, read_uncertainties
from gibbsmin.jobs.sample import PlantSample, SampleRules
from gibbsmin.jobs.stated import Correlation, StatedUncertainty
from gibbsmin.reactor.streams import Stream
from gibbsmin.thermo.fuel_correlations import FUEL_SOURCES
from gibbsmin.thermo.library import Library, load_library
from gibbsmin.thermo.species import Species
from gibbsmin.thermo.tables import Source


@dataclass(frozen=True)
class Case:
    """Streams and the stages they enter.

    ``file`` is the case file's path, empty where the case came as a mapping; ``site_pressure``
    in Pa is what gauge pressures stand on.  The streams are all flows or all quantities.
    ``sample_rules`` tell how plant samples are taken, of which ``sample`` may be one.
    ``own_records`` are those that the case itself defines, with their ``own_sources``; they extend
    the installed library.
    """

    title: str
    file: str
    site_pressure: float
    feeds: tuple[Stream, ...]
    stages: tuple[StageCase, ...]
    axes: tuple[Axis, ...] = ()
    uncertainties: tuple[StatedUncertainty, ...] = ()
    correlations: tuple[Correlation, ...] = ()
    onset: SoughtPhase | None = None
    target: SoughtValue | None = None
    own_records: tuple[Species, ...] = ()
    own_sources: tuple[Source, ...] = ()
    sample_rules: SampleRules = field(default_factory=SampleRules)
    sample: PlantSample | None = None

    @property
    def library(self) -> Library:
        """The installed library and the case's own records."""
        return library_with(self.own_records, self.own_sources)


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

    try:
        table = validate(tables)
        records, sources = _of_files(table.species.library, file)
        feeds, fuels = read_streams(table.feed, library_with(records, sources))
        own_records = (*records, *fuels)
        own_sources = (*sources, *FUEL_SOURCES) if fuels else sources
        library = library_with(own_records, own_sources)
        stages = read_stages(table, feeds, library)
        axes = read_axes(table.axis, Holders(feeds, stages, table.site_pressure, library))
        uncertainties = read_uncertainties(table.uncertainty, feeds, stages, library)
        correlations = read_correlations(table.correlation, feeds, stages, library)
        rules, sample = SampleRules(), None
        if table.sample is not None:
            rules = read_rules(table.sample, feeds, stages, library)
            sample = read_sample(table.sample, rules, feeds, library)
    except InputError as error:
        raise error.at(file=file) from None
    return Case(
        table.title,
        file,
        table.site_pressure,
        feeds,
        stages,
        axes,
        onset=SoughtPhase(table.onset.phase, table.onset.stage) if table.onset else None,
        target=(
            SoughtValue(table.target.result, table.target.value, table.target.stage)
            if table.target
            else None
        ),
        uncertainties=uncertainties,
        correlations=correlations,
        own_records=own_records,
        own_sources=own_sources,
        sample_rules=rules,
        sample=sample,
    )


def _of_files(
    names: Sequence[str], case_file: str
) -> tuple[tuple[Species, ...], tuple[Source, ...]]:
    """Records and sources of the case's library files, which stand beside it.

    A later file overrules an earlier one and may rest on it.
    """
    if not names:
        return (), ()
    from gibbsmin.jobs.own_library import read_library_file

    records: dict[str, Species] = {}
    sources: list[Source] = []
    for name in names:
        known = library_with(tuple(records.values()), tuple(sources))
        found = read_library_file(Path(case_file).parent / name, known)
        records |= {record.name: record for record in found.records}
        sources += found.sources
    return tuple(records.values()), tuple(sources)


@lru_cache(maxsize=8)
def library_with(records: tuple[Species, ...], sources: tuple[Source, ...]) -> Library:
    """The installed library with a case's records, which go before those of the same name."""
    return load_library().overruled(records, sources) if records else load_library()
