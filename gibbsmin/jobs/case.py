"""The case: what a case file describes, in SI units and library records."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from os import PathLike
from typing import TYPE_CHECKING, Any, Literal

from gibbsmin.errors import InputError
from gibbsmin.jobs.case_feed import placed, read_streams, resolve
from gibbsmin.jobs.case_text import read_tables
from gibbsmin.reactor.candidates import Selection
from gibbsmin.reactor.streams import Stream
from gibbsmin.thermo.library import Library, load_library

if TYPE_CHECKING:
    from gibbsmin.jobs.case_schema import SpeciesTable


@dataclass(frozen=True)
class StageCase:
    """One isothermal stage.

    Parameters
    ----------
    name
        As reports call it.
    temperature, pressure
        Of its outlet, K and Pa (absolute).
    selection
        Which records may appear in the outlet.
    boundary_temperature
        Where heat crosses into the stage, K; None means at the outlet's temperature.
    surroundings_temperature
        For lost work, K.
    """

    name: str
    temperature: float
    pressure: float
    selection: Selection
    boundary_temperature: float | None
    surroundings_temperature: float


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
        stage = StageCase(
            name="outlet",
            temperature=table.outlet.temperature,
            pressure=table.outlet.pressure,
            selection=_read_selection(table.species, feeds, library),
            boundary_temperature=table.outlet.boundary_temperature,
            surroundings_temperature=table.outlet.surroundings_temperature,
        )
    except InputError as error:
        raise error.at(file=file) from None
    return Case(table.title, file, table.site_pressure, feeds, (stage,))


def _read_selection(table: SpeciesTable, feeds: tuple[Stream, ...], library: Library) -> Selection:
    consider: Literal["all"] | tuple[str, ...] = "all"
    if table.consider != "all":
        consider = _record_names("species.consider", table.consider, library)
    leave_out = _record_names("species.leave_out", table.leave_out, library)
    inert = _record_names("species.inert", table.inert, library)
    _refuse_both("species.leave_out", leave_out, "species.inert", inert)
    if consider != "all":
        _refuse_both("species.leave_out", leave_out, "species.consider", consider)
    fed = dict.fromkeys(name for feed in feeds for name in feed.amounts)
    for name in inert:
        if name not in fed:
            raise InputError(
                f'found "{name}", which no stream brings',
                f"accepted is a record of the feed: {', '.join(fed)}",
                key="species.inert",
            )
    return Selection(consider=consider, leave_out=leave_out, inert=inert)


def _record_names(key: str, texts: tuple[str, ...], library: Library) -> tuple[str, ...]:
    written: dict[str, str] = {}
    with placed(key):
        for text in texts:
            name = resolve(text, library).name
            if name in written:
                raise InputError(
                    f'found {name} twice, as "{written[name]}" and as "{text}"',
                    "accepted is each record once",
                )
            written[name] = text
    return tuple(written)


def _refuse_both(key: str, names: tuple[str, ...], other_key: str, others: tuple[str, ...]) -> None:
    for name in names:
        if name in others:
            raise InputError(
                f'found "{name}", which {other_key} lists too',
                "accepted is a record in one of the two",
                key=key,
            )
