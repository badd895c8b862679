"""What every table of a case file has in common: known keys, and readers of values."""

from __future__ import annotations

import difflib
from collections.abc import Mapping
from typing import Annotated, Any

from pydantic import BaseModel, BeforeValidator, ConfigDict, Field, ValidationInfo, model_validator

from gibbsmin.errors import InputError
from gibbsmin.units import read_pressure, read_temperature, shown


def site_pressure(info: ValidationInfo) -> float:
    """What gauge pressures of this file stand on, Pa."""
    context: Any = info.context
    return float(context["site_pressure"])


def _pressure(given: object, info: ValidationInfo) -> float:
    return read_pressure(given, site_pressure(info))


def read_names(given: object) -> tuple[str, ...]:
    """A list of species, as the user names them."""
    return read_texts(given, 'accepted is a list of species, such as ["CH4", "H2O"]')


def read_texts(given: object, accepted: str) -> tuple[str, ...]:
    """A list of texts."""
    if not isinstance(given, list | tuple) or not all(isinstance(name, str) for name in given):
        raise InputError(f"found {_shown_list(given)}", accepted)
    return tuple(given)


def _shown_list(given: object) -> str:
    """The element that is no text, or the value itself."""
    if isinstance(given, list | tuple):
        return next(f"{shown(name)} in the list" for name in given if not isinstance(name, str))
    return shown(given)


Temperature = Annotated[float, BeforeValidator(read_temperature)]
Pressure = Annotated[float, BeforeValidator(_pressure)]
Names = Annotated[tuple[str, ...], BeforeValidator(read_names)]
MISSING: Any = Field(default=None, validate_default=True)
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


def _listed(words: list[str], conjunction: str = "and") -> str:
    return f"{', '.join(words[:-1])} {conjunction} {words[-1]}" if len(words) > 1 else words[0]
