"""The case file's tables and keys.

Quantities become SI floats as they are read; species keep the names that the user wrote, until
the library resolves them.
"""

from __future__ import annotations

import difflib
from collections.abc import Mapping
from typing import Annotated, Any, Literal

from pydantic import (
    BaseModel,
    BeforeValidator,
    ConfigDict,
    Field,
    ValidationError,
    ValidationInfo,
    model_validator,
)

from gibbsmin.constants import REFERENCE_TEMPERATURE, STANDARD_ATMOSPHERE
from gibbsmin.errors import InputError
from gibbsmin.units import Unit, read_amount_unit, read_pressure, read_temperature, shown


def _pressure(given: object, info: ValidationInfo) -> float:
    context: Any = info.context
    return read_pressure(given, context["site_pressure"])


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


def _streams(given: object) -> Mapping[str, Any]:
    accepted = "accepted is one table for each stream, such as [feed.gas]"
    if not isinstance(given, Mapping) or not given:
        raise InputError(f"found {shown(given)}" if given else "found nothing", accepted)
    for name, stream in given.items():
        if not isinstance(stream, Mapping):
            raise InputError(f"found {shown(stream)}", accepted, key=str(name))
    return given


def _names(given: object) -> tuple[str, ...]:
    if not isinstance(given, list | tuple) or not all(isinstance(name, str) for name in given):
        raise InputError(
            f"found {_shown_list(given)}", 'accepted is a list of species, such as ["CH4", "H2O"]'
        )
    return tuple(given)


def _names_or_all(given: object) -> Literal["all"] | tuple[str, ...]:
    if given == "all":
        return "all"
    if not given or not isinstance(given, list | tuple):
        raise InputError(
            "found an empty list" if given == [] else f"found {shown(given)}",
            'accepted is "all" or a list of species, such as ["CH4", "H2O"]',
        )
    return _names(given)


def _shown_list(given: object) -> str:
    """The element that is no text, or the value itself."""
    if isinstance(given, list | tuple):
        return next(f"{shown(name)} in the list" for name in given if not isinstance(name, str))
    return shown(given)


Title = Annotated[str, BeforeValidator(_title)]
Temperature = Annotated[float, BeforeValidator(read_temperature)]
SitePressure = Annotated[float, BeforeValidator(read_pressure)]
Pressure = Annotated[float, BeforeValidator(_pressure)]
Names = Annotated[tuple[str, ...], BeforeValidator(_names)]
_MISSING: Any = Field(default=None, validate_default=True)
"""A key that must be there: its reader refuses None and says what it accepts."""


class Table(BaseModel):
    """A table of the case file: its own keys and no others."""

    model_config = ConfigDict(
        extra="forbid", frozen=True, strict=True, arbitrary_types_allowed=True
    )

    @model_validator(mode="before")
    @classmethod
    def _known_keys(cls, given: object) -> object:
        if not isinstance(given, Mapping):
            raise InputError(
                "found nothing" if given is None else f"found {shown(given)}",
                f"accepted is a table with {_listed(list(cls.model_fields))}",
            )
        for key in given:
            if key not in cls.model_fields:
                near = difflib.get_close_matches(str(key), cls.model_fields, n=1)
                hint = f' (nearest: "{near[0]}")' if near else ""
                raise UnknownKeyError(
                    f"found an unknown key{hint}",
                    f"accepted is {_listed(list(cls.model_fields), 'or')}",
                    key=str(key),
                )
        return given


class UnknownKeyError(InputError):
    """A key that the case file does not have."""


class FeedTable(Table):
    """``[feed.NAME]``: one stream."""

    temperature: Temperature = _MISSING
    pressure: Pressure = _MISSING
    unit: Annotated[Unit | None, BeforeValidator(read_amount_unit)] = None
    amounts: Annotated[Mapping[str, Any], BeforeValidator(_amounts)] = _MISSING


class OutletTable(Table):
    """``[outlet]``: the one stage."""

    temperature: Temperature = _MISSING
    pressure: Pressure = _MISSING
    boundary_temperature: Annotated[float | None, BeforeValidator(read_temperature)] = None
    surroundings_temperature: Temperature = REFERENCE_TEMPERATURE


class SpeciesTable(Table):
    """``[species]``: the candidates."""

    consider: Annotated[Literal["all"] | tuple[str, ...], BeforeValidator(_names_or_all)] = "all"
    leave_out: Names = ()
    inert: Names = ()


class CaseTable(Table):
    """The whole file."""

    title: Title = ""
    site_pressure: SitePressure = STANDARD_ATMOSPHERE
    feed: Annotated[dict[str, FeedTable], BeforeValidator(_streams)] = _MISSING
    outlet: OutletTable = _MISSING
    species: SpeciesTable = SpeciesTable()


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


def _listed(words: list[str], conjunction: str = "and") -> str:
    return f"{', '.join(words[:-1])} {conjunction} {words[-1]}" if len(words) > 1 else words[0]
