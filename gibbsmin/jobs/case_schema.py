"""The case file's tables and keys.

Quantities become SI floats as they are read; species keep the names that the user wrote, until
the library resolves them.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Annotated, Any, Literal, Self

from pydantic import BeforeValidator, ValidationError, model_validator

from gibbsmin.constants import STANDARD_ATMOSPHERE
from gibbsmin.errors import InputError
from gibbsmin.jobs.axis_schema import AxisTable
from gibbsmin.jobs.stage_schema import (
    NOTHING,
    OutletTable,
    SpeciesTable,
    StageTable,
    each,
    word,
)
from gibbsmin.jobs.table_schema import MISSING, Pressure, Table, Temperature, UnknownKeyError
from gibbsmin.units import (
    Measure,
    Unit,
    read_amount,
    read_amount_unit,
    read_pressure,
    read_share,
    read_temperature,
    shown,
)


def _title(given: object) -> str:
    if not isinstance(given, str):
        raise InputError(f"found {shown(given)}", 'accepted is text, such as "Reformer outlet"')
    return given


def _amounts(given: object) -> Mapping[str, Any]:
    if not isinstance(given, Mapping) or not given:
        raise InputError(
            "found an empty table" if given == {} else f"found {shown(given)}",
            "accepted is a table of species and amounts, such as { CH4 = 100, N2 = 2 }",
        )
    return given


def _lump(given: object) -> Mapping[str, float]:
    if not isinstance(given, Mapping) or not given:
        raise InputError(f"found {shown(given)}", "accepted is a table of species and shares")
    return {str(name): read_share(share) for name, share in given.items()}


def _steam_ratio(given: object) -> float:
    if isinstance(given, bool) or not isinstance(given, int | float) or not 0.0 <= given < 1e6:
        raise InputError(
            f"found {shown(given)}", "accepted is moles of steam to a mole of dry gas, such as 0.4"
        )
    return float(given)


def read_total(given: object) -> Measure:
    """The total of an analysed stream."""
    try:
        return read_amount(given)
    except InputError as error:
        raise error.at(key="total") from None


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


Title = Annotated[str, BeforeValidator(_title)]
SitePressure = Annotated[float, BeforeValidator(read_pressure)]


class FeedTable(Table):
    """``[feed.NAME]``: one stream."""

    temperature: Temperature = MISSING
    pressure: Pressure = MISSING
    unit: Annotated[Unit | None, BeforeValidator(read_amount_unit)] = None
    amounts: Annotated[Mapping[str, Any] | None, BeforeValidator(_amounts)] = None
    total: Annotated[Measure | None, BeforeValidator(read_amount)] = None
    analysis: Annotated[
        Mapping[str, float] | None, each(read_share, '{ CH4 = "92 %", N2 = "8 %" }')
    ] = None
    basis: Annotated[Literal["mole", "mass"], word("mole", "mass")] = "mole"
    lumps: Annotated[
        Mapping[str, Mapping[str, float]], each(_lump, '{ "C2+" = { C2H6 = 0.7, C3H8 = 0.3 } }')
    ] = NOTHING
    water_dew_point: Annotated[float | None, BeforeValidator(read_temperature)] = None
    steam_ratio: Annotated[float | None, BeforeValidator(_steam_ratio)] = None

    @model_validator(mode="after")
    def _amounts_or_analysis(self) -> Self:
        if self.amounts is None and self.analysis is None:
            try:
                _amounts(None)
            except InputError as error:
                raise error.at(key="amounts") from None
        if self.amounts is not None and self.analysis is not None:
            raise InputError(
                "found analysis beside amounts", "accepted is one of the two", key="analysis"
            )
        if self.analysis is None:
            for key in ("total", "lumps", "water_dew_point", "steam_ratio"):
                if getattr(self, key):
                    raise InputError(
                        f"found {key} without an analysis",
                        "accepted is an analysis with it, or amounts alone",
                        key=key,
                    )
        elif self.total is None:
            read_total(None)
        if self.water_dew_point is not None and self.steam_ratio is not None:
            raise InputError(
                "found steam_ratio beside water_dew_point",
                "accepted is one of the two",
                key="steam_ratio",
            )
        return self


class CaseTable(Table):
    """The whole file."""

    title: Title = ""
    site_pressure: SitePressure = STANDARD_ATMOSPHERE
    feed: Annotated[dict[str, FeedTable], BeforeValidator(_streams)] = MISSING
    outlet: OutletTable | None = None
    stage: Annotated[tuple[StageTable, ...], BeforeValidator(_stages)] = ()
    species: SpeciesTable = SpeciesTable()
    axis: Annotated[tuple[AxisTable, ...], BeforeValidator(_axes)] = ()

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
        site_pressure = read_pressure(tables.get("site_pressure", "101.325 kPa"))
    except InputError as error:
        raise error.at(key="site_pressure") from None
    try:
        return CaseTable.model_validate(tables, context={"site_pressure": site_pressure})
    except ValidationError as error:
        faults = [_fault(details) for details in error.errors()]
    raise next((fault for fault in faults if isinstance(fault, UnknownKeyError)), faults[0])


def _fault(details: Any) -> InputError:
    cause = details.get("ctx", {}).get("error")
    place = [str(part) for part in details["loc"]]
    if not isinstance(cause, InputError):
        return InputError(
            f"found {shown(details['input'])}",
            f"accepted is what the reader asks for: {details['msg']}",
            key=".".join(place),
        )
    cause.key = ".".join([*place, *filter(None, [cause.key])])
    return cause
