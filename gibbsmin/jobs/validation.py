"""Checks tables of a file against their schema, key by key."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any, TypeVar

from pydantic import BaseModel, ValidationError

from gibbsmin.errors import InputError
from gibbsmin.jobs.feed_parts import item_key
from gibbsmin.jobs.table_schema import UnknownKeyError
from gibbsmin.units import shown

Model = TypeVar("Model", bound=BaseModel)


def validated(
    model: type[Model], tables: Mapping[str, Any], context: Mapping[str, Any] | None = None
) -> Model:
    """The tables as a model.

    Raises
    ------
    InputError
        for the first fault, with its key; an unknown key comes before a missing one, which it
        was often meant to be.
    """
    try:
        return model.model_validate(tables, context=dict(context or {}))
    except ValidationError as error:
        faults = [_fault(details, tables) for details in error.errors()]
    raise next((fault for fault in faults if isinstance(fault, UnknownKeyError)), faults[0])


def _fault(details: Any, tables: Mapping[str, Any]) -> InputError:
    cause = details.get("ctx", {}).get("error")
    place = _place(details["loc"], tables)
    if not isinstance(cause, InputError):
        return InputError(
            f"found {shown(details['input'])}",
            f"accepted is what the reader asks for: {details['msg']}",
            key=place,
        )
    cause.key = ".".join(filter(None, [place, cause.key]))
    return cause


def _place(location: Sequence[str | int], tables: Any) -> str:
    """The dotted path of a fault; the tables of a list stand there by their names."""
    place, here = "", tables
    for part in location:
        try:
            here = here[part]
        except (LookupError, TypeError):
            here = None
        if isinstance(part, int):
            place = item_key(place, part, here.get("name") if isinstance(here, Mapping) else None)
        else:
            place = f"{place}.{part}".lstrip(".")
    return place
