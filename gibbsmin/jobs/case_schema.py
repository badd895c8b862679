"""The case file's tables and keys.

Quantities become SI floats as they are read; species keep the names that the user wrote, until
the library resolves them.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Annotated, Any, Self

from pydantic import BeforeValidator, model_validator

from gibbsmin.constants import STANDARD_ATMOSPHERE
from gibbsmin.errors import InputError
from gibbsmin.jobs.axis_schema import AxisTable
from gibbsmin.jobs.feed_schema import FeedTable
from gibbsmin.jobs.sample_schema import SampleTable
from gibbsmin.jobs.search_schema import OnsetTable, TargetTable
from gibbsmin.jobs.stage_schema import NOTHING, OutletTable, SpeciesTable, StageTable
from gibbsmin.jobs.table_schema import MISSING, Table
from gibbsmin.jobs.uncertainty_schema import CorrelationTable, read_uncertainty_table
from gibbsmin.jobs.validation import validated
from gibbsmin.units import read_site_pressure, shown


def _title(given: object) -> str:
    if not isinstance(given, str):
        raise InputError(f"found {shown(given)}", 'accepted is text, such as "Reformer outlet"')
    return given


def _streams(given: object) -> Mapping[str, Any]:
    accepted = "accepted is one table for each stream, such as [feed.gas]"
    if not isinstance(given, Mapping) or not given:
        raise InputError(f"found {shown(given)}" if given else "found nothing", accepted)
    for name, stream in given.items():
        if not isinstance(stream, Mapping):
            raise InputError(f"found {shown(stream)}", accepted, key=str(name))
    return given


def _stages(given: object) -> tuple[Any, ...]:
    if not isinstance(given, list | tuple) or not given:
        raise InputError(f"found {shown(given)}", "accepted are [[stage]] tables in order")
    return tuple(given)


def _axes(given: object) -> tuple[Any, ...]:
    if not isinstance(given, list | tuple):
        raise InputError(f"found {shown(given)}", "accepted are [[axis]] tables")
    return tuple(given)


def _correlations(given: object) -> tuple[Any, ...]:
    if not isinstance(given, list | tuple):
        raise InputError(f"found {shown(given)}", "accepted are [[correlation]] tables")
    return tuple(given)


Title = Annotated[str, BeforeValidator(_title)]
SitePressure = Annotated[float, BeforeValidator(read_site_pressure)]


class CaseTable(Table):
    """The whole file."""

    title: Title = ""
    site_pressure: SitePressure = STANDARD_ATMOSPHERE
    feed: Annotated[dict[str, FeedTable], BeforeValidator(_streams)] = MISSING
    outlet: OutletTable | None = None
    stage: Annotated[tuple[StageTable, ...], BeforeValidator(_stages)] = ()
    species: SpeciesTable = SpeciesTable()
    axis: Annotated[tuple[AxisTable, ...], BeforeValidator(_axes)] = ()
    onset: OnsetTable | None = None
    target: TargetTable | None = None
    sample: SampleTable | None = None
    uncertainty: Annotated[dict[str, Any], BeforeValidator(read_uncertainty_table)] = NOTHING
    correlation: Annotated[tuple[CorrelationTable, ...], BeforeValidator(_correlations)] = ()

    @model_validator(mode="after")
    def _outlet_or_stages(self) -> Self:
        if (self.outlet is None) == (not self.stage):
            raise InputError(
                "found both" if self.stage else "found neither",
                "accepted is one [outlet], or [[stage]] tables in order",
                key="outlet",
            )
        return self


def validate(tables: Mapping[str, Any]) -> CaseTable:
    """The case's tables, checked key by key.

    Raises
    ------
    InputError
        for the first fault, with its key; an unknown key comes before a missing one, which it
        was often meant to be.
    """
    try:
        site_pressure = read_site_pressure(tables.get("site_pressure", "101.325 kPa"))
    except InputError as error:
        raise error.at(key="site_pressure") from None
    return validated(CaseTable, tables, {"site_pressure": site_pressure})
